import { transitionPM } from "../chemistry/end-point.ts";
import type { ComponentId, IndicatorRecord, Knowledge } from "../constants/knowledge.ts";
import { dyeComponentOf } from "./solution.ts";

/** A published transition at one pH. */
interface TableEntry {
  readonly pM: number;
  readonly counts: "free-ion" | "not-bound-to-titrant";
  readonly metalsPerDye: 1 | 2;
}

/** On what the colour of a dye beside each metal is calculated. */
export interface DyeBasis {
  /** The dye as a ligand of the equilibrium; null when no metal present has constants with it. */
  readonly dye: ComponentId | null;
  readonly byConstants: ReadonlySet<ComponentId>;
  /** Published pM at half change at this pH. */
  readonly byTable: ReadonlyMap<ComponentId, TableEntry>;
}

/** Metals with which a dye has constants, by dye component. */
const metalsByDye = new WeakMap<Knowledge, Map<ComponentId, Set<ComponentId>>>();

function metalsWithConstants(knowledge: Knowledge, dye: ComponentId): ReadonlySet<ComponentId> {
  let byDye = metalsByDye.get(knowledge);
  if (!byDye) {
    byDye = new Map();
    for (const species of knowledge.species) {
      const names = Object.keys(species.components);
      const dyes = names.filter((c) => knowledge.components.get(c)?.kind === "dye" || knowledge.indicators.has(c));
      for (const d of dyes) {
        const set = byDye.get(d) ?? new Set<ComponentId>();
        for (const c of names) if (knowledge.components.get(c)?.kind === "metal") set.add(c);
        byDye.set(d, set);
      }
    }
    metalsByDye.set(knowledge, byDye);
  }
  return byDye.get(dye) ?? new Set();
}

/**
 * Decides metal by metal whether the dye is calculated from its constants or from a published transition table.
 * A table, which was measured as an end point, goes before constants of the same pair: the tables of xylenol orange and
 * murexide are not reproduced by single 1:1 constants (their slopes against pH show other species).
 */
export function pickDyeBasis(
  knowledge: Knowledge,
  indicator: IndicatorRecord,
  pH: number,
  metals: ReadonlySet<ComponentId>,
): DyeBasis {
  const dye = dyeComponentOf(indicator.id);
  const withConstants = indicator.hasConstants ? metalsWithConstants(knowledge, dye) : new Set<ComponentId>();
  const byTable = new Map<ComponentId, TableEntry>();
  const byConstants = new Set<ComponentId>();
  for (const metal of metals) {
    const table = indicator.transitions.find((t) => t.ion === metal);
    const pM = table ? transitionPM(table.points, pH) : null;
    // Azo dyes of the mordant type are reproduced by their constants within 0.1 (worked example IN-01), and the
    // constants let the dye's amount and 1:2 complexes count; there the constants go first.
    if (table && pM !== null && !(indicator.class === "azo" && withConstants.has(metal)))
      byTable.set(metal, { pM, counts: table.counts, metalsPerDye: table.metalsPerDye ?? 1 });
    else if (withConstants.has(metal)) byConstants.add(metal);
  }
  return { dye: byConstants.size > 0 ? dye : null, byConstants, byTable };
}
