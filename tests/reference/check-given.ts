import { calculateCurve } from "../../src/chemistry/calculators/curve.ts";
import { calculateEquilibrium } from "../../src/chemistry/calculators/equilibrium.ts";
import { givenSystem } from "../../src/chemistry/calculators/given-system.ts";
import type { GivenConstant } from "../../src/chemistry/calculators/types.ts";
import { explicitCurve } from "../../src/chemistry/curve-explicit.ts";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { conditionalConstantAt, lnSpeciesAt, log10SideReaction } from "../../src/chemistry/speciation.ts";
import type { Knowledge } from "../../src/constants/knowledge.ts";
import { propagate } from "../../src/methods/gum.ts";
import { smallKnowledge } from "../chemistry/small-knowledge.ts";
import type { CheckOf, Comparison, Quantity } from "./example.ts";
import { compare } from "./example.ts";

const TRACE = -80;

/** A result that is a quotient of products, and its standard uncertainty by propagation. */
export function uncertaintyBudget(check: CheckOf<"uncertainty-budget">): Comparison[] {
  const given = [...check.over, ...check.under];
  const result = propagate(
    given.map(({ name, value, standardUncertainty }) => ({
      name,
      value,
      unit: "",
      distribution: "normal",
      halfWidth: standardUncertainty,
      degreesOfFreedom: Number.POSITIVE_INFINITY,
    })),
    (values) => values.reduce((product, v, i) => (i < check.over.length ? product * v : product / v), check.factor),
  );
  return [
    compare(check.of, result.value, check.expected, check.tolerance),
    compare(
      `u of ${check.of}`,
      result.combined,
      check.expectedStandardUncertainty,
      check.tolerance,
      check.disagreement,
    ),
  ];
}

/** Cumulative protonation constants of a ligand from its pKa in any order. */
function protonation(ligand: string, pKa: readonly number[]): GivenConstant[] {
  let sum = 0;
  return [...pKa]
    .sort((a, b) => b - a)
    .map((p, i) => ({ components: { "H+": i + 1, [ligand]: 1 }, log10Beta: (sum += p) }));
}

/** log10 alpha of a component of a set of constants, everything else at the given log10 free concentrations. */
function log10Alpha(
  constants: readonly GivenConstant[],
  component: string,
  log10Free: Readonly<Record<string, number>>,
): number {
  const empty = smallKnowledge({}, []);
  const ids = [component, ...Object.keys(log10Free).filter((id) => id !== "H+")];
  const system = givenSystem(constants, ids, empty, 25);
  const lnFree = system.components.map((id) => (id === component ? TRACE : (log10Free[id] ?? TRACE) * Math.LN10));
  return log10SideReaction(system, lnFree, component);
}

const shown = (quantity: Quantity, alpha: number): number => (quantity === "fraction" ? 10 ** -alpha : alpha);

/** Fraction or log10 alpha of a ligand against pH, from its pKa. */
export function ligandFraction(check: CheckOf<"ligand-fraction">): Comparison[] {
  const constants = protonation("L", check.pKa);
  return check.points.map((p) => {
    const alpha = log10Alpha(constants, "L", { "H+": -p.pH! });
    return compare(`pH ${p.pH}`, shown(check.quantity, alpha), p.expected, check.tolerance, p.disagreement);
  });
}

/** Fraction or log10 alpha of a metal against a free ligand. */
export function metalFraction(check: CheckOf<"metal-fraction">): Comparison[] {
  const constants = check.log10Beta.map((b, i) => ({ components: { M: 1, L: i + 1 }, log10Beta: b }));
  return check.points.map((p) => {
    const alpha = log10Alpha(constants, "M", { L: Math.log10(p.free!), "H+": -10 });
    return compare(
      `${check.metal} at ${p.free} mol/L`,
      shown(check.quantity, alpha),
      p.expected,
      check.tolerance,
      p.disagreement,
    );
  });
}

