import {
  type Recommendation,
  type RecommendedMethod,
  recommendationSchema,
} from "../../src/recommendation/contract.ts";
import { asking, beside, halved, inSmallUnits, reversed, without } from "./bend-brief.ts";
import type { LooseBrief } from "./invented-briefs.ts";
import { differencesOf } from "./same-answer.ts";

/** Answers a brief. */
export type Answer = (brief: unknown) => Promise<Recommendation>;

/** A relation that must hold between answers to related briefs: what broke it, in words; empty where it holds. */
export interface Relation {
  readonly name: string;
  readonly faults: (brief: LooseBrief, answer: Answer, document: Recommendation) => Promise<readonly string[]>;
}

/** Another way to write the same numbers may move the last digit shown, no more. */
const SAME = { biasPoints: 1e-3 };
/** What one inert millimole may move by its ionic strength. */
const INERT = { biasPoints: 0.05 };

/** Whether the brief names this ion already. */
const names = (document: Recommendation, ion: string): boolean =>
  [...document.brief.analytes.map((row) => row.ion), ...document.brief.matrix.map((row) => row.component)].includes(
    ion,
  );

/** Every reagent that a method uses. */
export const reagentIdsOf = (method: RecommendedMethod): string[] => [
  ...new Set([
    method.titrant.id,
    ...(method.backTitrant ? [method.backTitrant.id] : []),
    ...method.stages.flatMap((stage) => [
      ...(stage.titrant ? [stage.titrant.id] : []),
      ...(stage.backTitrant ? [stage.backTitrant.id] : []),
      ...(stage.indicator ? [stage.indicator.id] : []),
      stage.buffer.id,
      ...stage.masking.map((step) => step.agent).filter((agent) => agent !== "hydroxide"),
      ...[...stage.auxiliary, ...stage.added].map((added) => added.id),
    ]),
  ]),
];

const VERDICT_ORDER = { "not-fit": 0, "fit-with-reservations": 1, fit: 1 } as const;

/** The relations, each at the cost of one or two more answers. */
export const RELATIONS: readonly Relation[] = [
  {
    name: "the same brief has the same answer, to the letter",
    faults: async (brief, answer, document) =>
      JSON.stringify(await answer(brief)) === JSON.stringify(document) ? [] : ["the second answer differs"],
  },
  {
    name: "the order of the rows says nothing",
    faults: async (brief, answer, document) => differencesOf(document, await answer(reversed(brief)), SAME),
  },
  {
    name: "the unit says nothing",
    faults: async (brief, answer, document) => differencesOf(document, await answer(inSmallUnits(brief)), SAME),
  },
  {
    name: "two halves of a row say what the row says, with a note",
    faults: async (brief, answer, document) => {
      const split = await answer(halved(brief));
      const noted = (brief.matrix ?? []).length === 0 || split.notes.length > document.notes.length;
      return [...differencesOf(document, split, SAME), ...(noted ? [] : ["no note of what was added"])];
    },
  },
  {
    name: "1 mmol/L of K+ and NO3- changes no ranking and no bias",
    faults: async (brief, answer, document) => {
      const inert = ["K+", "NO3-"].filter((ion) => !names(document, ion));
      const salted = inert.reduce((bent, ion) => beside(bent, ion, 1e-3), brief);
      return differencesOf(document, await answer(salted), { ...INERT, leaveOut: inert });
    },
  },
  {
    name: "a component at 1e-12 mol/L is as good as absent",
    faults: async (brief, answer, document) => {
      const trace = ["Cu2+", "Mn2+", "Fe3+", "Zn2+", "Ni2+", "Pb2+"].find((ion) => !names(document, ion))!;
      return differencesOf(document, await answer(beside(brief, trace, 1e-12)), { ...SAME, leaveOut: [trace] });
    },
  },
  {
    name: "what is forbidden is never proposed",
    faults: async (brief, answer, document) => {
      const own = new Set(document.brief.analytes.map((row) => row.ion));
      // Any reagent of the first method, another one for every brief; the analyte is in the vessel whatever is forbidden.
      const used = document.methods
        .slice(0, 1)
        .flatMap(reagentIdsOf)
        .filter((id) => !own.has(id));
      const forbidden = used[brief.title.length % used.length];
      if (forbidden === undefined) return [];
      const { methods } = await answer(without(brief, forbidden));
      return methods
        .filter((method) => reagentIdsOf(method).includes(forbidden))
        .map((method) => `${method.id} uses ${forbidden}`);
    },
  },
  {
    name: "asking for more turns nothing that does not fit into something that does",
    faults: async (brief, answer, document) => {
      const strict = await answer(asking(brief, 0.5));
      return VERDICT_ORDER[strict.verdict] > VERDICT_ORDER[document.verdict]
        ? [`${document.verdict} becomes ${strict.verdict} at half the requirement`]
        : [];
    },
  },
  {
    name: "the answer keeps the contract and its own figures",
    faults: (_brief, _answer, document) => Promise.resolve(ownFaults(document)),
  },
];

