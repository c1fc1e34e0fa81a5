import type { BufferRecord, Knowledge } from "../constants/knowledge.ts";
import { daviesTerm, debyeHueckelA, log10ActivityCoefficient } from "./activity.ts";
import { chargeOf } from "./system-template.ts";
import { prepareSystem } from "./prepare-system.ts";
import type { Conditions } from "./types.ts";

/** A buffer at working conditions: what its protonation does, all as concentration constants. */
export interface BufferModel {
  readonly conditions: Conditions;
  /** log10 cumulative protonation constants, n = 1, 2, ...; empty for strong acids and alkalis. */
  readonly log10BetaH: readonly number[];
  readonly baseCharge: number; // of the deprotonated form
  readonly log10GammaH: number;
  readonly log10Kw: number;
}

/** What a buffer consists of at a pH; mol/L of solution. */
export interface BufferComposition {
  /** Amount of each form, by the number of protons it carries (index 0: deprotonated). */
  readonly formsMolPerL: readonly number[];
  readonly meanProtons: number;
  readonly hydrogenMolPerL: number;
  readonly hydroxideMolPerL: number;
  /** Singly charged inert ions that come with it: cations (Na+) and anions (Cl-, NO3-). */
  readonly inertCationMolPerL: number;
  readonly inertAnionMolPerL: number;
}

/**
 * The model of a buffer at `conditions`: protonation of its component where the knowledge has one, else its listed pKa, taken as
 * thermodynamic and moved by the Davies equation. Throws what `prepareSystem` throws.
 */
export function bufferModel(knowledge: Knowledge, buffer: BufferRecord, conditions: Conditions): BufferModel {
  const component = buffer.kind === "pair" ? buffer.component : null;
  const system = prepareSystem(knowledge, component === null ? [] : [component], conditions, { solids: () => false });
  const water = { conditions, log10GammaH: system.log10GammaH, log10Kw: system.log10Kw };
  if (buffer.kind !== "pair") return { ...water, log10BetaH: [], baseCharge: 0 };
  if (component !== null) {
    const log10BetaH: number[] = [];
    for (const species of system.species) {
      const protons = species.components["H+"] ?? 0;
      if (species.components[component] === 1 && protons > 0) log10BetaH[protons - 1] = species.log10Beta;
    }
    if (log10BetaH.length > 0)
      return {
        ...water,
        log10BetaH: Array.from(log10BetaH, (b: number | undefined) => b ?? Number.NEGATIVE_INFINITY),
        baseCharge: chargeOf(knowledge, component),
      };
  }
  const term = debyeHueckelA(conditions.temperatureC) * daviesTerm(conditions.ionicStrengthMolPerL);
  let sum = 0;
  const steps = [...buffer.pKa].sort((a, b) => b.value - a.value);
  const log10BetaH = steps.map((step) => (sum += step.value + (2 * step.acidCharge - 2) * term));
  return { ...water, log10BetaH, baseCharge: (steps[0]?.acidCharge ?? 1) - 1 };
}

/** Forms of the buffer (`molPerL` in all) at a pH (activity), with water's ions and the inert ions that balance it. */
export function bufferComposition(model: BufferModel, molPerL: number, pH: number): BufferComposition {
  const log10H = -pH - model.log10GammaH;
  const logs = [0, ...model.log10BetaH.map((beta, i) => beta + (i + 1) * log10H)];
  const largest = Math.max(...logs);
  const weights = logs.map((log) => 10 ** (log - largest));
  const sum = weights.reduce((a, b) => a + b, 0);
  const forms = model.log10BetaH.length === 0 ? [] : weights.map((w) => (molPerL * w) / sum);
  const protons = forms.reduce((total, c, n) => total + n * c, 0);
  const hydrogenMolPerL = 10 ** log10H;
  const hydroxideMolPerL = 10 ** (model.log10Kw - log10H);
  const inBuffer = forms.length === 0 ? 0 : molPerL;
  const charge = hydrogenMolPerL - hydroxideMolPerL + model.baseCharge * inBuffer + protons;
  return {
    formsMolPerL: forms,
    meanProtons: inBuffer > 0 ? protons / inBuffer : 0,
    hydrogenMolPerL,
    hydroxideMolPerL,
    inertCationMolPerL: Math.max(-charge, 0),
    inertAnionMolPerL: Math.max(charge, 0),
  };
}

/** Protons held (mol/L, hydroxide counted negative) by `molPerL` of the buffer and water at a pH (activity): falls as the pH rises. */
export function protonsHeld(model: BufferModel, molPerL: number, pH: number): number {
  const at = bufferComposition(model, molPerL, pH);
  return at.hydrogenMolPerL - at.hydroxideMolPerL + molPerL * at.meanProtons;
}

/** pH step of the numerical derivative: the error of the central difference is of its square, below 1e-5 relative. */
const PH_STEP = 1e-3;

/**
 * Buffer capacity, mol/L per pH unit (positive), of `molPerL` of the buffer and water at a pH (activity): minus the derivative of the
 * proton balance. Van Slyke, J. Biol. Chem. 1922, 52, 525.
 */
export function bufferCapacity(model: BufferModel, molPerL: number, pH: number): number {
  return (protonsHeld(model, molPerL, pH - PH_STEP) - protonsHeld(model, molPerL, pH + PH_STEP)) / (2 * PH_STEP);
}

/**
 * Fall of the pH (units, 0 or more) when `freedMolPerL` protons are set free in `molPerL` of the buffer at `pH` (activity), from the
 * proton balance itself; negative where protons are taken up. Volumes are taken as unchanged.
 */
export function pHDrop(model: BufferModel, molPerL: number, pH: number, freedMolPerL: number): number {
  const target = protonsHeld(model, molPerL, pH) + freedMolPerL;
  let low = -2;
  let high = 16;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (protonsHeld(model, molPerL, middle) > target) low = middle;
    else high = middle;
  }
  return pH - (low + high) / 2;
}

/**
 * Smallest amount of the buffer (mol/L) that keeps the fall of the pH within `allowedDrop` (> 0) when `freedMolPerL` protons are set free;
 * 0 where water and strong acid or alkali alone suffice, Infinity never: null where no amount up to `maximumMolPerL` does.
 */
export function bufferNeeded(
  model: BufferModel,
  pH: number,
  freedMolPerL: number,
  allowedDrop: number,
  maximumMolPerL: number,
): number | null {
  const enough = (molPerL: number) => Math.abs(pHDrop(model, molPerL, pH, freedMolPerL)) <= allowedDrop;
  if (enough(0)) return 0;
  if (!enough(maximumMolPerL)) return null;
  let low = 0;
  let high = maximumMolPerL;
  for (let i = 0; i < 50; i++) {
    const middle = (low + high) / 2;
    if (enough(middle)) high = middle;
    else low = middle;
  }
  return high;
}

/** log10 of the hydrogen ion concentration (mol/L) at a pH (activity) and `conditions`: -pH - log10 gamma. */
export function log10HydrogenAt(pH: number, conditions: Conditions): number {
  return -pH - log10ActivityCoefficient(1, conditions.ionicStrengthMolPerL, conditions.temperatureC);
}