/** log10 alpha of a metal with hydroxide against pH. */
export function metalHydroxide(check: CheckOf<"metal-hydroxide">): Comparison[] {
  const constants = Object.entries(check.log10Beta).map(([n, b]) => ({
    components: { M: 1, "H+": -Number(n) },
    log10Beta: b - Number(n) * check.pKw,
  }));
  return check.points.map((p) =>
    compare(
      `${check.metal} at pH ${p.pH}`,
      log10Alpha(constants, "M", { "H+": -p.pH! }),
      p.expected,
      check.tolerance,
      p.disagreement,
    ),
  );
}

/** log10 alpha of a metal with a ligand and hydroxide together, the latter given as a log10 alpha at this pH. */
export function metalAlphaSum(check: CheckOf<"metal-alpha-sum">): Comparison[] {
  const hydroxo = Math.log10(10 ** check.log10AlphaOH - 1) - check.pH;
  const constants = [
    ...check.log10Beta.map((b, i) => ({ components: { M: 1, L: i + 1 }, log10Beta: b })),
    { components: { M: 1, "H+": -1 }, log10Beta: hydroxo },
  ];
  const alpha = log10Alpha(constants, "M", { L: Math.log10(check.free), "H+": -check.pH });
  return [compare(check.metal, alpha, check.expected, check.tolerance)];
}

/** Overall constants that a prepared system adds up from stepwise ones. */
export function cumulative(check: CheckOf<"cumulative">): Comparison[] {
  const plain = smallKnowledge(
    { M: 2, L: 0 },
    check.stepwise.map((k, i) => ({ components: { M: 1, L: i + 1 }, log10Beta: k })),
  );
  const steps = plain.species.filter((s) => "M" in s.components);
  const chained: Knowledge = {
    ...plain,
    species: steps.map((s, i) => ({ ...s, chain: steps.slice(0, i + 1).flatMap((step) => step.chain) })),
  };
  const system = prepareSystem(chained, ["M", "L"], { ionicStrengthMolPerL: 0.1, temperatureC: 25 });
  return check.expected.map((expected, i) => {
    const found = system.species.find((s) => s.components["M"] === 1 && s.components["L"] === i + 1)!;
    return compare(`${check.metal} beta${i + 1}`, found.log10Beta, expected, check.tolerance);
  });
}

/** pM along a titration curve by the curve calculator with the example's own constants. */
export function curve(check: CheckOf<"curve">, knowledge: Knowledge): Comparison[] {
  const { constants, log10H, sample, titrant, free, follow, points } = check;
  const answer = calculateCurve(
    { constants, log10H, sample, titrant, free, follow, volumesML: points.map((p) => p.volumeML!) },
    knowledge,
  );
  return points.map((p, i) =>
    compare(`${p.volumeML} mL`, answer.points[i]!.pM, p.expected, check.tolerance, p.disagreement),
  );
}

/** Free concentration of a component by the equilibrium calculator with the example's own constants. */
export function equilibriumPoint(check: CheckOf<"equilibrium-point">, knowledge: Knowledge): Comparison[] {
  const answer = calculateEquilibrium(check, knowledge);
  const found = answer.components.find((c) => c.id === check.component)!;
  return [
    compare(`free ${check.component} at log [H+] ${check.log10H}`, found.freeMolPerL, check.expected, check.tolerance),
  ];
}

/** log10 conditional constant by the equilibrium calculator, in the limit of traces. */
export function conditional(check: CheckOf<"conditional-constant">, knowledge: Knowledge): Comparison[] {
  const answer = calculateEquilibrium(
    {
      constants: check.constants,
      log10H: check.log10H,
      titrant: check.ligand,
      totals: { [check.metal]: 0, [check.ligand]: 0 },
      free: check.free,
    },
    knowledge,
  );
  const found = answer.conditional.find((c) => c.metal === check.metal)!;
  return [compare(`log K' at log [H+] ${check.log10H}`, found.log10ConditionalK, check.expected, check.tolerance)];
}

