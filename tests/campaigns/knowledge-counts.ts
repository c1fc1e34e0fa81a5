import type { Basis, Knowledge } from "../../src/constants/knowledge.ts";

/** How many values the knowledge holds, on what they rest, how many gaps it names, and how many metal ions it knows. */
export function knowledgeCounts(knowledge: Knowledge): Readonly<Record<string, number>> {
  const bases = new Map<Basis, number>();
  const walk = (value: unknown): void => {
    if (typeof value !== "object" || value === null) return;
    if (value instanceof Map) value.forEach(walk);
    else if ("basis" in value && "source" in value && "confidence" in value) {
      const basis = value.basis as Basis;
      bases.set(basis, (bases.get(basis) ?? 0) + 1);
    }
    for (const member of Object.values(value)) walk(member);
  };
  walk(knowledge);
  const constants = [...knowledge.reactions.values()].flatMap(({ records }) => records);
  const ofBasis = (basis: Basis): number => constants.filter(({ provenance }) => provenance.basis === basis).length;
  return {
    metalIons: [...knowledge.components.values()].filter(({ kind }) => kind === "metal").length,
    constantsRead: ofBasis("read"),
    constantsFromMemory: ofBasis("memory"),
    constantsComputed: ofBasis("computed"),
    allValuesRead: bases.get("read") ?? 0,
    allValuesFromMemory: bases.get("memory") ?? 0,
    allValuesComputed: bases.get("computed") ?? 0,
    gapsNamed: knowledge.remarks.filter(({ kind }) => kind === "gap").length,
  };
}
