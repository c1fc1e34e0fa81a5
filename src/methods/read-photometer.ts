import type { ComponentId, Knowledge, PhotometricRecord } from "../constants/knowledge.ts";
import type { Criterion } from "./criterion.ts";
import { firstCrossing, nearCrossing } from "./end-point-search.ts";
import { dyeComponentOf } from "./solution.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import { detourRecord } from "./way-round.ts";
import { countedIn } from "./types.ts";

/** A straight line, signal against volume in L. */
export interface Branch {
  readonly slopePerL: number;
  readonly intercept: number;
}

/** What a photometer shows of a titration. */
export interface PhotometricReading {
  readonly wavelengthNm: readonly [number, number] | null; // where practice measures; null where nothing is on record
  /** The branch in which the colour changes, and the level one beside the end point. */
  readonly steep: Branch;
  readonly level: Branch;
  /** Solid that lies in the vessel at the end point, mol/L of its formula. */
  readonly turbidMolPerL: number;
}

export type PhotometricFault = "no-colour" | "no-break" | "dye-held";

export interface ReadByPhotometer {
  readonly reading: PhotometricReading | null;
  readonly why: PhotometricFault | null;
  readonly volumeL: number;
  readonly bandL: readonly [number, number];
  readonly bandPM: number;
}

/** Half-width of an extrapolated photometric break, pM (Flaschka & Sawyer, Talanta 1961, 8, 521, and practice, recalled: 0.03 to 0.1). */
export const PHOTOMETRIC_BAND_PM = 0.05;
/** A photometer needs a fifth to a tenth of the dye that an eye needs (practice, recalled). */
export const PHOTOMETRIC_DYE_PART = 0.2;

/** The record of the dye, or of the coloured complex that the titration itself makes. */
export function photometricRecord(
  knowledge: Knowledge,
  plan: Pick<StageModel["plan"], "indicator" | "titrant" | "determines" | "detour">,
): PhotometricRecord | null {
  const dye = plan.indicator === null ? null : dyeComponentOf(plan.indicator.id);
  return (
    knowledge.photometric.find((r) =>
      dye === null
        ? r.complex !== null && r.complex.titrant === plan.titrant.id && countedIn(plan).includes(r.complex.metal)
        : r.indicator === dye,
    ) ?? null
  );
}

/** Share of the colour there is, corrected for dilution: of the dye that is bound, or of the complex that has formed. */
export function colourOf(
  model: StageModel,
  criterion: Criterion,
  knowledge: Knowledge,
): (state: VesselState) => number {
  if (model.plan.indicator !== null)
    return (state) => {
      const ratio = criterion.ratio(state);
      return Number.isFinite(ratio) ? ratio / (1 + ratio) : 1;
    };
  const metal = photometricRecord(knowledge, model.plan)?.complex?.metal;
  const present = metal === undefined ? 0 : (model.solution.fromSample.get(metal) ?? 0);
  return (state) =>
    metal === undefined || present <= 0 ? 0 : state.boundToTitrant(metal) / (present * state.dilution);
}

/** Parts of the change between neighbours of which the steep branch is drawn: where it is steepest. */
const STEEP_PARTS = [0.7, 0.5, 0.3, 0.15];
const STEEP_POINTS = 5;
/** Where the level branch is drawn, in parts of the expected volume: past the end of a direct titration, before that of a back titration. */
const LEVEL_AFTER = [1.15, 1.2, 1.25, 1.3];
const LEVEL_BEFORE = [0.4, 0.5, 0.6, 0.7];
/** A change smaller than this share of the colour is not a break. */
const LEAST_CHANGE = 0.1;
/** A level branch steeper than this part of the steep one bends into it: there is no break to extrapolate. */
const LEVEL_ENOUGH = 0.2;

/**
 * Reads a titration with a photometer: the end is where the two straight branches of the computed absorbance meet. No observer
 * chooses a tint, so nothing is shifted to a practised colour.
 * @param equivalenceL where the end is expected, L
 */
