import { quantile } from "../numerics/quantile.ts";
import { correlation, ranks, varianceShare } from "../numerics/variance-share.ts";
import { wilsonInterval } from "../numerics/wilson.ts";
import type { PerturbedMethod } from "./perturbed-method.ts";
import { drawShifts, indexOf, type Parameter } from "./robustness-parameters.ts";
import type { StagePlan } from "./types.ts";

/** Draws `from` to `from + count - 1` of a method; per draw its results in turn, fractions, NaN where nothing was read. */
export interface Draws {
  readonly from: number;
  readonly count: number;
  readonly biasFraction: Float64Array;
  readonly expandedFraction: Float64Array;
  /** Draws in which a titration had to be evaluated as a whole. */
  readonly whole: number;
}

/** Makes draws of a method: each depends on the seed and its own number alone. */
export function drawMethod(method: PerturbedMethod, seed: number, from: number, count: number): Draws {
  const results = method.results;
  const biasFraction = new Float64Array(count * results).fill(Number.NaN);
  const expandedFraction = new Float64Array(count * results).fill(Number.NaN);
  const shifts = new Float64Array(method.parameters.length);
  let whole = 0;
  for (let i = 0; i < count; i++) {
    drawShifts(method.parameters, seed, from + i, shifts);
    const drawn = method.at(shifts);
    if (drawn.whole) whole++;
    drawn.results?.forEach((result, r) => {
      biasFraction[i * results + r] = result.biasFraction;
      expandedFraction[i * results + r] = result.expandedFraction;
    });
  }
  return { from, count, biasFraction, expandedFraction, whole };
}

/** How much one parameter matters: what share of the variance of the ranks goes with it alone, 0 to 1, and which way the error goes. */
export interface ParameterWeight {
  readonly parameter: Parameter;
  readonly shareOfUncertainty: number;
  readonly shareOfError: number;
  /** Sign of the change of the error with the parameter; 0 where it shows none. */
  readonly direction: -1 | 0 | 1;
}

/** What the draws of a method come to. */
export interface RobustnessSummary {
  readonly draws: number;
  readonly meeting: number;
  readonly probability: number;
  readonly interval: { readonly low: number; readonly high: number }; // 95 %
  readonly unread: number; // draws without an end point, or with the dye spoilt
  readonly whole: number;
  /** Per result: quantiles of error and expanded uncertainty at `PROBABILITIES`, fractions; null where no draw was read. */
  readonly results: readonly ({ readonly bias: readonly number[]; readonly expanded: readonly number[] } | null)[];
  readonly weights: readonly ParameterWeight[]; // what matters most first
}

/** Where quantiles are given: the tails one by one, the middle in steps of a hundredth. */
export const PROBABILITIES: readonly number[] = [0.005, ...Array.from({ length: 99 }, (_, i) => (i + 1) / 100), 0.995];
/** How many parameters are named. */
const NAMED = 12;
/** Shares below this are not worth a line; nor those that chance gives: three standard deviations of a share that is none, times the draws. */
const LEAST_SHARE = 0.005;
const CHANCE = 20;
/** Correlations below this many times 1/sqrt(draws) show no direction. */
const SEEN_DIRECTION = 3;

/**
 * Sums up draws (chunks in any order, none twice).
 * @param results how many results the method gives
 * @param requirementFraction relative expanded uncertainty that every result has to keep
 */
export function summarise(
  chunks: readonly Draws[],
  parameters: readonly Parameter[],
  results: number,
  seed: number,
  requirementFraction: number,
): RobustnessSummary {
  const ordered = [...chunks].sort((a, b) => a.from - b.from);
  const draws = ordered.reduce((n, c) => n + c.count, 0);
  const joined = (pick: (c: Draws) => Float64Array): Float64Array => {
    const all = new Float64Array(draws * results);
    let at = 0;
    for (const chunk of ordered) {
      all.set(pick(chunk), at);
      at += pick(chunk).length;
    }
    return all;
  };
  const bias = joined((c) => c.biasFraction);
  const expanded = joined((c) => c.expandedFraction);
  const worst = new Float64Array(draws); // of each draw its largest expanded uncertainty
  const errorOfWorst = new Float64Array(draws);
  let meeting = 0;
  let unread = 0;
  for (let i = 0; i < draws; i++) {
    let at = i * results;
    for (let r = at + 1; r < (i + 1) * results; r++) if (expanded[r]! > expanded[at]!) at = r;
    worst[i] = expanded[at]!;
    errorOfWorst[i] = bias[at]!;
    if (Number.isNaN(worst[i]!)) unread++;
    else if (worst[i]! <= requirementFraction) meeting++;
  }
  const column = (of: Float64Array, result: number): Float64Array =>
    Float64Array.from({ length: draws }, (_, i) => of[i * results + result]!).filter(Number.isFinite);
  const quantiles = (values: Float64Array): number[] => PROBABILITIES.map((p) => quantile(values, p));
  return {
    draws,
    meeting,
    probability: meeting / draws,
    interval: wilsonInterval(meeting, draws),
    unread,
    whole: ordered.reduce((n, c) => n + c.whole, 0),
    results: Array.from({ length: results }, (_, r) =>
      unread === draws ? null : { bias: quantiles(column(bias, r)), expanded: quantiles(column(expanded, r)) },
    ),
    weights: weightsOf(ordered, parameters, seed, worst, errorOfWorst),
  };
}

