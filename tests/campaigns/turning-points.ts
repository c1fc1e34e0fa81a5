import { type Engine, openEngine } from "../../src/main.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { planOf } from "../../src/recommendation/calculate-series.ts";
import type { Brief, Recommendation, TurningPoint, TurningPoints } from "../../src/recommendation/contract.ts";
import { kindOf } from "../../src/recommendation/ranking.ts";
import { standingOf } from "../../src/recommendation/standing.ts";
import { turningPoints } from "../../src/recommendation/turning-points.ts";
import type { Campaign, CampaignOptions, CampaignReport } from "./campaign.ts";
import { randomBrief } from "./random-brief.ts";

/** Turning points of invented briefs, each verified by answering the changed brief, and the brief with nine tenths of the change. */
export const turningCampaign: Campaign = {
  name: "turning",
  about: "turning points verified by answering the changed brief",
  run: runTurning,
};

/** What the check of one brief found. */
export interface TurningCheck {
  readonly found: TurningPoints;
  readonly turned: number; // points at which the whole answer to the changed brief is another
  readonly still: number; // of these, points where nine tenths of the change leave it as it is
  readonly broken: readonly string[];
}

/** First method and verdict of a whole answer, as one text. */
function standingText({ methods, verdict }: Recommendation, engine: Engine): string {
  const first = methods[0];
  if (!first) return verdict;
  const stages = first.stages.map((stage) => ({ plan: planOf(first, stage, engine.knowledge) }));
  return `${verdict} ${kindOf({ mode: first.mode, stages })}`;
}

/** The brief with one number of a turning point set to another value. */
export function withValue(brief: Brief, { what, subject }: TurningPoint, value: number): Brief {
  if (what === "requirement") return { ...brief, requirement: { relativeExpandedUncertaintyPercent: value } };
  if (what === "analyte-level")
    return {
      ...brief,
      analytes: brief.analytes.map((a) =>
        a.ion === subject ? { ...a, concentration: { value: a.concentration.value * value, unit: "mol/L" } } : a,
      ),
    };
  return {
    ...brief,
    matrix: brief.matrix.map((m) =>
      m.component === subject ? { ...m, concentration: { value: m.concentration.value * value, unit: "mol/L" } } : m,
    ),
  };
}

/** Finds the turning points of a brief and answers each changed brief in full, from its JSON. */
export async function checkTurning(brief: unknown, engine: Engine): Promise<TurningCheck> {
  const { knowledge, rules } = engine;
  const found = await turningPoints(
    readBrief(brief, knowledge),
    (task) => standingOf(task, knowledge, rules),
    knowledge,
    { together: 1 },
  );
  const answer = async (changed: unknown): Promise<string> =>
    standingText(await engine.recommend(JSON.parse(JSON.stringify(changed))), engine);
  const before = await answer(brief);
  let turned = 0;
  let still = 0;
  const broken: string[] = [];
  for (const point of found.points) {
    const name = `${point.what} ${point.subject} ${point.direction ?? ""}`.trim();
    if ((await answer(point.brief)) === before) broken.push(`${name}: the changed brief has the same answer`);
    else turned++;
    if (point.from === null || point.to === null) {
      still++;
      continue;
    }
    // A tenth less of the change than the point says, written into the brief by its ratio.
    const less = point.from + 0.9 * (point.to - point.from);
    const value = point.what === "requirement" || point.from === 0 ? less : less / point.from;
    if ((await answer(withValue(found.brief, point, value))) === before) still++;
    else broken.push(`${name}: nine tenths of the change turn too`);
  }
  return { found, turned, still, broken };
}

async function runTurning({ seed, from, count, print }: CampaignOptions): Promise<CampaignReport> {
  const engine = await openEngine();
  const figures = { briefs: 0, points: 0, turned: 0, still: 0, unsettled: 0, runs: 0 };
  const broken: string[] = [];
  for (let index = from; index < from + (count ?? 20); index++) {
    const brief = randomBrief(seed, index);
    const check = await checkTurning(brief, engine);
    figures.briefs++;
    figures.points += check.found.points.length;
    figures.turned += check.turned;
    figures.still += check.still;
    figures.unsettled += check.found.unmoved.filter((u) => !u.settled).length;
    figures.runs += check.found.runs;
    broken.push(...check.broken.map((line) => `${brief.title}: ${line}`));
    print(
      `${brief.title}: ${check.found.points.length} points in ${check.found.runs} recommendations, ${check.broken.length} broken`,
    );
  }
  return { figures, holds: broken.length === 0, lines: broken };
}