export function readWithPhotometer(
  model: StageModel,
  criterion: Criterion,
  back: boolean,
  equivalenceL: number,
  followed: ComponentId,
  knowledge: Knowledge,
): ReadByPhotometer {
  const failed = (why: PhotometricFault): ReadByPhotometer => ({
    reading: null,
    why,
    volumeL: 0,
    bandL: [0, 0],
    bandPM: PHOTOMETRIC_BAND_PM,
  });
  if (model.plan.indicator !== null && criterion.basis === "empirical") return failed("no-break");
  const colour = colourOf(model, criterion, knowledge);
  const signal = (volumeL: number): number => colour(model.at(volumeL));
  const expected = back ? equivalenceL : scaleOf(model, signal, equivalenceL);
  const level = fit((back ? LEVEL_BEFORE : LEVEL_AFTER).map((part) => [part * expected, signal(part * expected)]));
  const away = (v: number): number => Math.abs(signal(v) - level.intercept - level.slopePerL * v);
  const span = back ? away(1.6 * expected) : away(0.05 * expected);
  if (!(span >= LEAST_CHANGE)) return failed("no-colour");
  if (back && signal(0) > 0.5) return failed("dye-held");
  const crossing = (part: number): number | null => {
    const search = firstCrossing((v) => (back ? away(v) - part * span : part * span - away(v)), expected);
    return search.found ? search.volumeL : null;
  };
  const steep = steepBranch(signal, crossing);
  if (steep === null || Math.abs(level.slopePerL) > LEVEL_ENOUGH * Math.abs(steep.slopePerL)) return failed("no-break");
  const volumeL = (level.intercept - steep.intercept) / (steep.slopePerL - level.slopePerL);
  if (!(volumeL > 0.2 * expected && volumeL < 3 * expected)) return failed("no-break");
  const end = model.at(volumeL);
  return {
    reading: {
      wavelengthNm: wavelength(model, knowledge),
      steep,
      level,
      turbidMolPerL: turbidity(model, end, knowledge),
    },
    why: null,
    volumeL,
    bandL: band(model, criterion, volumeL, equivalenceL, followed),
    bandPM: PHOTOMETRIC_BAND_PM,
  };
}

/** The line through the part of the change that is steepest; null where the colour does not come so far. */
function steepBranch(signal: (v: number) => number, crossing: (part: number) => number | null): Branch | null {
  const at = STEEP_PARTS.map(crossing).filter((v) => v !== null);
  let steepest: Branch | null = null;
  for (let i = 0; i + 1 < at.length; i++) {
    const [from, to] = [at[i]!, at[i + 1]!];
    if (from === to) continue;
    const line = fit(
      Array.from({ length: STEEP_POINTS }, (_, k) => {
        const v = from + (k * (to - from)) / (STEEP_POINTS - 1);
        return [v, signal(v)] as const;
      }),
    );
    if (steepest === null || Math.abs(line.slopePerL) > Math.abs(steepest.slopePerL)) steepest = line;
  }
  return steepest;
}

/** Interfering metals that are titrated too draw the end beyond the expected volume: the half-way colour shows how far. */
function scaleOf(model: StageModel, signal: (v: number) => number, equivalenceL: number): number {
  if (model.plan.indicator === null) return equivalenceL;
  const start = signal(0);
  const half = firstCrossing((v) => 0.5 * start - signal(v), equivalenceL);
  return half.found ? Math.max(equivalenceL, half.volumeL) : equivalenceL;
}

/** The band in pM carried through the volume on both sides of the break. */
function band(
  model: StageModel,
  criterion: Criterion,
  volumeL: number,
  equivalenceL: number,
  followed: ComponentId,
): readonly [number, number] {
  const byDye = model.plan.indicator !== null;
  const scale = (state: VesselState): number =>
    byDye ? Math.log10(Math.max(criterion.ratio(state), 1e-300)) : Math.log10(Math.max(state.free(followed), 1e-300));
  const width = byDye ? (criterion.bandLog10 / criterion.bandPM) * PHOTOMETRIC_BAND_PM : PHOTOMETRIC_BAND_PM;
  const end = scale(model.at(volumeL));
  const rises = scale(model.at(1.02 * volumeL)) > scale(model.at(0.98 * volumeL)) ? 1 : -1;
  const shifted = (by: number): number =>
    nearCrossing((v) => rises * (scale(model.at(v)) - end) - by, volumeL, by < 0 ? -1 : 1, equivalenceL) ?? volumeL;
  return [shifted(-width), shifted(width)];
}

function wavelength(model: StageModel, knowledge: Knowledge): PhotometricReading["wavelengthNm"] {
  const record = photometricRecord(knowledge, model.plan);
  const { pH } = model.plan;
  return record && pH >= record.pH[0] - 0.05 && pH <= record.pH[1] + 0.05 ? record.usedNm : null;
}

/** Solids that stand in equilibrium in this state, and what has precipitated for good. */
function turbidity(model: StageModel, state: VesselState, knowledge: Knowledge): number {
  const lying = model.system.solids.reduce((sum, _, i) => sum + (state.result.solidsMolPerL[i] ?? 0), 0);
  // What a way round throws down and filters off is not in the cell.
  const { detour } = model.plan;
  if (detour !== null && detourRecord(detour, knowledge).filtered) return lying;
  return lying + model.held.filter((h) => h.why === "precipitated").reduce((sum, h) => sum + h.molPerL, 0);
}

/** Least-squares line through points [L, signal]. */
function fit(points: readonly (readonly [number, number])[]): Branch {
  const n = points.length;
  const meanX = points.reduce((s, [x]) => s + x, 0) / n;
  const meanY = points.reduce((s, [, y]) => s + y, 0) / n;
  const covariance = points.reduce((s, [x, y]) => s + (x - meanX) * (y - meanY), 0);
  const variance = points.reduce((s, [x]) => s + (x - meanX) ** 2, 0);
  const slopePerL = covariance / variance;
  return { slopePerL, intercept: meanY - slopePerL * meanX };
}