/** What the causes and the terms of a method add up to, against its bias and uncertainty; figures are printed to 1e-4 % a line. */
function figureFaults({ predicted, budget, uncertaintyBudget }: RecommendedMethod): string[] {
  const faults: string[] = [];
  const near = (what: string, sum: number, figure: number, slack: number): void => {
    if (!(Math.abs(sum - figure) <= slack)) faults.push(`${what}: ${sum} against ${figure}`);
  };
  for (const { determines, biasBySource, biasPercent, biasUncancelledPercent } of predicted.perAnalyte) {
    const slack = 1e-4 * (2 + biasBySource.length);
    const sum = (part: (cause: (typeof biasBySource)[number]) => number): number =>
      biasBySource.reduce((total, cause) => total + part(cause), 0);
    near(
      `causes of ${determines.join("+")}`,
      sum((c) => c.percent),
      biasPercent,
      slack,
    );
    near(
      `causes before of ${determines.join("+")}`,
      sum((c) => c.uncancelledPercent),
      biasUncancelledPercent,
      slack,
    );
  }
  const terms = Math.hypot(...uncertaintyBudget.map((t) => t.percent));
  const rows = Math.hypot(...budget.rows.map((r) => r.percent));
  near("terms", terms, budget.combinedPercent, 0.01 * budget.combinedPercent);
  near("quantities", rows, budget.combinedPercent, 0.01 * budget.combinedPercent);
  const expanded = budget.coverageFactor * budget.combinedPercent + Math.abs(predicted.biasPercent);
  near("expanded", expanded, predicted.relativeExpandedUncertaintyPercent, 2e-3 * expanded);
  return faults;
}

/** What an answer says against itself: schema, ranks, targets outside their range, verdicts against figures, sums against their parts, presence above the limit. */
export function ownFaults(document: Recommendation): string[] {
  const parsed = recommendationSchema.safeParse(JSON.parse(JSON.stringify(document)));
  const out = parsed.success ? [] : parsed.error.issues.map((issue) => `schema: ${issue.path.join(".")}`);
  const { relativeExpandedUncertaintyPercent: asked } = document.brief.requirement;
  document.methods.forEach((method, i) => {
    const say = (what: string): void => void out.push(`method ${i + 1}: ${what}`);
    const expanded = method.predicted.relativeExpandedUncertaintyPercent;
    if (method.rank !== i + 1) say(`rank ${method.rank}`);
    for (const { pH } of method.stages)
      if (pH.target < pH.low || pH.target > pH.high) say(`pH ${pH.target} outside ${pH.low} to ${pH.high}`);
    if (method.meetsRequirement !== expanded <= asked && Math.abs(expanded / asked - 1) > 1e-3)
      say(`meets ${method.meetsRequirement} at ${expanded} %`);
    if ((method.verdict === "not-fit") === method.meetsRequirement)
      say(`${method.verdict}, meets ${method.meetsRequirement}`);
    for (const fault of figureFaults(method)) say(fault);
    for (const row of method.tolerance) {
      if (method.meetsRequirement && row.withMasking && row.limitMolPerL < row.presentMolPerL * 0.99)
        say(`${row.component} at ${row.presentMolPerL} above its limit ${row.limitMolPerL}`);
    }
  });
  if (document.verdict !== (document.methods[0]?.verdict ?? "not-fit")) out.push(`verdict ${document.verdict}`);
  return out;
}
