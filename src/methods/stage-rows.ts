import type { PreparedSystem } from "../chemistry/types.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StagePlan } from "./types.ts";

/** Which species of a prepared system count as what, by row, with the number of titrants, dyes or metals in each. */
export interface Rows {
  readonly unboundByMetal: ReadonlyMap<ComponentId, readonly (readonly [row: number, metals: number])[]>;
  /** Of these, the species in which no agent of the method (mask, auxiliary) holds the metal. */
  readonly unheldByMetal: ReadonlyMap<ComponentId, readonly (readonly [row: number, metals: number])[]>;
  readonly titrantFree: readonly (readonly [row: number, titrants: number])[];
  readonly titrantByMetal: ReadonlyMap<ComponentId, readonly (readonly [row: number, titrants: number])[]>;
  readonly dyeByMetal: ReadonlyMap<ComponentId, readonly (readonly [row: number, dyes: number])[]>;
  readonly metalOnDye: ReadonlyMap<ComponentId, readonly (readonly [row: number, metals: number])[]>;
  readonly dyeFree: readonly (readonly [row: number, dyes: number])[];
}

/** Sorts the species of a system by what they hold: titrant, dye, metal, an agent of the method. */
export function classifyRows(
  system: PreparedSystem,
  titrant: string,
  dye: ComponentId | null,
  metals: ReadonlySet<ComponentId>,
  held: {
    readonly way: (species: Readonly<Record<ComponentId, number>>) => boolean;
    readonly agents: ReadonlySet<ComponentId>;
  },
): Rows {
  const titrantByMetal = new Map<ComponentId, [number, number][]>();
  const dyeByMetal = new Map<ComponentId, [number, number][]>();
  const metalOnDye = new Map<ComponentId, [number, number][]>();
  const dyeFree: [number, number][] = [];
  const titrantFree: [number, number][] = [];
  const unboundByMetal = new Map<ComponentId, [number, number][]>();
  const unheldByMetal = new Map<ComponentId, [number, number][]>();
  const push = (map: Map<ComponentId, [number, number][]>, key: ComponentId, value: [number, number]): void => {
    const list = map.get(key);
    if (list) list.push(value);
    else map.set(key, [value]);
  };
  system.species.forEach((species, row) => {
    const inIt = Object.keys(species.components).filter((c) => metals.has(c));
    const titrants = species.components[titrant] ?? 0;
    if (titrants > 0) {
      if (inIt.length === 0) titrantFree.push([row, titrants]);
      for (const metal of inIt) push(titrantByMetal, metal, [row, titrants]);
    } else if (!held.way(species.components)) {
      const byAgent = Object.keys(species.components).some((c) => held.agents.has(c));
      for (const metal of inIt) {
        push(unboundByMetal, metal, [row, species.components[metal]!]);
        if (!byAgent) push(unheldByMetal, metal, [row, species.components[metal]!]);
      }
    }
    const dyes = dye === null ? 0 : (species.components[dye] ?? 0);
    if (dyes > 0) {
      if (inIt.length === 0) dyeFree.push([row, dyes]);
      for (const metal of inIt) {
        push(dyeByMetal, metal, [row, dyes]);
        push(metalOnDye, metal, [row, species.components[metal]!]);
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
