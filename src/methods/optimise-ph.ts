import type { IndicatorRecord, Knowledge } from "../constants/knowledge.ts";
import { bufferAmount } from "./buffers.ts";
import { type DevelopedStage } from "./develop.ts";
import { benchPH } from "./dye-uses.ts";
import { MOST_PH_CHANGE } from "./optimise-buffer.ts";
import { rowsFor } from "./masks.ts";
import type { StagePlan } from "./types.ts";
import type { ScannedRange } from "./working-range.ts";

/** Why a titration stands at its pH. */
export type PHReason =
  /** the published pH of the dye, or the one the search came to: no other is better by a real amount */
  | "published"
  | "as-planned"
  /** what would be better lets more interfere or precipitate */
  | "nothing-else-serves"
  /** another titration of the vessel, or the difference, hangs on it */
  | "another-hangs-on-it"
  /** less expanded uncertainty, or further from the edges of the working range */
  | "least-uncertainty"
  /** as good, with less acid or alkali than a bench would otherwise have to take */
  | "milder";

/** A pH that was looked at, and the expanded uncertainty there (relative, bias included). */
export interface PHLook {
  readonly pH: number;
  readonly expanded: number;
}

/** The pH that was chosen, where the search had put it, and what it was chosen over. */
export interface PHChoice {
  readonly chosen: PHLook;
  readonly start: PHLook;
  readonly why: PHReason;
  /** The best of the others that were looked at, by `weighted`; null where there was no other. */
  readonly next: PHLook | null;
}

/** To this a bench sets a pH with a meter (common practice), */
const SETTING_ERROR_PH = 0.1;
/** and so far a pH should lie from the edges of its working range: three setting errors, and the fall that is borne while titrating. */
const CLEAR_OF_EDGES_PH = 3 * SETTING_ERROR_PH + MOST_PH_CHANGE;
/** A gain below this part is not real, for an uncertainty is itself not known better (JCGM 100, E.4.3): a bench keeps to the pH it knows. */
const REAL_GAIN = 0.1;
/** Two figures of an uncertainty are given (JCGM 100, 7.2.6): up to this part more is not more. */
const SAME_UNCERTAINTY = 0.01;
/** Where dye, buffer and masks leave no more than this every tenth is looked at, */
const NARROW = 0.6;
/** and from this width of the working range a pH is rounded to a half unit where that is as good. */
const WIDE = 1;
const BENCH_STEP = 0.5;

const round = (pH: number): number => Math.round(pH * 10) / 10;

type Edges = Readonly<Record<"low" | "high", number>>;
/** How far the nearer edge of the working range is; negative outside. */
const distanceOf = (pH: number, { low, high }: Edges): number => Math.min(pH - low, high - pH);

/** Whether an edge of the working range is nearer to a pH than it should be, and nearer than to another pH. */
export const nearerEdge = (pH: number, other: number, range: Edges): boolean =>
  nearEdge(pH, range) && distanceOf(pH, range) < distanceOf(other, range) - 1e-6;
const nearEdge = (pH: number, range: Edges): boolean => distanceOf(pH, range) < CLEAR_OF_EDGES_PH - 1e-6;

/** Expanded uncertainty as the choice of a pH counts it: up to double the nearer an edge of the working range is. */
export function weighted({ pH, expanded }: PHLook, range: Edges): number {
  const distance = distanceOf(pH, range);
  return expanded * (1 + Math.max(0, CLEAR_OF_EDGES_PH - distance) / CLEAR_OF_EDGES_PH);
}

/**
 * The pH at which a titration is best done, all else kept: of the bench's half units (tenths where the range is narrow) inside the published
 * window of the dye, the buffer and the records of the masks, the one with the least expanded uncertainty, an edge of the working range nearer
 * than half a unit counting against it. The published pH stays, or else the planned one, where that gains less than a tenth.
 * Null where the requirement does not hold as planned.
 * @param serves whether nothing else speaks against the titration at a pH: asked of the preferred first, of as few as possible
 */
export function choosePH(
  stage: DevelopedStage,
  scanned: ScannedRange,
  serves: (look: PHLook) => boolean,
  knowledge: Knowledge,
): PHChoice | null {
  const at = (pH: number): PHLook | null => {
    const expanded = scanned.expandedAt(pH);
    return expanded === null ? null : { pH, expanded };
  };
  const start = at(stage.plan.pH);
  if (start === null) return null;
  const looks = candidates(stage, scanned, knowledge).flatMap((pH) => at(pH) ?? []);
  const cost = (look: PHLook): number => weighted(look, scanned);
  // What stands clear of the edges is not given up for a figure that is no better.
  const clear = !nearEdge(start.pH, scanned);
  const worthIt = looks.filter((l) => !clear || l.expanded <= (1 + SAME_UNCERTAINTY) * start.expanded);
  const wide = scanned.high - scanned.low >= WIDE;
  const [chosen, why] = preferred(stage, start, worthIt, cost, wide, knowledge).find(
    ([look]) => look === start || serves(look),
  )!;
  const others = [...looks, start].filter((look) => !sameForBench(look, chosen));
  const next = others.reduce<PHLook | null>(
    (least, look) => (least === null || cost(look) < cost(least) ? look : least),
    null,
  );
  return { chosen, start, why, next };
}

