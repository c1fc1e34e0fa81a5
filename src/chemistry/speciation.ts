import type { ComponentId, Knowledge, SpeciesId } from "../constants/knowledge.ts";
import { AppError } from "../errors.ts";
import { prepareSystem } from "./prepare-system.ts";
import type { Conditions, PreparedSystem } from "./types.ts";

/** The share of a component that is in one species, as part of its total over all dissolved species. */
export interface SpeciesFraction {
  readonly species: SpeciesId;
  readonly molPerL: number; // of the species
  readonly fraction: number; // atoms of the component in it over all
}

/** A conditional constant and the side-reaction coefficients it is made of, log10. */
export interface ConditionalConstant {
  readonly metal: ComponentId;
  readonly ligand: ComponentId;
  readonly log10K: number; // of the plain 1:1 complex, concentration constant
  readonly log10AlphaMetal: number; // everything the metal binds but this ligand
  readonly log10AlphaLigand: number; // protons and every other metal
  readonly log10AlphaComplex: number; // mixed and protonated forms of the 1:1 complex over the plain one
  readonly log10ConditionalK: number; // log10K - alphas of metal and ligand + alpha of the complex
  readonly uncertainty: number; // standard uncertainty of log10K, log10 units
}

/** ln concentrations (mol/L) of all species of `system` at ln free concentrations in column order; a fresh Float64Array in row order. */
export function lnSpeciesAt(system: PreparedSystem, lnFree: ArrayLike<number>): Float64Array {
  const { nComponents, nSpecies, stoichiometry, lnBeta } = system.problem;
  const out = new Float64Array(nSpecies);
  for (let i = 0; i < nSpecies; i++) {
    let ln = lnBeta[i]!;
    for (let j = 0; j < nComponents; j++) {
      const count = stoichiometry[i * nComponents + j]!;
      if (count !== 0) ln += count * lnFree[j]!;
    }
    out[i] = ln;
  }
  return out;
}

/**
 * log10 of the side-reaction coefficient of `component`: its concentration in all species (counted in atoms), without those that
 * also hold one of `without`, over its free concentration. `lnFree` in column order, ln mol/L.
 * Throws AppError "unknown-component" for a component that the system does not hold.
 */
export function log10SideReaction(
  system: PreparedSystem,
  lnFree: ArrayLike<number>,
  component: ComponentId,
  without: readonly ComponentId[] = [],
): number {
  const column = columnOf(system, component);
  const avoid = without.filter((id) => id !== component && system.index.has(id)).map((id) => columnOf(system, id));
  const { nComponents, stoichiometry } = system.problem;
  const ln = lnSpeciesAt(system, lnFree);
  let sum = 0;
  for (let i = 0; i < ln.length; i++) {
    const count = stoichiometry[i * nComponents + column]!;
    if (count > 0 && avoid.every((other) => stoichiometry[i * nComponents + other] === 0))
      sum += count * Math.exp(ln[i]! - lnFree[column]!);
  }
  return Math.log10(sum);
}

/** The species that hold `component`, with their shares of it, largest first; `lnFree` in column order, ln mol/L. */
export function fractionsOf(
  system: PreparedSystem,
  lnFree: ArrayLike<number>,
  component: ComponentId,
): SpeciesFraction[] {
  const column = columnOf(system, component);
  const { nComponents, stoichiometry } = system.problem;
  const ln = lnSpeciesAt(system, lnFree);
  const rows = system.species
    .map((species, i) => ({ species: species.id, ln: ln[i]!, count: stoichiometry[i * nComponents + column]! }))
    .filter((row) => row.count > 0);
  const largest = Math.max(...rows.map((row) => row.ln));
  const total = rows.reduce((sum, row) => sum + row.count * Math.exp(row.ln - largest), 0);
  return rows
    .map((row) => ({
      species: row.species,
      molPerL: Math.exp(row.ln),
      fraction: (row.count * Math.exp(row.ln - largest)) / total,
    }))
    .sort((a, b) => b.fraction - a.fraction);
}

/**
 * Conditional constant of the 1:1 complex of `metal` and `ligand` in a system at the given ln free concentrations (column order),
 * from the same species list as everything else. Null where the system holds no complex of one metal with one ligand.
 * The reference is the plain complex ML; where only protonated or mixed 1:1 forms exist, the most stable of them.
 */