/** The parameters that matter, those first that move the uncertainty most; their deviates are drawn again from the seed. */
function weightsOf(
  chunks: readonly Draws[],
  parameters: readonly Parameter[],
  seed: number,
  expanded: Float64Array,
  error: Float64Array,
): ParameterWeight[] {
  const draws = expanded.length;
  const byParameter = parameters.map(() => new Float64Array(draws));
  const shifts = new Float64Array(parameters.length);
  const least = Math.max(LEAST_SHARE, CHANCE / draws);
  const [expandedRanks, errorRanks] = [ranks(expanded), ranks(error)];
  let at = 0;
  for (const { from, count } of chunks)
    for (let k = from; k < from + count; k++, at++) {
      drawShifts(parameters, seed, k, shifts);
      for (let p = 0; p < parameters.length; p++) byParameter[p]![at] = shifts[p]!;
    }
  return parameters
    .map((parameter, p): ParameterWeight => {
      const slope = correlation(byParameter[p]!, errorRanks);
      return {
        parameter,
        shareOfUncertainty: varianceShare(byParameter[p]!, expandedRanks),
        shareOfError: varianceShare(byParameter[p]!, errorRanks),
        direction: Math.abs(slope) < SEEN_DIRECTION / Math.sqrt(draws) ? 0 : slope > 0 ? 1 : -1,
      };
    })
    .filter((w) => Math.max(w.shareOfUncertainty, w.shareOfError) >= least)
    .sort((a, b) => b.shareOfUncertainty - a.shareOfUncertainty || b.shareOfError - a.shareOfError)
    .slice(0, NAMED);
}

/** The axes of a map: pH of one titration against the amount of its most critical reagent. */
export interface MapAxes {
  readonly stage: number;
  readonly pH: readonly number[];
  readonly reagent: string;
  /** Amounts of the reagent relative to the plan. */
  readonly ratios: readonly number[];
}

const MAP_COLUMNS = 25;
const MAP_PH_STEP = 0.1;
const MAP_ROWS = 13;
/** Amounts from a quarter to four times the planned, three steps a doubling. */
const ROWS_PER_DOUBLING = 3;

/**
 * Chooses what a map shows: the titration with the largest uncertainty, and that of its reagents whose halving or doubling changes the
 * uncertainty most. Null where it has none or nothing was read.
 */
export function mapAxes(method: PerturbedMethod, plans: readonly StagePlan[]): MapAxes | null {
  const none = new Float64Array(method.parameters.length);
  const nominal = method.at(none).results;
  if (nominal === null) return null;
  const stage = method.expandedOfTitrations.indexOf(Math.max(...method.expandedOfTitrations));
  const plan = plans[stage]!;
  const own = new Set([
    plan.buffer.id,
    ...(plan.indicator ? [plan.indicator.id] : []),
    ...[...plan.masking.map((m) => m.agent), ...plan.auxiliary.map((a) => a.id)],
  ]);
  const expandedAt = (index: number, shift: number): number => {
    const shifts = none.slice();
    shifts[index] = shift;
    return worstOf(method.at(shifts).results);
  };
  let critical: { readonly reagent: string; readonly effect: number } | null = null;
  for (const [index, { kind, id }] of method.parameters.entries()) {
    if (kind !== "reagent" || !own.has(id)) continue;
    const effect = Math.max(...[-0.5, 1].map((shift) => Math.abs(expandedAt(index, shift) - worstOf(nominal))));
    if (critical === null || effect > critical.effect) critical = { reagent: id, effect };
  }
  if (critical === null) return null;
  const middle = (MAP_COLUMNS - 1) / 2;
  return {
    stage,
    pH: Array.from({ length: MAP_COLUMNS }, (_, i) => Math.round(100 * (plan.pH + (i - middle) * MAP_PH_STEP)) / 100),
    reagent: critical.reagent,
    ratios: Array.from({ length: MAP_ROWS }, (_, i) => 2 ** ((i - (MAP_ROWS - 1) / 2) / ROWS_PER_DOUBLING)),
  };
}

/** One row of a map: the largest expanded uncertainty of the results at each pH, fractions; null where nothing is read. */
export function mapRow(
  method: PerturbedMethod,
  plans: readonly StagePlan[],
  axes: MapAxes,
  row: number,
): (number | null)[] {
  const index = indexOf(method.parameters);
  const shifts = new Float64Array(method.parameters.length);
  shifts[index.get(`reagent ${axes.reagent}`)!] = axes.ratios[row]! - 1;
  return axes.pH.map((pH) => {
    shifts[index.get(`pH ${axes.stage}`)!] = pH - plans[axes.stage]!.pH;
    const value = worstOf(method.at(shifts).results);
    return Number.isFinite(value) ? value : null;
  });
}

const worstOf = (results: readonly { readonly expandedFraction: number }[] | null): number =>
  results === null ? Number.POSITIVE_INFINITY : Math.max(...results.map((r) => r.expandedFraction));
