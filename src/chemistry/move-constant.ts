import type { ConstantRecord, EnthalpyRecord, Reaction } from "../constants/knowledge.ts";
import { selectRecord } from "../constants/select-constant.ts";
import { daviesTerm, debyeHueckelA } from "./activity.ts";
import type { Conditions, ConstantUse } from "./types.ts";

const GAS_CONSTANT_KJ_PER_MOL_K = 0.008314462618; // CODATA 2018
const KELVIN = 273.15;

/** |sum of nu z^2| from which the Davies equation alone is not trusted to move a constant. */
const LARGE_DELTA_Z2 = 8;
/** Change of the Davies term (0 to 0.21 between I = 0 and 0.1) that counts as a full move. */
const FULL_MOVE = 0.1;
/** Standard uncertainty of a van 't Hoff move without a listed enthalpy, log10 units per kelvin: 20 kJ/mol at 25 C. */
const UNKNOWN_ENTHALPY_KJ_PER_MOL = 20;
/** Standard uncertainty of an enthalpy in kJ/mol: common practice for calorimetric values, and for those in parentheses. */
const ENTHALPY_UNCERTAINTY_KJ_PER_MOL = 2;
const DOUBTFUL_ENTHALPY_UNCERTAINTY_KJ_PER_MOL = 8;

/**
 * The enthalpy of a reaction to use at these conditions, or null where none is listed: not doubtful before doubtful,
 * then the nearest ionic strength (mol/L), then the nearest temperature (C), then the first listed.
 */
export function selectEnthalpy(reaction: Reaction, conditions: Conditions): EnthalpyRecord | null {
  let best: EnthalpyRecord | null = null;
  for (const candidate of reaction.enthalpies) {
    if (best === null || isBetter(candidate, best, conditions)) best = candidate;
  }
  return best;
}

function isBetter(a: EnthalpyRecord, b: EnthalpyRecord, at: Conditions): boolean {
  if (a.doubtful !== b.doubtful) return b.doubtful;
  const distanceA = Math.abs(a.ionicStrengthMolPerL - at.ionicStrengthMolPerL);
  const distanceB = Math.abs(b.ionicStrengthMolPerL - at.ionicStrengthMolPerL);
  if (distanceA !== distanceB) return distanceA < distanceB;
  return Math.abs(a.temperatureC - at.temperatureC) < Math.abs(b.temperatureC - at.temperatureC);
}

/**
 * Added standard uncertainty (log10 units) of a move by the Davies equation: 0.2 at |sum nu z^2| = 8 rising to 0.3 at 16,
 * in full once the Davies term changes by 0.1, in proportion below (no move, nothing added). Source: common practice.
 */
export function daviesMoveUncertainty(deltaZ2: number, changeOfTerm: number): number {
  const size = Math.abs(deltaZ2);
  if (size < LARGE_DELTA_Z2) return 0;
  const full = 0.2 + 0.1 * Math.min(1, (size - LARGE_DELTA_Z2) / LARGE_DELTA_Z2);
  return full * Math.min(1, Math.abs(changeOfTerm) / FULL_MOVE);
}

/** A record moved to a temperature, and what moving it on to any ionic strength takes: log10K = base + slope x Davies term. */
export interface MovableConstant {
  readonly log10KAtZeroTerm: number;
  readonly slope: number; // deltaZ2 x A(T)
  readonly termOfRecord: number;
  readonly temperatureShift: number;
  readonly fixedVariance: number; // of the record and of the temperature move, log10 units squared
}