export function conditionalConstantAt(
  system: PreparedSystem,
  lnFree: ArrayLike<number>,
  metal: ComponentId,
  ligand: ComponentId,
): ConditionalConstant | null {
  const m = columnOf(system, metal);
  const l = columnOf(system, ligand);
  const { nComponents, stoichiometry } = system.problem;
  const ln = lnSpeciesAt(system, lnFree);
  let lnSum = Number.NEGATIVE_INFINITY;
  let reference = -1;
  for (let i = 0; i < ln.length; i++) {
    if (stoichiometry[i * nComponents + m] !== 1 || stoichiometry[i * nComponents + l] !== 1) continue;
    if (holdsOtherMetal(system, i, m)) continue;
    lnSum = lnSum === Number.NEGATIVE_INFINITY ? ln[i]! : logAdd(lnSum, ln[i]!);
    const plain = Object.keys(system.species[i]!.components).length === 2;
    if (plain || reference < 0 || (!isPlain(system, reference) && ln[i]! > ln[reference]!)) reference = i;
  }
  if (reference < 0) return null;
  const log10K = (ln[reference]! - lnFree[m]! - lnFree[l]!) / Math.LN10;
  const log10AlphaComplex = (lnSum - ln[reference]!) / Math.LN10;
  const log10AlphaMetal = log10SideReaction(system, lnFree, metal, [ligand]);
  const log10AlphaLigand = log10SideReaction(system, lnFree, ligand, [metal]);
  return {
    metal,
    ligand,
    log10K,
    log10AlphaMetal,
    log10AlphaLigand,
    log10AlphaComplex,
    log10ConditionalK: log10K + log10AlphaComplex - log10AlphaMetal - log10AlphaLigand,
    uncertainty: system.species[reference]!.uncertainty,
  };
}

/** What a conditional constant is asked for: free ligands and metals other than the pair, mol/L. */
export interface ConditionalRequest {
  readonly metal: ComponentId;
  readonly ligand: ComponentId;
  readonly pH: number; // activity
  readonly free?: Readonly<Record<ComponentId, number>>;
  readonly conditions: Conditions;
}

/** log of a concentration so small that no polynuclear or second-metal species of the asked component counts: the limit of traces. */
const LN_TRACE = -80;

/**
 * Conditional constant of a metal and a ligand at a pH and free concentrations of everything else (mol/L), in the limit of traces
 * of the pair itself (no polynuclear species). Null where the knowledge holds no complex of the two. Throws AppError "unknown-component".
 */
export function conditionalConstant(knowledge: Knowledge, request: ConditionalRequest): ConditionalConstant | null {
  const free = Object.entries(request.free ?? {}).filter(([, molPerL]) => molPerL > 0);
  const ids = [request.metal, request.ligand, ...free.map(([id]) => id)];
  const system = prepareSystem(knowledge, ids, request.conditions, { solids: () => false });
  const freeOf = new Map(free);
  const lnFree = Float64Array.from(system.components, (id) => {
    if (id === "H+") return (-request.pH - system.log10GammaH) * Math.LN10;
    const held = freeOf.get(id);
    return held === undefined || id === request.metal || id === request.ligand ? LN_TRACE : Math.log(held);
  });
  return conditionalConstantAt(system, lnFree, request.metal, request.ligand);
}

function isPlain(system: PreparedSystem, row: number): boolean {
  return Object.keys(system.species[row]!.components).length === 2;
}

/** Whether a species binds the ligand to another metal too: such a species is a side reaction, not a form of the complex. */
function holdsOtherMetal(system: PreparedSystem, row: number, metalColumn: number): boolean {
  const metal = system.components[metalColumn]!;
  return Object.entries(system.species[row]!.components).some(
    ([id, count]) => id !== metal && id !== "H+" && count > 0 && chargeOfComponent(system, id) > 0,
  );
}

function chargeOfComponent(system: PreparedSystem, id: ComponentId): number {
  return system.charges[columnOf(system, id)]!; // the first rows are the free components
}

function columnOf(system: PreparedSystem, id: ComponentId): number {
  const column = system.index.get(id);
  if (column === undefined)
    throw new AppError("unknown-component", `component ${id} is not in the system`, { component: id });
  return column;
}

function logAdd(a: number, b: number): number {
  const high = Math.max(a, b);
  return high + Math.log1p(Math.exp(Math.min(a, b) - high));
}