/** The pH values worth choosing, the preferred first; ends with the planned one. */
function preferred(
  { plan, skeleton }: DevelopedStage,
  start: PHLook,
  looks: readonly PHLook[],
  cost: (look: PHLook) => number,
  wide: boolean,
  knowledge: Knowledge,
): (readonly [PHLook, PHReason])[] {
  const byCost = [...looks].sort((a, b) => cost(a) - cost(b));
  const least = Math.min(cost(start), ...byCost.slice(0, 1).map(cost));
  const asGood = (look: PHLook): boolean => cost(look) <= (1 + REAL_GAIN) * least;
  const published = [start, ...looks].filter((look) => look.pH === skeleton.plan.pH && asGood(look));
  const onBench = isHalf(start.pH) || !wide ? [] : byCost.filter((look) => isHalf(look.pH) && asGood(look));
  const better = byCost.filter((look) => (1 + REAL_GAIN) * cost(look) < cost(start) && !sameForBench(look, start));
  return [
    ...published.map((look) => [look, "published"] as const),
    ...milder(plan, looks.filter(asGood), knowledge).map((look) => [look, "milder"] as const),
    ...onBench.map((look) => [look, "least-uncertainty"] as const),
    ...(asGood(start) ? [[start, "as-planned"] as const] : []),
    ...better.map((look) => [look, "least-uncertainty"] as const),
    [start, better.length > 0 ? "nothing-else-serves" : "as-planned"],
  ];
}

/** What differs by less than two settings of one pH do is no other pH. */
const sameForBench = (a: PHLook, b: PHLook): boolean => Math.abs(a.pH - b.pH) < 2 * SETTING_ERROR_PH - 1e-6;

const isHalf = (pH: number): boolean => Math.abs(2 * pH - Math.round(2 * pH)) < 1e-6;

/** What a bench would set, inside everything that stands on record for dye, buffer and masks. */
function candidates(stage: DevelopedStage, { low, high }: ScannedRange, knowledge: Knowledge): number[] {
  const { plan, skeleton } = stage;
  const buffer = knowledge.buffers.get(plan.buffer.id);
  const records = [skeleton.window, ...(buffer ? [buffer.workingPH] : [])];
  const [from, to] = whereMasked(
    plan,
    [Math.max(low, ...records.map(([first]) => first)), Math.min(high, ...records.map(([, last]) => last))],
    knowledge,
  );
  if (to < from) return [];
  const grid = (step: number): number[] => {
    const first = Math.ceil(from / step - 1e-6);
    const count = Math.floor(to / step + 1e-6) - first + 1;
    return Array.from({ length: Math.max(0, count) }, (_, i) => round((first + i) * step));
  };
  const onBench = to - from <= NARROW ? grid(SETTING_ERROR_PH) : grid(BENCH_STEP);
  return [...new Set([skeleton.plan.pH, ...onBench, benchPH([from, to])])]
    .filter((pH) => pH !== plan.pH && pH >= from && pH <= to && seenAsWell(stage, pH))
    .sort((a, b) => Math.abs(a - plan.pH) - Math.abs(b - plan.pH) || a - b);
}

/** The part of a range of pH, around the planned one, in which every mask of a plan is on record as it is there. */
function whereMasked(plan: StagePlan, [low, high]: readonly [number, number], knowledge: Knowledge): [number, number] {
  const onRecord = (pH: number, agent: string, ion: string): boolean => rowsFor(knowledge, agent, ion, pH).length > 0;
  const masks = plan.masking.flatMap(({ agent, masks: ions }) =>
    ions.filter((ion) => onRecord(plan.pH, agent, ion)).map((ion) => [agent, ion] as const),
  );
  const held = (pH: number): boolean => masks.every(([agent, ion]) => onRecord(pH, agent, ion));
  const edge = (direction: -1 | 1, last: number): number => {
    let pH = plan.pH;
    while (direction * (last - pH) > 1e-6) {
      const next = direction > 0 ? Math.min(last, pH + SETTING_ERROR_PH) : Math.max(last, pH - SETTING_ERROR_PH);
      if (!held(next)) return pH;
      pH = next;
    }
    return last;
  };
  return masks.length === 0 ? [low, high] : [edge(-1, low), edge(1, high)];
}

/** Whether the dye is seen at this pH as well as at the planned one. */
const seenAsWell = ({ plan, evaluation }: DevelopedStage, pH: number): boolean => {
  const { indicator } = evaluation.model;
  return indicator === null || contrastOf(indicator, pH) >= contrastOf(indicator, plan.pH);
};

const CONTRASTS = ["none", "poor", "good"];

/** Best contrast on record at a pH; -1 where none is. */
const contrastOf = (indicator: IndicatorRecord, pH: number): number =>
  Math.max(
    -1,
    ...indicator.colours.filter((c) => pH >= c.pH[0] && pH <= c.pH[1]).map((c) => CONTRASTS.indexOf(c.contrast)),
  );

/** Where more than the usual amount of a strong acid or alkali is planned: those that take less of it, within its usual amounts, the mildest first. */
function milder(plan: StagePlan, looks: readonly PHLook[], knowledge: Knowledge): PHLook[] {
  const buffer = knowledge.buffers.get(plan.buffer.id);
  if (buffer === undefined || buffer.kind === "pair") return [];
  const [least, most] = buffer.usualMolPerL;
  const planned = bufferAmount(buffer, plan.pH);
  if (planned <= Math.sqrt(least * most)) return [];
  const taken = (look: PHLook): number => bufferAmount(buffer, look.pH);
  return looks.filter((look) => taken(look) >= least && taken(look) < planned).sort((a, b) => taken(a) - taken(b));
}
