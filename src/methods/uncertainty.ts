import type { GlasswareRecord, Knowledge } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { Task } from "./types.ts";

/** One term of the budget: standard uncertainty relative to the result, dimensionless. */
export interface BudgetTerm {
  readonly source: string;
  readonly relative: number;
}

export interface Budget {
  readonly terms: readonly BudgetTerm[]; // largest first
  readonly combined: number; // u_c, relative
  readonly expanded: number; // 2 u_c + |bias|, relative: an uncorrected bias is added, never hidden inside u_c
}

/** Limits are read as triangular distributions: class A ware clusters about its nominal volume (JCGM 100, 4.3.9). */
const TRIANGULAR = Math.sqrt(6);
const RECTANGULAR = Math.sqrt(3);
/** Reading of a meniscus on a 0.05 to 0.1 mL scale, standard uncertainty, mL (common practice; 0.005 to 0.02). */
const READING_ML = 0.01;
/** Room temperature against 20 C: within 3 K, water expands 2.1e-4 per K, glass 1e-5 (common practice, as QUAM A2 treats it). */
const TEMPERATURE_RELATIVE = (3 * 2.0e-4) / RECTANGULAR;
/** Titrant strength: purity of the standard and its own titration in triplicate, standard uncertainty, relative. */
const TITRANT_STRENGTH_RELATIVE = 1.0e-3;
/** How well metal and ligand of a prepared chelate are balanced, as limits, relative to its amount (common practice: tested with the dye). */
const CHELATE_BALANCE_RELATIVE = 1.0e-3;
/** Smallest end-point uncertainty by eye: half a drop of 0.03 mL, rectangular. */
const DROP_ML = 0.03;
/** Relative standard uncertainty of an excess pipetted by a class A pipette of 25 mL (0.03 mL). */
const PIPETTE_FALLBACK_RELATIVE = 1e-3;

function toleranceOf(knowledge: Knowledge, kind: GlasswareRecord["kind"], nominalML: number): number | null {
  const ware = knowledge.glassware.filter((g) => g.kind === kind);
  const fitting = ware
    .filter((g) => g.nominalML >= nominalML)
    .sort((a, b) => a.nominalML - b.nominalML || b.toleranceML - a.toleranceML);
  return fitting[0]?.toleranceML ?? null;
}

/**
 * First budget of one titration by the GUM (JCGM 100): portion, burette, end point, titrant strength, temperature, blank,
 * and for back titrations the excess; uncorrected bias added to the expanded value.
 */
