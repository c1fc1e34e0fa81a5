import type { Knowledge } from "../constants/knowledge.ts";
import {
  budgetInputs,
  CHELATE_BALANCE_RELATIVE,
  DILUTION_FLASK_ML,
  EXPANSION_PER_K,
  HALF_DROP_ML,
  KNOWN_TO,
  PIPETTE_ML,
  READING_ML,
  STANDARD_FLASK_ML,
  STANDARDISATIONS,
  TEMPERATURE_K,
  WEIGHING_G,
  type BudgetInputs,
  type Standardisation,
} from "./budget-inputs.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { degreesOfFreedomOf, type Quantity } from "./gum.ts";
import type { Task } from "./types.ts";

/** A quantity under a name of its own, in one term, and the factor or the volume (mL) by which the result depends on it. */
export interface Part {
  readonly term: string;
  readonly quantity: Quantity;
  readonly factor?: (value: number) => number;
  readonly addsML?: (value: number) => number;
}

const BENCH = degreesOfFreedomOf(KNOWN_TO);

const part = (
  term: string,
  name: string,
  [value, unit]: readonly [number, string],
  [distribution, halfWidth, degreesOfFreedom = Infinity]: readonly [Quantity["distribution"], number, number?],
  effect: Pick<Part, "factor" | "addsML">,
): Part => ({ term, quantity: { name, value, unit, distribution, halfWidth, degreesOfFreedom }, ...effect });

const over = (nominal: number) => ({ factor: (v: number): number => v / nominal });
const under = (nominal: number) => ({ factor: (v: number): number => nominal / v });
const adding = (mL: number) => ({ addsML: (v: number): number => v * mL });

/** What a titrant's strength rests on: c = purity x mass / (molar mass x flask) x dilution x pipette / titre. */
function standardisationParts(s: Standardisation, term: string): Part[] {
  const purity = s.standard.purityMassFraction;
  return [
    part(
      term,
      `purity of the standard, ${s.standard.formula}`,
      [purity, ""],
      ["normal", s.standard.purityExpandedUncertainty / 2],
      over(purity),
    ),
    part(term, "mass of the standard", [s.massG, "g"], ["normal", WEIGHING_G], over(s.massG)),
    part(
      term,
      "flask of the standard",
      [STANDARD_FLASK_ML, "mL"],
      ["triangular", s.flaskToleranceML],
      under(STANDARD_FLASK_ML),
    ),
    ...(s.diluted
      ? [
          part(
            term,
            "pipette of its dilution",
            [PIPETTE_ML, "mL"],
            ["triangular", s.diluted.pipetteToleranceML],
            over(PIPETTE_ML),
          ),
          part(
            term,
            "flask of its dilution",
            [DILUTION_FLASK_ML, "mL"],
            ["triangular", s.diluted.flaskToleranceML],
            under(DILUTION_FLASK_ML),
          ),
        ]
      : []),
    part(term, "pipette of its portions", [PIPETTE_ML, "mL"], ["triangular", s.pipetteToleranceML], over(PIPETTE_ML)),
    part(term, "burette, its titration", [s.titreML, "mL"], ["triangular", s.buretteToleranceML], under(s.titreML)),
    part(
      term,
      "scatter of its titrations, mean of three",
      [0, "mL"],
      ["normal", s.scatterML / Math.sqrt(STANDARDISATIONS), STANDARDISATIONS - 1],
      { factor: (v) => s.titreML / (s.titreML + v) },
    ),
  ];
}

/** What is read at the burette in one titration: volume, two readings, where the eye stops, the last drop. */
function titrationParts(
  inputs: BudgetInputs,
  bandPM: number,
  pM: number | null,
  term: (own: string) => string,
): Part[] {
  const { resultML, fills, buretteToleranceML, bandML } = inputs;
  const root = Math.sqrt(fills);
  return [
    part(term("burette"), "burette", [resultML, "mL"], ["triangular", root * buretteToleranceML], {
      addsML: (v) => v - resultML,
    }),
    part(term("burette"), "two readings", [0, "mL"], ["normal", root * Math.SQRT2 * READING_ML, BENCH], adding(1)),
    // The slope of the curve carries the band of the observer, in pM, to the volume.
    bandPM > 0 && pM !== null
      ? part(term("end point"), "pM at which it is seen", [pM, "pM"], ["rectangular", bandPM, BENCH], {
          addsML: (v) => ((v - pM) * bandML) / bandPM,
        })
      : part(term("end point"), "volume at which it is seen", [0, "mL"], ["rectangular", bandML, BENCH], adding(1)),
    part(term("end point"), "last drop", [0, "mL"], ["rectangular", HALF_DROP_ML, BENCH], adding(1)),
  ];
}

