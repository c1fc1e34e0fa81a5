import { openEngine } from "../../src/main.ts";
import { practiceCases } from "../practice/cases.ts";
import type { LooseBrief } from "../recommendation/invented-briefs.ts";
import { RELATIONS } from "../recommendation/metamorphic.ts";
import type { Campaign } from "./campaign.ts";
import { randomBrief } from "./random-brief.ts";

const GENERATED = 60;
const FAULTS_SHOWN = 40;

/** Relations between answers over every brief that is at hand and over generated ones. */
export const metamorphicCampaign: Campaign = {
  name: "metamorphic",
  about: `${RELATIONS.length} relations between answers to related briefs, over the acceptance briefs and ${GENERATED} generated ones (an hour or two)`,
  run: async (seed) => {
    const briefs = practiceCases().map((testCase) => testCase.brief as unknown as LooseBrief);
    for (let index = 0; index < GENERATED; index++) briefs.push(randomBrief(seed, index));
    return runMetamorphic(briefs);
  },
};

/** Figures of a run. */
export interface MetamorphicFigures {
  readonly briefs: number;
  readonly answers: number;
  readonly withMethods: number;
  readonly broken: Readonly<Record<string, number>>; // briefs that break a relation, by its name
  readonly faults: readonly string[]; // the first of them
}

/** Holds every relation against every brief; an answer that throws breaks the relation that asked for it. */
export async function runMetamorphic(
  briefs: readonly LooseBrief[],
): Promise<{ readonly figures: Readonly<Record<string, unknown>> & MetamorphicFigures; readonly holds: boolean }> {
  const engine = await openEngine();
  let answers = 0;
  let withMethods = 0;
  const answer = (brief: unknown) => {
    answers++;
    return engine.recommend(brief);
  };
  const broken: Record<string, number> = Object.fromEntries(RELATIONS.map(({ name }) => [name, 0]));
  const faults: string[] = [];
  for (const brief of briefs) {
    const document = await answer(brief);
    withMethods += Number(document.methods.length > 0);
    for (const relation of RELATIONS) {
      const found = await relation
        .faults(brief, answer, document)
        .catch((error: unknown) => [`throws ${String(error)}`]);
      if (found.length === 0) continue;
      broken[relation.name] = broken[relation.name]! + 1;
      faults.push(`${brief.title}: ${relation.name}: ${found.slice(0, 3).join("; ").slice(0, 600)}`);
    }
  }
  const figures = { briefs: briefs.length, answers, withMethods, broken, faults: faults.slice(0, FAULTS_SHOWN) };
  return { figures, holds: faults.length === 0 && withMethods > briefs.length / 2 };
}
