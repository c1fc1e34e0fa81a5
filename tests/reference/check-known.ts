import { bufferComposition, bufferModel } from "../../src/chemistry/buffer.ts";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import type { PreparedSystem } from "../../src/chemistry/types.ts";
import type { Knowledge } from "../../src/constants/knowledge.ts";
import type { CheckOf, Comparison } from "./example.ts";
import { compare } from "./example.ts";

type Amounts = Readonly<Record<string, number>>;

const nameOf = (parts: Amounts): string =>
  Object.entries(parts)
    .map(([id, n]) => (n === 1 ? id : `${id} x ${n}`))
    .join(" + ");

function log10Beta(system: PreparedSystem, parts: Amounts): number {
  const wanted = Object.entries(parts);
  const found = system.species.find(
    ({ components }) =>
      Object.keys(components).length === wanted.length && wanted.every(([id, n]) => components[id] === n),
  );
  return found?.log10Beta ?? Number.NaN;
}

/** A constant of the knowledge at the example's conditions, or of one step of it; NaN where the knowledge has none. */
export function knownConstant(check: CheckOf<"known-constant">, knowledge: Knowledge): Comparison[] {
  const { components, less, temperatureC, ionicStrengthMolPerL } = check;
  const ids = Object.keys(components).filter((id) => knowledge.components.has(id));
  const system = prepareSystem(knowledge, ids, { temperatureC, ionicStrengthMolPerL });
  const value = log10Beta(system, components) - (less === undefined ? 0 : log10Beta(system, less));
  return [compare(`log K ${nameOf(components)}`, value, check.expected, check.tolerance, check.disagreement)];
}

/** pKsp of a solid of the knowledge at 25 C and I = 0, over the hydroxide ion where it holds hydroxide. */
export function knownSolid(check: CheckOf<"known-solid">, knowledge: Knowledge): Comparison[] {
  const solid = knowledge.solids.find((s) => s.id === check.solid);
  if (solid === undefined) return [compare(check.solid, Number.NaN, check.expected, check.tolerance)];
  const system = prepareSystem(knowledge, Object.keys(solid.components), { temperatureC: 25, ionicStrengthMolPerL: 0 });
  const prepared = system.solids.find((s) => s.id === check.solid)!;
  const pKsp = prepared.log10Beta + Math.min(solid.components["H+"] ?? 0, 0) * system.log10Kw;
  return [compare(`pKsp ${check.solid}`, pKsp, check.expected, check.tolerance, check.disagreement)];
}

/** Rows of a published transition table, as the knowledge holds them. */
export function knownTransition(check: CheckOf<"known-transition">, knowledge: Knowledge): Comparison[] {
  const rows = knowledge.indicators.get(check.indicator)?.transitions.find((t) => t.ion === check.ion)?.points ?? [];
  return check.points.map((p) => {
    const pM = rows.find(([pH]) => pH === p.pH)?.[1] ?? Number.NaN;
    return compare(`${check.ion} at pH ${p.pH}`, pM, p.expected, check.tolerance, p.disagreement);
  });
}

/** A limit of volumetric ware. */
export function knownGlassware(check: CheckOf<"known-glassware">, knowledge: Knowledge): Comparison[] {
  const found = knowledge.glassware.find((g) => g.kind === check.ware && g.nominalML === check.nominalML);
  return [
    compare(
      `${check.ware} of ${check.nominalML} mL`,
      found?.toleranceML ?? Number.NaN,
      check.expected,
      check.tolerance,
    ),
  ];
}

/** The molar mass of a primary standard. */
export function knownMolarMass(check: CheckOf<"known-molar-mass">, knowledge: Knowledge): Comparison[] {
  const found = knowledge.standards.find((s) => s.id === check.standard);
  return [compare(check.standard, found?.molarMassGPerMol ?? Number.NaN, check.expected, check.tolerance)];
}

/** pH at which a buffer of the knowledge has the given share of base, concentrations for activities (I = 0). */
export function bufferPH(check: CheckOf<"buffer-pH">, knowledge: Knowledge): Comparison[] {
  const model = bufferModel(knowledge, knowledge.buffers.get(check.buffer)!, {
    temperatureC: 25,
    ionicStrengthMolPerL: 0,
  });
  const wanted = check.acidMolPerL / (check.acidMolPerL + check.baseMolPerL);
  let low = 0;
  let high = 14;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (bufferComposition(model, 1, middle).meanProtons > wanted) low = middle;
    else high = middle;
  }
  return [compare(`pH of ${check.buffer}`, low, check.expected, check.tolerance)];
}

/** Consequences of slowness that the knowledge has on record for an ion; 1 where it has, 0 where not. */
export function knownKinetics(check: CheckOf<"known-kinetics">, knowledge: Knowledge): Comparison[] {
  const held = new Set<string>(
    knowledge.kinetics
      .filter((k) => k.ion === check.ion && (k.titrant === check.titrant || k.titrant === null))
      .flatMap((k) => k.consequences),
  );
  return check.consequences.map((c) => compare(`${check.ion}: ${c}`, held.has(c) ? 1 : 0, 1, check.tolerance));
}
