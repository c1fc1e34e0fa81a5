import type { GlasswareRecord, Knowledge, PrimaryStandardRecord } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { countedIn, type StagePlan, type Task } from "./types.ts";

/** Reading of a meniscus on a 0.05 to 0.1 mL scale, standard uncertainty, mL (common practice; 0.005 to 0.02). */
export const READING_ML = 0.01;
/** Smallest end-point uncertainty by eye: half a drop of 0.03 mL to either side (common practice; 0.02 to 0.05). */
export const HALF_DROP_ML = 0.03 / 2;
/** Room temperature within 3 K between standardisation and use; water expands 2.1e-4 per K, glass 1e-5 (common practice; QUAM A2, recalled). */
export const TEMPERATURE_K = 3;
export const EXPANSION_PER_K = 2.0e-4;
/** Observer and bench figures are known to about a quarter (common practice). */
export const KNOWN_TO = 0.25;
/** How well metal and ligand of a prepared chelate are balanced, as limits, relative to its amount (common practice: tested with the dye). */
export const CHELATE_BALANCE_RELATIVE = 1.0e-3;
/** Part of what cancels by standardising alike that stays as uncertainty: the observer does not stop at quite the same tint twice. */
export const UNCANCELLED_PART = 0.1;

/** A standardisation is done in triplicate: what scatters is less by root 3. */
export const STANDARDISATIONS = 3;
/** Largest relative standard deviation at which a standardisation is accepted (European Pharmacopoeia, frequently asked questions of its directorate, read). */
const ACCEPTED_SCATTER = 2e-3;
/** Weighing by difference, standard uncertainty, g (EURACHEM/CITAC QUAM, example A3, read: 0.00013 g). */
export const WEIGHING_G = 1.3e-4;
/** The standard is weighed for this flask, and this pipette measures each portion of its solution, and any excess (common practice). */
export const STANDARD_FLASK_ML = 1000;
export const PIPETTE_ML = 25;
/** Part of the burette that a standardisation takes (common practice). */
const BURETTE_PART = 0.8;
/** Less than this is not weighed: a tenfold stronger solution is diluted, pipette into this flask (common practice). */
const LEAST_MASS_G = 0.2;
export const DILUTION_FLASK_ML = 250;
/** Standard for titrants where none of the ion itself is on record (common practice). */
const USUAL_STANDARD = "Zn2+";

/** Fallbacks where no ware of the size is on record, mL relative: a class A pipette of 25 mL, a burette of 50 mL. */
const PIPETTE_RELATIVE = 1e-3 * Math.sqrt(6);
const BURETTE_FALLBACK_ML = 0.05;

/** What a search looks up in a knowledge base again and again, by key. */
type LookedUp<V> = WeakMap<Knowledge, Map<string, V>>;
const tolerances: LookedUp<number | null> = new WeakMap();
const standards: LookedUp<PrimaryStandardRecord | null> = new WeakMap();

function lookedUp<V>(known: LookedUp<V>, knowledge: Knowledge, key: string, find: () => V): V {
  let own = known.get(knowledge);
  if (!own) known.set(knowledge, (own = new Map<string, V>()));
  const before = own.get(key);
  if (before !== undefined) return before;
  const found = find();
  own.set(key, found);
  return found;
}

/** Class A limit of the smallest ware that holds this volume, mL; null where none on record does. */
export const toleranceOf = (knowledge: Knowledge, kind: GlasswareRecord["kind"], nominalML: number): number | null =>
  lookedUp(tolerances, knowledge, `${kind} ${nominalML}`, () => {
    const [fitting] = knowledge.glassware
      .filter((g) => g.kind === kind && g.nominalML >= nominalML)
      .sort((a, b) => a.nominalML - b.nominalML || b.toleranceML - a.toleranceML);
    return fitting?.toleranceML ?? null;
  });

/** The standardisation of a titrant: what is weighed, measured and read. Volumes mL, masses g. */
export interface Standardisation {
  readonly standard: PrimaryStandardRecord;
  readonly massG: number;
  readonly flaskToleranceML: number;
  readonly diluted: { readonly pipetteToleranceML: number; readonly flaskToleranceML: number } | null;
  readonly pipetteToleranceML: number;
  readonly buretteToleranceML: number;
  readonly titreML: number;
  /** Standard uncertainty of one titration: readings, observer's band, last drop; at most what is accepted. */
  readonly scatterML: number;
}

/** What the budget of one titration is made from. Volumes mL. */
export interface BudgetInputs {
  readonly portionToleranceML: number;
  readonly buretteToleranceML: number;
  readonly fills: number;
  /** What the result stands for in mL from the burette. */
  readonly resultML: number;
  readonly bandML: number; // half the observer's band
  readonly firstBandML: number | null;
  readonly alikeFraction: number;
  readonly chelateRatio: number; // chelate over what is counted
  readonly reagentRatio: number | null; // reagent of a surplus over what is counted
  readonly compositionFraction: number;
  readonly excessRatio: number | null; // titrant in excess over what is counted, in a back titration
  readonly standardisation: Standardisation | null;
}

