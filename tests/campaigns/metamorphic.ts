import { openEngine } from "../../src/main.ts";
import { marginOf } from "../recommendation/margin.ts";
import { type Answer, RELATIONS } from "../recommendation/metamorphic.ts";
import type { Campaign, CampaignOptions, CampaignReport } from "./campaign.ts";
import { workList, workThrough, type WorkItem } from "./work-list.ts";

/** Relations between answers over every acceptance brief and over generated ones. */
export const metamorphicCampaign: Campaign = {
  name: "metamorphic",
  about: `${RELATIONS.length} relations between answers to related briefs`,
  run: async (options) => runMetamorphic(workList(options), options),
};

/** A relation that a brief breaks: in what, and how near the ranking was where that is what differs. */
interface Broken {
  readonly relation: string;
  readonly faults: readonly string[];
  readonly margin: readonly string[];
}

interface Held {
  readonly answers: number;
  readonly withMethods: boolean;
  readonly broken: readonly Broken[];
}

/**
 * Holds every relation against every brief; an answer that throws breaks the relation that asked for it.
 * @param answerer who answers; null: the engine
 */
export async function runMetamorphic(
  items: readonly WorkItem[],
  options: Pick<CampaignOptions, "out" | "print">,
  answerer: Answer | null = null,
): Promise<CampaignReport> {
  const recommend = answerer ?? (await openEngine()).recommend;
  const print = (item: WorkItem, { broken }: Held): void => {
    for (const { relation, faults, margin } of broken)
      options.print(
        `BROKEN ${item.id} (${item.brief.title}): ${relation}: ${[...faults.slice(0, 4), ...margin].join("; ")}`,
      );
  };
  const done = await workThrough<Held>(
    items,
    options,
    async (index) => {
      const held = await holdAll(items[index]!, recommend);
      print(items[index]!, held);
      return held;
    },
    (error) => ({
      answers: 1,
      withMethods: false,
      broken: [{ relation: "answers", faults: [String(error)], margin: [] }],
    }),
  );
  const broken: Record<string, number> = Object.fromEntries(RELATIONS.map(({ name }) => [name, 0]));
  for (const { relation } of done.flatMap(({ result }) => result.broken))
    broken[relation] = (broken[relation] ?? 0) + 1;
  const lines = done.flatMap(({ id, result }) =>
    result.broken.map(
      ({ relation, faults, margin }) => `${id}: ${relation}: ${[...faults.slice(0, 3), ...margin].join("; ")}`,
    ),
  );
  const figures = {
    briefs: done.length,
    answers: done.reduce((sum, { result }) => sum + result.answers, 0),
    withMethods: done.filter(({ result }) => result.withMethods).length,
    broken,
  };
  return { figures, holds: lines.length === 0 && figures.withMethods > done.length / 2, lines };
}

async function holdAll({ brief }: WorkItem, recommend: Answer): Promise<Held> {
  const document = await recommend(brief);
  let answers = 1;
  const broken: Broken[] = [];
  for (const { name, faults } of RELATIONS) {
    let last = document;
    const answer: Answer = async (bent) => {
      answers++;
      last = await recommend(bent);
      return last;
    };
    const found = await faults(brief, answer, document).catch((error: unknown) => [`throws ${String(error)}`]);
    if (found.length > 0)
      broken.push({ relation: name, faults: found.map((f) => f.slice(0, 400)), margin: marginOf(document, last) });
  }
  return { answers, withMethods: document.methods.length > 0, broken };
}
