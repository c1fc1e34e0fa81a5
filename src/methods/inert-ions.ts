import type { ComponentId, Knowledge } from "../constants/knowledge.ts";

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
