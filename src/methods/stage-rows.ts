import type { PreparedSystem } from "../chemistry/types.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StagePlan } from "./types.ts";

/** Species to be added up: rows of the system, and how many of what is counted each holds. */
export interface RowSum {
  readonly rows: readonly number[];
  readonly counts: readonly number[];
}

type ByMetal = ReadonlyMap<ComponentId, RowSum>;

/** Which species of a prepared system count as what, by row, with the number of titrants, dyes or metals in each. */
export interface Rows {
  readonly unboundByMetal: ByMetal;
  /** Of these, the species in which no agent of the method (mask, auxiliary) holds the metal. */
  readonly unheldByMetal: ByMetal;
  readonly titrantFree: RowSum;
  readonly titrantByMetal: ByMetal;
  readonly dyeByMetal: ByMetal;
  readonly metalOnDye: ByMetal;
  readonly dyeFree: RowSum;
}

/** By what the species of a system are told apart. */
export interface RowKinds {
  readonly titrant: string;
  readonly dye: ComponentId | null;
  readonly metals: ReadonlySet<ComponentId>;
  readonly way: (species: Readonly<Record<ComponentId, number>>) => boolean;
  readonly agents: ReadonlySet<ComponentId>;
}

class RowList implements RowSum {
  readonly rows: number[] = [];
  readonly counts: number[] = [];
  push(row: number, count: number): void {
    this.rows.push(row);
    this.counts.push(count);
  }
}

/** The arrays of a composition are the same in every system made of it, whatever its ionic strength: what rows hold is found once. */
const remembered = new WeakMap<Int8Array, Map<string, Rows>>();

/**
 * Sorts the species of a system by what they hold: titrant, dye, metal, an agent of the method.
 * @param way names what `kinds.way` holds: the same composition, way and kinds give the same rows
 */
export function classifyRows(system: PreparedSystem, kinds: RowKinds, way: string): Rows {
  const { stoichiometry } = system.problem;
  let known = remembered.get(stoichiometry);
  if (known === undefined) remembered.set(stoichiometry, (known = new Map<string, Rows>()));
  const key = [kinds.titrant, kinds.dye ?? "", way, [...kinds.agents].join(), [...kinds.metals].join()].join(" ");
  const rows = known.get(key) ?? sorted(system, kinds);
  known.set(key, rows);
  return rows;
}

function sorted(system: PreparedSystem, { titrant, dye, metals, way, agents }: RowKinds): Rows {
  const titrantByMetal = new Map<ComponentId, RowList>();
  const dyeByMetal = new Map<ComponentId, RowList>();
  const metalOnDye = new Map<ComponentId, RowList>();
  const dyeFree = new RowList();
  const titrantFree = new RowList();
  const unboundByMetal = new Map<ComponentId, RowList>();
  const unheldByMetal = new Map<ComponentId, RowList>();
  const push = (map: Map<ComponentId, RowList>, key: ComponentId, row: number, count: number): void => {
    let list = map.get(key);
    if (list === undefined) map.set(key, (list = new RowList()));
    list.push(row, count);
  };
  system.rows.forEach((species, row) => {
    const inIt = Object.keys(species.components).filter((c) => metals.has(c));
    const titrants = species.components[titrant] ?? 0;
    if (titrants > 0) {
      if (inIt.length === 0) titrantFree.push(row, titrants);
      for (const metal of inIt) push(titrantByMetal, metal, row, titrants);
    } else if (!way(species.components)) {
      const byAgent = Object.keys(species.components).some((c) => agents.has(c));
      for (const metal of inIt) {
        push(unboundByMetal, metal, row, species.components[metal]!);
        if (!byAgent) push(unheldByMetal, metal, row, species.components[metal]!);
      }
    }
    const dyes = dye === null ? 0 : (species.components[dye] ?? 0);
    if (dyes > 0) {
      if (inIt.length === 0) dyeFree.push(row, dyes);
      for (const metal of inIt) {
        push(dyeByMetal, metal, row, dyes);
        push(metalOnDye, metal, row, species.components[metal]!);
      }
    }
  });
  return { titrantByMetal, titrantFree, unboundByMetal, unheldByMetal, dyeByMetal, metalOnDye, dyeFree };
}

/** Ligands that the masks and auxiliaries of a plan bring. */
export const agentComponents = (plan: StagePlan, knowledge: Knowledge): ReadonlySet<ComponentId> =>
  new Set(
    [...plan.masking.map((m) => m.agent), ...plan.auxiliary.map((a) => a.id)].flatMap((id) => {
      const component = knowledge.agents.get(id)?.component;
      return component ? [component] : [];
    }),
  );
