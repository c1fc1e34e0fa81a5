import { describe, expect, test } from "vitest";
import { chainReaction } from "../../src/constants/chain-reactions.ts";
import { chooseChains, compositionKey, derivations, reactionWeight } from "../../src/constants/choose-chains.ts";
import type { FileReaction } from "../../src/constants/equilibria-schema.ts";
import { REACTION_FILES } from "../../src/constants/load-equilibria.ts";
import { comparedReaction } from "../../src/constants/neighbour-values.ts";
import { equilibria, readDataText, reaction } from "./read-equilibria.ts";

const entries = REACTION_FILES.flatMap(
  (name) => (JSON.parse(readDataText(name)) as { reactions: FileReaction[] }).reactions,
);
const componentIds = equilibria.components.map((component) => component.id);
const derived = chooseChains(entries.map(chainReaction), componentIds);

const asText = (chain: readonly (readonly [string, number])[]): string =>
  chain.map(([id, n]) => `${n} x ${id}`).join(" + ");

describe("the chains of the species file", () => {
  test("are those that the rule chooses, species by species", () => {
    for (const { id, components, chain } of equilibria.species) {
      const chosen = derived.get(compositionKey(components));
      expect(asText(chain.map(({ reaction: r, factor }) => [r, factor])), id).toBe(asText(chosen?.chain ?? []));
    }
  });

  test("leave out no composition that the reactions reach", () => {
    const stored = new Set(equilibria.species.map(({ components }) => compositionKey(components)));
    const missing = [...derived].filter(([key, { chain }]) => chain.length > 0 && !stored.has(key)).map(([key]) => key);
    expect(missing).toEqual([]);
  });

  test("do not depend on the order of the reactions", () => {
    const backwards = chooseChains([...entries].reverse().map(chainReaction), [...componentIds].reverse());
    expect(backwards.size).toBe(derived.size);
    for (const [key, { chain }] of derived) expect(asText(backwards.get(key)!.chain)).toBe(asText(chain));
  });

  test("have every other route that ends more than 0.3 away named in a remark", () => {
    const log10K = new Map(equilibria.reactions.map((r) => [r.id, comparedReaction(r)?.log10K]));
    const beta = (chain: readonly (readonly [string, number])[]) =>
      chain.reduce((sum, [id, n]) => sum + n * log10K.get(id)!, 0);
    const named = equilibria.remarks.map((remark) => `${remark.about} ${remark.text}`).join("\n");
    let routes = 0;
    for (const entry of entries.filter((candidate) => reaction(candidate.id).records.length > 0)) {
      for (const route of derivations(entry, derived)) {
        const chosen = derived.get(compositionKey(route.components));
        if (chosen === undefined || chosen.chain.length === 0) continue;
        routes++;
        const apart = Math.abs(beta(route.chain) - beta(chosen.chain));
        if (apart > 0.3 && !named.includes(entry.id))
          expect.fail(`${entry.id} ends ${apart.toFixed(2)} away and is not remarked`);
      }
    }
    expect(routes).toBeGreaterThan(equilibria.species.length);
  });
});

describe("chooseChains", () => {
  const [M, L, ML, HL] = [{ M: 1 }, { L: 1 }, { M: 1, L: 1 }, { L: 1, "H+": 1 }];
  const direct = {
    id: "direct",
    terms: [
      [1, ML],
      [-1, M],
      [-1, L],
    ] as const,
    usable: true,
    weight: 1,
  };
  const protonation = {
    id: "protonation",
    terms: [
      [1, HL],
      [-1, L],
      [-1, { "H+": 1 }],
    ] as const,
    usable: true,
    weight: 1,
  };
  const release = {
    id: "release",
    terms: [
      [1, ML],
      [1, { "H+": 1 }],
      [-1, M],
      [-1, HL],
    ] as const,
    usable: true,
    weight: 1,
  };
  const ids = ["H+", "M", "L"];
  const chainOf = (reactions: Parameters<typeof chooseChains>[0]) => chooseChains(reactions, ids).get("L:1 M:1")?.chain;

  test("takes the shorter of two routes", () => {
    expect(chainOf([release, protonation, direct])).toEqual([["direct", 1]]);
  });

  test("takes the longer route where the shorter one is doubtful", () => {
    const doubtful = {
      ...direct,
      weight: reactionWeight({ allDoubtful: true, nearUsualConditions: false, read: true }),
    };
    expect(chainOf([doubtful, release, protonation])).toEqual([
      ["protonation", 1],
      ["release", 1],
    ]);
  });

  test("reaches nothing through a reaction that is not usable", () => {
    expect(chainOf([{ ...direct, usable: false }])).toBeUndefined();
    expect(chainOf([direct])).toBeDefined();
  });

  test("halves the chain of a dimer's reaction written for two", () => {
    const dimer = {
      id: "dimer",
      terms: [
        [2, { M: 1, L: 2 }],
        [-2, ML],
        [-2, L],
      ] as const,
      usable: true,
      weight: 1,
    };
    expect(chooseChains([direct, dimer], ids).get("L:2 M:1")?.chain).toEqual([
      ["dimer", 0.5],
      ["direct", 1],
    ]);
  });

  test("does not derive a free component from the complexes made of it", () => {
    expect(chooseChains([direct, release, protonation], ids).get("L:1")?.chain).toEqual([]);
  });
});

describe("compositionKey", () => {
  test("does not depend on the order of entries and drops zeros", () => {
    expect(compositionKey({ b: 2, a: 1, c: 0 })).toBe(compositionKey({ a: 1, b: 2 }));
    expect(compositionKey({ a: 1, b: 2 })).not.toBe(compositionKey({ a: 2, b: 1 }));
  });
});
