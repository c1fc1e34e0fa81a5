import { type Engine, openEngine } from "../../src/main.ts";
import { recommend } from "../../src/recommendation/recommend.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { robustnessWork, workOutDraws } from "../../src/recommendation/robustness.ts";
import { summarise } from "../../src/methods/robustness.ts";
import type { Campaign, CampaignOptions, CampaignReport } from "./campaign.ts";
import { acceptanceCases, workThrough } from "./work-list.ts";

/** How often the first method of a brief meets its requirement, after few draws and after ten times as many. */
export const robustnessCampaign: Campaign = {
  name: "robustness",
  about:
    "probability of meeting the requirement after 1,000 and after 10,000 draws, over acceptance briefs whose method is compiled",
  run: async (options) => {
    const { from, count, share } = options;
    const briefs = acceptanceCases(options)
      .slice(from, count === null ? undefined : from + count)
      .filter((_, i) => i % share.parts === share.part - 1)
      .map(({ id, brief }) => ({ id, brief }));
    return runRobustnessCampaign(briefs, { few: 1000, many: 10_000 }, options);
  },
};

/** The two probabilities of one method; null where it is not compiled, or the brief has none. */
interface Converged {
  readonly few: number;
  readonly many: number;
  readonly inside: boolean; // the second lies in the 95 % interval of the first
  readonly microsecondsPerDraw: number;
}

/** Percentage points by which the two may differ. */
const BOUND = 0.02;
/** The campaign is to be made of at least this many methods. */
const LEAST_METHODS = 10;

/** Draws the first method of each brief `few` and `many` times; the first of the many are the few. */
export async function runRobustnessCampaign(
  briefs: readonly { readonly id: string; readonly brief: unknown }[],
  draws: { readonly few: number; readonly many: number },
  options: Pick<CampaignOptions, "seed" | "out" | "print">,
  least = LEAST_METHODS,
): Promise<CampaignReport> {
  const engine = await openEngine();
  const items = briefs.map(({ id }, position) => ({ position, id: `${id} seed ${options.seed} draws ${draws.many}` }));
  const done = await workThrough<Converged | null>(
    items,
    options,
    async (index) => converge(briefs[index]!.brief, draws, options.seed, engine),
    (error) => {
      throw error;
    },
  );
  const compiled = done.flatMap(({ id, result }) => (result === null ? [] : [{ id: id.split(" ")[0]!, ...result }]));
  const apart = compiled.map(({ few, many }) => Math.abs(few - many));
  const worst = Math.max(0, ...apart);
  return {
    figures: {
      briefs: done.length,
      methods: compiled.length,
      worstDifference: worst,
      withinTwoPoints: apart.filter((d) => d <= BOUND).length,
      insideInterval: compiled.filter(({ inside }) => inside).length,
    },
    holds: compiled.length >= least && worst <= BOUND,
    lines: compiled.map(
      ({ id, few, many, microsecondsPerDraw }) =>
        `${id}: ${(100 * few).toFixed(1)} % and ${(100 * many).toFixed(1)} %, ${microsecondsPerDraw.toFixed(0)} us a draw`,
    ),
  };
}

async function converge(
  brief: unknown,
  { few, many }: { readonly few: number; readonly many: number },
  seed: number,
  { knowledge, rules }: Engine,
): Promise<Converged | null> {
  const document = await recommend(readBrief(brief, knowledge), knowledge, rules);
  if (document.methods.length === 0) return null;
  const { work } = robustnessWork(document, undefined, { draws: many, seed }, knowledge);
  const first = workOutDraws({ work, from: 0, count: few }, knowledge);
  if (first.notCompiled.some((why) => why !== null)) return null;
  const started = performance.now();
  const rest = workOutDraws({ work, from: few, count: many - few }, knowledge);
  const microsecondsPerDraw = (1000 * (performance.now() - started)) / (many - few);
  const requirement = work.task.requirementPercent / 100;
  const sum = (answers: readonly (typeof first)[]) =>
    summarise(
      answers.map((a) => a.draws),
      first.parameters,
      first.results,
      seed,
      requirement,
    );
  const [after, final] = [sum([first]), sum([first, rest])];
  const { low, high } = after.interval;
  return {
    few: after.probability,
    many: final.probability,
    inside: final.probability >= low && final.probability <= high,
    microsecondsPerDraw,
  };
}