export function stageBudget(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): Budget {
  const { plan } = evaluation.model;
  // A release counts the titre between its two end points: the excess cancels.
  const first = evaluation.firstReading;
  const back = plan.backTitrant !== null && plan.release === null;
  // In a back titration the result is a difference: the same millilitre weighs more against it.
  // So it is with a way round, whose result is what the metal stands for.
  const { detour } = plan;
  const metalMol = evaluation.presentMol / (detour?.analytePerMetal ?? 1);
  const resultML = back || detour ? (metalMol / evaluation.model.burette.molPerL) * 1000 : evaluation.endPointML;
  const fills = Math.max(1, Math.ceil(evaluation.endPointML / task.laboratory.buretteML));
  const buretteTolerance = toleranceOf(knowledge, "burette", task.laboratory.buretteML) ?? 0.05;
  const portionTolerance = toleranceOf(knowledge, "pipette", task.portion.volumeML);
  const terms: BudgetTerm[] = [];
  const add = (source: string, relative: number): void => {
    if (relative > 0) terms.push({ source, relative });
  };
  add(
    "portion",
    portionTolerance === null ? PIPETTE_FALLBACK_RELATIVE : portionTolerance / TRIANGULAR / task.portion.volumeML,
  );
  add("burette", (Math.sqrt(fills) * Math.hypot(buretteTolerance / TRIANGULAR, Math.SQRT2 * READING_ML)) / resultML);
  // Half the observer's band as a rectangular limit, and never better than half a drop.
  const bandML = Math.abs(evaluation.bandML[1] - evaluation.bandML[0]) / 2;
  add("end point", Math.hypot(bandML / RECTANGULAR, DROP_ML / 2 / RECTANGULAR) / resultML);
  if (first) {
    const firstBandML = Math.abs(first.bandML[1] - first.bandML[0]) / 2;
    add("first end point", Math.hypot(firstBandML / RECTANGULAR, DROP_ML / 2 / RECTANGULAR) / resultML);
  }
  add("titrant strength", TITRANT_STRENGTH_RELATIVE);
  add("temperature", TEMPERATURE_RELATIVE);
  add("blank", DROP_ML / 2 / RECTANGULAR / resultML);
  // The observer does not stop at quite the same tint twice: a tenth of what cancels stays as uncertainty.
  add("standardised alike", 0.1 * Math.abs(evaluation.uncancelledBiasFraction - evaluation.biasFraction));
  // A surplus of either partner of the chelate goes whole into the titre.
  const chelateMol = (plan.chelate?.molPerL ?? 0) * evaluation.model.volumeL;
  add("balance of the chelate", (CHELATE_BALANCE_RELATIVE / RECTANGULAR) * (chelateMol / metalMol));
  const { way } = evaluation.model.solution;
  if (way?.record.kind === "surplus" && detour) {
    // The reagent is measured by its own titration: the same burette and eye once more, and a pipette.
    const own = ["burette", "end point"].map((source) => terms.find((t) => t.source === source)?.relative ?? 0);
    add("titration of the reagent alone", Math.hypot(...own));
    add("reagent in excess", ((detour.reagent.molPerL * evaluation.model.volumeL) / metalMol) * 5e-4);
  }
  if (way) add("composition of the precipitate", way.record.compositionUncertainty);
  if (back && way?.record.kind !== "conversion") {
    const excess = (plan.excessTitrantMolPerL * evaluation.model.volumeL) / metalMol;
    add("excess titrant", excess * 5e-4);
    add("back titrant strength", Math.max(0, excess - 1) * TITRANT_STRENGTH_RELATIVE);
  }
  terms.sort((a, b) => b.relative - a.relative);
  const combined = Math.sqrt(terms.reduce((s, t) => s + t.relative ** 2, 0));
  return { terms, combined, expanded: 2 * combined + Math.abs(evaluation.biasFraction) };
}

/**
 * A result by difference of two portions: bias and budget relative to the difference. Independent terms add in quadrature of
 * amounts; the titrant strength, the temperature and the pipette of the portion are common to both and count once.
 */
export function combineDifference(
  task: Task,
  whole: StageEvaluation,
  part: StageEvaluation,
  knowledge: Knowledge,
): { biasFraction: number; budget: Budget } {
  const difference = whole.presentMol - part.presentMol;
  const a = stageBudget(task, whole, knowledge);
  const b = stageBudget(task, part, knowledge);
  const common = new Set(["titrant strength", "temperature", "portion"]);
  const biasFraction = (whole.biasFraction * whole.presentMol - part.biasFraction * part.presentMol) / difference;
  const term = (budget: Budget, source: string, amount: number): number =>
    ((budget.terms.find((t) => t.source === source)?.relative ?? 0) * amount) / difference;
  const sources = [...new Set([...a.terms, ...b.terms].map((t) => t.source))];
  const terms = sources.map((source) => ({
    source,
    relative: common.has(source)
      ? (a.terms.find((t) => t.source === source)?.relative ?? 0)
      : Math.hypot(term(a, source, whole.presentMol), term(b, source, part.presentMol)),
  }));
  terms.sort((x, y) => y.relative - x.relative);
  const combined = Math.sqrt(terms.reduce((s, t) => s + t.relative ** 2, 0));
  return { biasFraction, budget: { terms, combined, expanded: 2 * combined + Math.abs(biasFraction) } };
}
