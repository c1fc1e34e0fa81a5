import { describe, expect, it } from "vitest";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { evaluateStage, type StageEvaluation } from "../../src/methods/evaluate-stage.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

// Each titration worked on paper from the constants of the knowledge base at the ionic strength of the vessel: side-reaction
// coefficients by their sums, the end point from the dye, the volume in closed form. No solver takes part.

const PORTION_L = 0.1; // vessel before the burette
const AMOUNT_MOL = 0.008 * 0.025; // 0.2 mmol of the metal
const BURETTE_MOL_PER_L = 0.01;
const DIRECT_RATIO = 0.08 / 0.92; // bound over free dye where the eye stops, metal's colour going
const BACK_RATIO = 0.15 / 0.85; // … and where the colour of the back titrant comes

/** Constants, as betas, and 10^-pH as a concentration, for hand work at the ionic strength of an evaluation. */
function constants(evaluation: StageEvaluation, components: readonly string[]) {
  const { ionicStrengthMolPerL, plan } = evaluation.model;
  const system = prepareSystem(KNOWLEDGE, components, { ionicStrengthMolPerL, temperatureC: 25 });
  const h = 10 ** (-plan.pH - system.log10GammaH);
  /** Sum of beta x [H]^n x [L]^m over the mononuclear species of `of` alone, or with `ligand` at `free` mol/L. */
  const alpha = (of: string, ligand?: string, free = 0): number =>
    system.species.reduce((sum, { components: parts, log10Beta }) => {
      const others = Object.keys(parts).filter((c) => c !== of && c !== "H+");
      if (parts[of] !== 1 || others.some((c) => c !== ligand)) return sum;
      return sum + 10 ** log10Beta * h ** (parts["H+"] ?? 0) * free ** (parts[ligand ?? ""] ?? 0);
    }, 0);
  /** Sum of beta x [H]^n over the 1:1 species of two components: the constant of both as they are, protons counted in. */
  const bound = (a: string, b: string): number =>
    system.species.reduce((sum, { components: parts, log10Beta }) => {
      const others = Object.keys(parts).filter((c) => ![a, b, "H+"].includes(c));
      if (parts[a] !== 1 || parts[b] !== 1 || others.length > 0) return sum;
      return sum + 10 ** log10Beta * h ** (parts["H+"] ?? 0);
    }, 0);
  return { alpha, bound };
}

/** Free metal at equivalence: K' x^2 + x = C, x not bound to the titrant. */
const unboundAtEquivalence = (k: number, molPerL: number): number => (Math.sqrt(1 + 4 * k * molPerL) - 1) / (2 * k);

/**
 * Volume (L) at which a direct titration stops: c V = [MY] (1 + 1/(K' [M'])) in amounts, [MY] = n - dye-bound - [M'] (V0 + V).
 * @param unbound metal neither with titrant nor dye, mol/L; @param k conditional constant for it
 */
function directVolume(unbound: number, k: number, withDyeMol: number): number {
  const q = 1 + 1 / (k * unbound);
  return (q * (AMOUNT_MOL - withDyeMol - unbound * PORTION_L)) / (BURETTE_MOL_PER_L + q * unbound);
}

const biasOf = (volumeL: number): number => (BURETTE_MOL_PER_L * volumeL) / AMOUNT_MOL - 1;

describe("zinc at pH 5.5 with xylenol orange, by hand", () => {
  const evaluation = evaluateStage(inventedTask({ "Zn2+": 0.008 }), inventedPlan(), KNOWLEDGE);
  const { alpha, bound } = constants(evaluation, ["Zn2+", "EDTA", "hexamine"]);
  const k = bound("Zn2+", "EDTA") / (alpha("Zn2+") * alpha("EDTA"));
  // The table gives pZn 5.7 at half change at pH 5.5, two metals a dye: ([Zn] 10^5.7)^2 = bound over free.
  const pZn = 5.7 - Math.log10(DIRECT_RATIO) / 2;
  const unbound = 10 ** -pZn * alpha("Zn2+");

  it("has the conditional constant", () => {
    expectRelative(10 ** evaluation.log10ConditionalK.get("Zn2+")!, k, 1e-3);
    expect(Math.abs(Math.log10(k) - 11.4)).toBeLessThan(0.3); // the order that textbooks print for this pH
  });
  it("ends at the pZn of the table, moved from half to the practised point", () => {
    expect(evaluation.basis).toBe("table");
    expectRelative(evaluation.pM!, pZn, 1e-4);
  });
  it("passes equivalence at the pZn of its constant", () => {
    const volumeL = AMOUNT_MOL / BURETTE_MOL_PER_L;
    const free = unboundAtEquivalence(k, AMOUNT_MOL / (PORTION_L + volumeL)) / alpha("Zn2+");
    expectRelative(evaluation.pMEquivalence!, -Math.log10(free), 1e-4);
  });
  it("has the end-point volume and the bias", () => {
    const volumeL = directVolume(unbound, k, 0);
    expectRelative(evaluation.endPointML / 1000, volumeL, 5e-6);
    expectRelative(evaluation.biasFraction, biasOf(volumeL), 0.01);
  });
});

