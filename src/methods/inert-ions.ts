import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Task } from "./types.ts";

/** Ions of a composition (mol/L) that take no part but carry charge (perchlorate, …): sums of c·z² and c·z, mol/L. */
export function inertIonsOf(
  totals: ReadonlyMap<ComponentId, number>,
  knowledge: Knowledge,
): { readonly cz2: number; readonly cz: number } {
  let cz2 = 0;
  let cz = 0;
  for (const [id, molPerL] of totals) {
    const component = knowledge.components.get(id);
    if (component?.kind !== "inert") continue;
    cz2 += molPerL * component.charge ** 2;
    cz += molPerL * component.charge;
  }
  return { cz2, cz };
}

/** Ions that chemists add or ignore as salt: they bind next to nothing (common practice). */
const SALT_IONS: ReadonlySet<ComponentId> = new Set(["Li+", "Na+", "K+", "Rb+", "Cs+", "nitrate"]);
/** Less salt than this in a sample, mol/L, is drowned by buffer and titrant in the vessel. */
const LEAST_SALT_MOL_PER_L = 2e-3;

/** The nearest preferred number of the R10 series (ISO 3): steps of a quarter. */
const inSteps = (molPerL: number): number =>
  molPerL < LEAST_SALT_MOL_PER_L ? 0 : 10 ** (Math.round(10 * Math.log10(molPerL)) / 10);

/**
 * What is to be added to the sums of c·z² and c·z of a sample (mol/L of the sample) so that its salt, the ions that take no part, counts
 * in steps of the R10 series, cations and anions each for themselves. Salt is seldom known better, half a step at 0.1 mol/L moves the
 * log K of EDTA with a trivalent ion by 0.06, within the activity model; and a millimole more or less does not change a method for another.
 */
export function saltSteps(task: Task, knowledge: Knowledge): { readonly cz2: number; readonly cz: number } {
  let cations = 0;
  let anions = 0;
  let cz2 = 0;
  for (const { component, molPerL } of [...task.analytes, ...task.matrix]) {
    const record = knowledge.components.get(component);
    if (record === undefined || !(record.kind === "inert" || SALT_IONS.has(component))) continue;
    if (record.charge > 0) cations += molPerL * record.charge;
    else anions -= molPerL * record.charge;
    cz2 += molPerL * record.charge ** 2;
  }
  if (cz2 === 0) return { cz2: 0, cz: 0 };
  const rounded = { cations: inSteps(cations), anions: inSteps(anions) };
  // Ions of two charges (selenate) keep their weight beside those of one.
  const weight = cz2 / (cations + anions);
  return {
    cz2: weight * (rounded.cations + rounded.anions) - cz2,
    cz: rounded.cations - rounded.anions - (cations - anions),
  };
}