/** The standard that serves a titration best: of the metal itself where one is on record, the purest; else the usual one. */
function standardFor(plan: StagePlan, knowledge: Knowledge): PrimaryStandardRecord | null {
  const ions = plan.backTitrant ? [...countedIn(plan), plan.backTitrant.id] : countedIn(plan);
  return lookedUp(standards, knowledge, ions.join(), () => {
    const of = (ion: string): PrimaryStandardRecord[] => knowledge.standards.filter((s) => s.forIon === ion);
    const own = ions.flatMap(of);
    const [best] = (own.length > 0 ? own : of(USUAL_STANDARD)).sort(
      (a, b) => a.purityExpandedUncertainty - b.purityExpandedUncertainty,
    );
    return best ?? null;
  });
}

function standardisationOf(task: Task, plan: StagePlan, bandML: number, knowledge: Knowledge): Standardisation | null {
  const standard = standardFor(plan, knowledge);
  if (standard === null) return null;
  const titreML = BURETTE_PART * task.laboratory.buretteML;
  const molPerL = (plan.titrant.molPerL * titreML) / PIPETTE_ML;
  const forFlask = (molPerL * standard.molarMassGPerMol * STANDARD_FLASK_ML) / 1000;
  const tolerance = (kind: GlasswareRecord["kind"], nominal: number): number =>
    toleranceOf(knowledge, kind, nominal) ?? 0;
  const diluted = forFlask < LEAST_MASS_G;
  return {
    standard,
    massG: diluted ? (forFlask * DILUTION_FLASK_ML) / PIPETTE_ML : forFlask,
    flaskToleranceML: tolerance("flask", STANDARD_FLASK_ML),
    diluted: diluted
      ? {
          pipetteToleranceML: tolerance("pipette", PIPETTE_ML),
          flaskToleranceML: tolerance("flask", DILUTION_FLASK_ML),
        }
      : null,
    pipetteToleranceML: tolerance("pipette", PIPETTE_ML),
    buretteToleranceML: toleranceOf(knowledge, "burette", task.laboratory.buretteML) ?? BURETTE_FALLBACK_ML,
    titreML,
    scatterML: Math.min(
      Math.hypot(Math.SQRT2 * READING_ML, bandML / RECTANGULAR, HALF_DROP_ML / RECTANGULAR),
      ACCEPTED_SCATTER * titreML,
    ),
  };
}

const RECTANGULAR = Math.sqrt(3);
const halfOf = (band: readonly [number, number]): number => Math.abs(band[1] - band[0]) / 2;

/** What the budget of an evaluated titration rests on. */
export function budgetInputs(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): BudgetInputs {
  const { model, presentMol, endPointML } = evaluation;
  const { plan } = model;
  const { detour } = plan;
  const { way } = model.solution;
  // A release counts the titre between its two end points: the excess cancels.
  const back = plan.backTitrant !== null && plan.release === null;
  const metalMol = presentMol / (detour?.analytePerMetal ?? 1);
  const bandML = halfOf(evaluation.bandML);
  return {
    portionToleranceML:
      toleranceOf(knowledge, "pipette", task.portion.volumeML) ?? PIPETTE_RELATIVE * task.portion.volumeML,
    buretteToleranceML: toleranceOf(knowledge, "burette", task.laboratory.buretteML) ?? BURETTE_FALLBACK_ML,
    fills: Math.max(1, Math.ceil(endPointML / task.laboratory.buretteML)),
    // In a back titration the result is a difference: the same millilitre weighs more against it.
    // So it is with a way round, whose result is what the metal stands for.
    resultML: back || detour ? (metalMol / model.burette.molPerL) * 1000 : endPointML,
    bandML,
    firstBandML: evaluation.firstReading ? halfOf(evaluation.firstReading.bandML) : null,
    alikeFraction: UNCANCELLED_PART * Math.abs(evaluation.uncancelledBiasFraction - evaluation.biasFraction),
    chelateRatio: ((plan.chelate?.molPerL ?? 0) * model.volumeL) / metalMol,
    reagentRatio: way?.record.kind === "surplus" && detour ? (detour.reagent.molPerL * model.volumeL) / metalMol : null,
    compositionFraction: way?.record.compositionUncertainty ?? 0,
    excessRatio:
      back && way?.record.kind !== "conversion" ? (plan.excessTitrantMolPerL * model.volumeL) / metalMol : null,
    standardisation: standardisationOf(task, plan, bandML, knowledge),
  };
}