describe("calcium at pH 12.5 with calcon, by hand", () => {
  const evaluation = evaluateStage(inventedTask({ "Ca2+": 0.008 }), calciumPlan(), KNOWLEDGE);
  const { alpha, bound } = constants(evaluation, ["Ca2+", "EDTA", "calcon"]);
  const k = bound("Ca2+", "EDTA") / (alpha("Ca2+") * alpha("EDTA"));
  // bound over free dye = K [Ca] / alpha of the dye.
  const free = (DIRECT_RATIO * alpha("calcon")) / bound("Ca2+", "calcon");
  const dyeBoundMol = 0.08 * evaluation.model.plan.indicator!.molPerL * PORTION_L;

  it("ends at the pCa of the dye's constants", () => {
    expect(evaluation.basis).toBe("constants");
    expectRelative(evaluation.pM!, -Math.log10(free), 1e-4);
  });
  it("has the end-point volume and the bias, what the dye still holds counted", () => {
    const volumeL = directVolume(free * alpha("Ca2+"), k, dyeBoundMol);
    expectRelative(evaluation.endPointML / 1000, volumeL, 5e-6);
    expectRelative(evaluation.biasFraction, biasOf(volumeL), 0.01);
    expect(evaluation.biasFraction).toBeLessThan(-0.001); // half a dye change early: calcon reads low
  });
});

describe("magnesium at pH 10 with mordant black 11, by hand", () => {
  const evaluation = evaluateStage(inventedTask({ "Mg2+": 0.008 }), magnesiumPlan(), KNOWLEDGE);
  const { alpha, bound } = constants(evaluation, ["Mg2+", "EDTA", "mordant-black-11", "ammonia"]);
  // This dye has a record of its own of how far past half change the observer goes on: bound over free 10^-0.4.
  const ratio = 10 ** -KNOWLEDGE.indicators.get("mordant-black-11")!.practisedShiftPM!.value;
  const free = (ratio * alpha("mordant-black-11")) / bound("Mg2+", "mordant-black-11");
  const dyeBoundMol = (ratio / (1 + ratio)) * evaluation.model.plan.indicator!.molPerL * PORTION_L;
  // Free ammonia: the buffer's, thinned by the titre, less its acid; magnesium takes nothing worth counting of it.
  const ammonia = (volumeL: number) => (0.1 * PORTION_L) / (PORTION_L + volumeL) / alpha("ammonia");

  it("has the end-point volume and the bias", () => {
    const withAmmonia = alpha("Mg2+", "ammonia", ammonia(0.0202));
    const k = bound("Mg2+", "EDTA") / (withAmmonia * alpha("EDTA"));
    const volumeL = directVolume(free * withAmmonia, k, dyeBoundMol);
    expectRelative(evaluation.pM!, -Math.log10(free), 1e-4);
    expectRelative(evaluation.endPointML / 1000, volumeL, 2e-5);
    expectRelative(evaluation.biasFraction, biasOf(volumeL), 0.01);
    expect(evaluation.biasFraction).toBeGreaterThan(0); // the dye holds magnesium past equivalence
  });
});

describe("nickel with EDTA in excess, back with zinc at pH 5.5, by hand", () => {
  const evaluation = evaluateStage(inventedTask({ "Ni2+": 0.008 }), backPlan(), KNOWLEDGE);
  it("has the back titre and the bias", () => {
    // What little nickel exchanged with the dye (0.2 % of its colour) is left out: 0.001 in pZn.
    const { alpha, bound } = constants(evaluation, ["Zn2+", "Ni2+", "EDTA", "hexamine"]);
    const free = 10 ** -5.7 * Math.sqrt(BACK_RATIO);
    const unbound = free * alpha("Zn2+");
    const k = bound("Zn2+", "EDTA") / (alpha("Zn2+") * alpha("EDTA"));
    const titrantMol = 0.0028 * PORTION_L;
    // EDTA that nickel does not hold is with zinc, but for 1/(K' [Zn']) of it.
    const withZincMol = (titrantMol - AMOUNT_MOL) / (1 + 1 / (k * unbound));
    const volumeL = (withZincMol + unbound * PORTION_L) / (BURETTE_MOL_PER_L - unbound);
    expect(Math.abs(evaluation.pM! + Math.log10(free))).toBeLessThan(0.002);
    expectRelative(evaluation.endPointML / 1000, volumeL, 1e-4);
    const found = titrantMol - BURETTE_MOL_PER_L * volumeL;
    expectRelative(evaluation.foundMol, found, 1e-4);
    expect(Math.abs(evaluation.biasFraction - (found / AMOUNT_MOL - 1))).toBeLessThan(5e-5);
  });
});