/** Every quantity that the result of one titration depends on. */
export function partsOf(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): Part[] {
  const inputs = budgetInputs(task, evaluation, knowledge);
  const { resultML, standardisation: s, excessRatio, reagentRatio } = inputs;
  const { volumeML } = task.portion;
  const pipette: readonly ["triangular", number] = ["triangular", s?.pipetteToleranceML ?? 0];
  const ofPipette = (ratio: number) => ({ addsML: (v: number) => ratio * resultML * (v / PIPETTE_ML - 1) });
  const own = titrationParts(inputs, evaluation.bandPM, evaluation.pM, (term) => term);
  const parts: Part[] = [
    part(
      "portion",
      "pipette of the portion",
      [volumeML, "mL"],
      ["triangular", inputs.portionToleranceML],
      under(volumeML),
    ),
    ...own,
    part("temperature", "warmer than at its standardisation", [0, "K"], ["rectangular", TEMPERATURE_K], {
      factor: (v) => 1 - EXPANSION_PER_K * v,
    }),
    part("blank", "titre of the blank", [0, "mL"], ["rectangular", HALF_DROP_ML, BENCH], adding(-1)),
    part(
      "standardised alike",
      "shift that differs from the standardisation's",
      [0, ""],
      ["normal", inputs.alikeFraction, BENCH],
      {
        factor: (v) => 1 + v,
      },
    ),
    part(
      "balance of the chelate",
      "surplus of a partner, relative",
      [0, ""],
      ["rectangular", CHELATE_BALANCE_RELATIVE],
      {
        addsML: (v) => v * inputs.chelateRatio * resultML,
      },
    ),
    part(
      "composition of the precipitate",
      "its composition, relative",
      [1, ""],
      ["normal", inputs.compositionFraction],
      {
        factor: (v) => v,
      },
    ),
    ...(s
      ? standardisationParts(s, "titrant strength")
      : [part("titrant strength", "strength, relative", [1, ""], ["normal", 1e-3], { factor: (v) => v })]),
  ];
  if (inputs.firstBandML !== null)
    parts.push(
      part(
        "first end point",
        "volume at which the first is seen",
        [0, "mL"],
        ["rectangular", inputs.firstBandML, BENCH],
        adding(-1),
      ),
      part("first end point", "its last drop", [0, "mL"], ["rectangular", HALF_DROP_ML, BENCH], adding(-1)),
    );
  if (reagentRatio !== null) {
    const alone = titrationParts(inputs, 0, null, () => "titration of the reagent alone");
    parts.push(
      ...alone.map((p) => ({ ...p, quantity: { ...p.quantity, name: `${p.quantity.name}, reagent alone` } })),
      part("reagent in excess", "pipette of the reagent", [PIPETTE_ML, "mL"], pipette, ofPipette(reagentRatio)),
    );
  }
  if (excessRatio !== null) {
    parts.push(part("excess titrant", "pipette of the titrant", [PIPETTE_ML, "mL"], pipette, ofPipette(excessRatio)));
    parts.push(...backRatioParts(s, Math.max(0, excessRatio - 1) * resultML));
  }
  return parts.filter((p) => p.quantity.halfWidth > 0);
}

/** The back titrant has its strength from the titrant: a pipette, and titrations in triplicate. */
function backRatioParts(s: Standardisation | null, backML: number): Part[] {
  const term = "back titrant strength";
  if (s === null)
    return [part(term, "strength, relative", [1, ""], ["normal", 1e-3], { addsML: (v) => backML * (1 - v) })];
  return standardisationParts(s, term)
    .filter(({ quantity }) => !/^(purity|mass|flask|pipette) of (the standard|its dilution)/.test(quantity.name))
    .map(({ factor, quantity, ...rest }) => ({
      ...rest,
      quantity: { ...quantity, name: `${quantity.name}, back titrant` },
      addsML: (v: number) => backML * (1 - factor!(v)),
    }));
}