/** pM at which as much dye is bound as free, at a fixed concentration of free dye. */
export function transition(check: CheckOf<"transition">): Comparison[] {
  const system = givenSystem(check.constants, [check.metal, check.dye], smallKnowledge({}, []), 25);
  return check.points.map((p) => {
    const alpha = log10Alpha(
      check.constants.filter((c) => !(check.metal in c.components)),
      check.dye,
      { "H+": -p.pH! },
    );
    // The metal enters every bound species once: one unit of it binds this much dye.
    const lnFree = system.components.map((id) =>
      id === "H+" ? -p.pH! * Math.LN10 : id === check.metal ? 0 : Math.log(check.freeDyeMolPerL) - alpha * Math.LN10,
    );
    const ln = lnSpeciesAt(system, lnFree);
    const boundPerMetal = system.species.reduce(
      (sum, s, i) => (check.metal in s.components ? sum + (s.components[check.dye] ?? 0) * Math.exp(ln[i]!) : sum),
      0,
    );
    const pM = Math.log10(boundPerMetal / check.freeDyeMolPerL);
    return compare(`${check.metal} at pH ${p.pH}`, pM, p.expected, check.tolerance, p.disagreement);
  });
}

/** A 1:1 titration by its conditional constant; the explicit curve of M with L. */
function oneToOne(log10K: number, sampleMolPerL: number, titrantMolPerL: number) {
  const system = givenSystem(
    [{ components: { M: 1, L: 1 }, log10Beta: log10K }],
    ["M", "L"],
    smallKnowledge({}, []),
    25,
  );
  return explicitCurve({
    system,
    log10H: -7,
    sampleVolumeML: 50,
    sampleMolPerL: { M: sampleMolPerL },
    titrant: { component: "L", molPerL: titrantMolPerL },
    freeMolPerL: {},
    follow: "M",
  });
}

/** Titration error in percent at an end point in pM. */
export function titrationError(check: CheckOf<"titration-error">): Comparison[] {
  const found = oneToOne(check.log10K, check.sampleMolPerL, check.titrantMolPerL).atPM(check.endPointPM)!;
  const percent = ((found.volumeML * check.titrantMolPerL) / (50 * check.sampleMolPerL) - 1) * 100;
  return [compare(`error at pM ${check.endPointPM}`, percent, check.expectedPercent, check.tolerance)];
}

/** Titration error in percent when the end point lies `offsetPM` beyond equivalence, for log10 (c K') at equivalence. */
export function errorCriterion(check: CheckOf<"error-criterion">): Comparison[] {
  const c = 0.02; // equal strengths: 0.01 mol/L at equivalence
  const made = oneToOne(check.log10CK + 2, c, c);
  const found = made.atPM(made.at(50).pM + check.offsetPM)!;
  return [
    compare(
      `error at lg cK' ${check.log10CK}`,
      (found.volumeML / 50 - 1) * 100,
      check.expectedPercent,
      check.tolerance,
    ),
  ];
}

/** Lowest pH at which the conditional constant, with protons on EDTA alone, reaches a value. */
export function minimumPH(check: CheckOf<"minimum-pH">): Comparison[] {
  const constants = [{ components: { M: 1, EDTA: 1 }, log10Beta: check.log10K }, ...protonation("EDTA", check.pKa)];
  const system = givenSystem(constants, ["M", "EDTA"], smallKnowledge({}, []), 25);
  const log10K = (pH: number) =>
    conditionalConstantAt(system, [-pH * Math.LN10, TRACE, TRACE], "M", "EDTA")!.log10ConditionalK;
  let low = -1;
  let high = 14;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (log10K(middle) < check.log10ConditionalK) low = middle;
    else high = middle;
  }
  return [compare(check.metal, high, check.expected, check.tolerance)];
}

/** How many times the ion product exceeds the solubility product, for a 1:1 solid of the two components. */
export function supersaturation(check: CheckOf<"supersaturation">, knowledge: Knowledge): Comparison[] {
  const { components } = calculateEquilibrium(check, knowledge);
  const product = components.reduce((p, c) => p * c.freeMolPerL, 1);
  return [compare("ion product over solubility product", product * 10 ** check.pKsp, check.expected, check.tolerance)];
}