/** Prepares `record` of `reaction` for moves by ionic strength at the temperature of `conditions` (van 't Hoff where an enthalpy is listed). */
export function movableConstant(reaction: Reaction, record: ConstantRecord, conditions: Conditions): MovableConstant {
  const slopeAtRecord = reaction.deltaZ2 * debyeHueckelA(record.temperatureC);
  const termOfRecord = daviesTerm(record.ionicStrengthMolPerL);
  const inverseKelvin = 1 / (record.temperatureC + KELVIN) - 1 / (conditions.temperatureC + KELVIN);
  const perKJ = inverseKelvin / (GAS_CONSTANT_KJ_PER_MOL_K * Math.LN10);
  const enthalpy = selectEnthalpy(reaction, conditions);
  const temperatureShift = enthalpy === null ? 0 : enthalpy.kJPerMol * perKJ;
  const enthalpyUncertainty =
    enthalpy === null
      ? UNKNOWN_ENTHALPY_KJ_PER_MOL
      : enthalpy.doubtful
        ? DOUBTFUL_ENTHALPY_UNCERTAINTY_KJ_PER_MOL
        : ENTHALPY_UNCERTAINTY_KJ_PER_MOL;
  return {
    log10KAtZeroTerm: record.log10K - slopeAtRecord * termOfRecord + temperatureShift,
    slope: reaction.deltaZ2 * debyeHueckelA(conditions.temperatureC),
    termOfRecord,
    temperatureShift,
    fixedVariance: record.uncertainty ** 2 + (enthalpyUncertainty * perKJ) ** 2,
  };
}

/** Records are chosen on a grid of this many ionic strengths per decade, so that neighbouring strengths share one choice. */
const SELECTION_STEPS_PER_DECADE = 20;
const SELECTION_FLOOR_MOL_PER_L = 1e-4;

/**
 * The conditions records are chosen for: the ionic strength rounded to a logarithmic grid (20 per decade, below 1e-4 mol/L
 * zero). The move itself uses the exact ionic strength; the grid only keeps the choice from flickering during an iteration.
 */
export function selectionConditions(conditions: Conditions): Conditions {
  const exact = conditions.ionicStrengthMolPerL;
  if (exact < SELECTION_FLOOR_MOL_PER_L) return { ...conditions, ionicStrengthMolPerL: 0 };
  const step = Math.round(Math.log10(exact) * SELECTION_STEPS_PER_DECADE);
  return { ...conditions, ionicStrengthMolPerL: 10 ** (step / SELECTION_STEPS_PER_DECADE) };
}

/** log10 K of a movable constant at a Davies term (see `daviesTerm`). */
export function log10KAt(constant: MovableConstant, term: number): number {
  return constant.log10KAtZeroTerm + constant.slope * term;
}

/** Standard uncertainty (log10 units) of a movable constant at a Davies term. */
export function uncertaintyAt(constant: MovableConstant, deltaZ2: number, term: number): number {
  const move = daviesMoveUncertainty(deltaZ2, term - constant.termOfRecord);
  return Math.sqrt(constant.fixedVariance + move * move);
}

/**
 * The concentration constant of `reaction` at `conditions` (mol/L, C), with its evidence: the selected record, moved by the
 * Davies equation (sum of nu z^2) and by van 't Hoff where an enthalpy is listed; uncertainty in log10 units, combined in quadrature.
 * `factor` of the result is 1. Throws what `selectRecord` throws for a reaction without records.
 */
export function constantAt(reaction: Reaction, conditions: Conditions): ConstantUse {
  const selection = selectionConditions(conditions);
  const { record, passedOver } = selectRecord(reaction, selection);
  const constant = movableConstant(reaction, record, selection);
  return constantUse(reaction, record, passedOver.length, constant, conditions);
}

/** The evidence of a movable constant at the ionic strength of `conditions`, with factor 1. */
export function constantUse(
  reaction: Reaction,
  record: ConstantRecord,
  passedOver: number,
  constant: MovableConstant,
  conditions: Conditions,
): ConstantUse {
  const term = daviesTerm(conditions.ionicStrengthMolPerL);
  const log10KUsed = log10KAt(constant, term);
  return {
    reaction: reaction.id,
    factor: 1,
    record,
    passedOver,
    log10KUsed,
    ionicStrengthShift: log10KUsed - record.log10K - constant.temperatureShift,
    temperatureShift: constant.temperatureShift,
    uncertainty: uncertaintyAt(constant, reaction.deltaZ2, term),
  };
}
