import { describe, expect, test } from "vitest";
import { DataError } from "../../src/errors.ts";
import { loadEquilibria, REACTION_FILES } from "../../src/constants/load-equilibria.ts";
import { equilibria, readDataText, withEdited } from "./read-equilibria.ts";

const metalsWithSpecies = equilibria.components.filter(
  (component) => component.kind === "metal" && equilibria.species.some((species) => component.id in species.components),
);

describe("loadEquilibria", () => {
  test("brings at least 45 metal ions that form something", () => {
    expect(metalsWithSpecies.length).toBeGreaterThanOrEqual(45);
  });

  test.each(["EDTA", "CDTA", "EGTA", "DTPA", "HEDTA", "NTA", "TTHA", "trien"])(
    "binds metals with the titrant %s",
    (id) => {
      const metals = metalsWithSpecies.filter((metal) =>
        equilibria.species.some((species) => metal.id in species.components && id in species.components),
      );
      expect(metals.length).toBeGreaterThanOrEqual(10);
    },
  );

  test.each([
    "acetate",
    "ammonia",
    "borate",
    "tris",
    "glycine",
    "formate",
    "chloroacetate",
    "imidazole",
    "ethanolamine",
    "triethanolamine",
    "hexamine",
    "diethylamine",
    "piperidine",
    "carbonate",
  ])("protonates the buffer %s", (id) => {
    expect(equilibria.species.some(({ components }) => components[id] === 1 && components["H+"] === 1)).toBe(true);
  });

  test("gives every species integer counts that fit eight bits", () => {
    for (const { components } of [...equilibria.species, ...equilibria.solids]) {
      for (const count of Object.values(components))
        expect(Number.isInteger(count) && Math.abs(count) <= 127).toBe(true);
    }
  });

  test("gives every species the charge its components add up to", () => {
    const charges = new Map(equilibria.components.map((component) => [component.id, component.charge]));
    for (const species of equilibria.species) {
      const sum = Object.entries(species.components).reduce((z, [id, n]) => z + n * charges.get(id)!, 0);
      expect(species.charge, species.id).toBe(sum);
    }
  });

  test("cites every source it lists and lists every source it cites", () => {
    const cited = new Set([
      ...equilibria.reactions.flatMap((r) => [...r.records, ...r.enthalpies].map((record) => record.provenance.source)),
      ...equilibria.solids.map((solid) => solid.provenance.source),
    ]);
    expect([...cited].sort()).toEqual(equilibria.sources.map((source) => source.id).sort());
  });

  test("carries the acknowledgement of the database: source, as is, modified work, what was changed and when", () => {
    const notice = equilibria.sources.find((source) => source.id === "nist-srd-46")?.notice ?? "";
    for (const part of [
      "NIST is acknowledged as the source",
      "as is",
      "without warranty",
      "modified work",
      "December 2026",
      "values in parentheses flagged",
    ]) {
      expect(notice).toContain(part);
    }
    for (const name of [...REACTION_FILES, "equilibria-species.json", "solids.json"]) {
      expect((JSON.parse(readDataText(name)) as { notice: string }).notice, name).toBe(notice);
    }
  });

  test("says of every value whether it was read, recalled or computed, and names the record of every value read from the database", () => {
    for (const { records } of equilibria.reactions) {
      for (const { provenance } of records) {
        expect(["read", "memory", "computed"]).toContain(provenance.basis);
        if (provenance.source === "nist-srd-46") expect(provenance.record).toMatch(/^\d+( and \d+)?$/);
      }
    }
  });

  test("lists the usual ion of each component among its forms, whose charges follow from the protons they carry", () => {
    for (const component of equilibria.components) {
      expect(
        component.forms.some((form) => form.spelling === component.ion),
        component.id,
      ).toBe(true);
      for (const form of component.forms) {
        const perComponent = form.charge / form.componentsPerFormula;
        expect(perComponent, form.spelling).toBe(component.charge + form.protonsPerComponent);
      }
    }
  });
});

describe("loadEquilibria refuses", () => {
  const faults: readonly [string, string, (content: never) => void, RegExp][] = [
    [
      "a reaction that does not balance",
      "equilibria-hydroxide.json",
      (c: { reactions: { terms: [number, object][] }[] }) => (c.reactions[0]!.terms[2]![0] = -2),
      /reactions\[0\]\.terms.*does not balance/,
    ],
    [
      "an unknown component",
      "equilibria-hydroxide.json",
      (c: { reactions: { terms: [number, object][] }[] }) => (c.reactions[1]!.terms[0]![1] = { Unobtainium: 1 }),
      /unknown component "Unobtainium"/,
    ],
    [
      "an error column it cannot read",
      "equilibria-hydroxide.json",
      (c: { reactions: { logK: unknown[][] }[] }) => (c.reactions[0]!.logK[0]![4] = "about 3"),
      /reactions\[0\]\.logK/,
    ],
    [
      "a value that is not a number as printed",
      "equilibria-dyes.json",
      (c: { reactions: { logK?: unknown[][] }[] }) => (c.reactions.find((r) => r.logK)!.logK![0]![1] = 4.5),
      /logK/,
    ],
    [
      "a reaction that stands twice",
      "equilibria-dyes.json",
      (c: { reactions: { id: string }[] }) => (c.reactions[1]!.id = c.reactions[0]!.id),
      /reactions\[1\]\.id.*stands twice/,
    ],
    [
      "a misspelt key",
      "equilibria-dyes.json",
      (c: { reactions: Record<string, unknown>[] }) => (c.reactions[2]!["logk"] = []),
      /reactions\[2\].*logk/i,
    ],
    [
      "a species with a wrong factor",
      "equilibria-species.json",
      (c: { species: { chain: [string, number][] }[] }) => (c.species[5]!.chain[0]![1] += 1),
      /species\[5\]\.chain.*adds up to/,
    ],
    [
      "a species with a wrong composition",
      "equilibria-species.json",
      (c: { species: { components: Record<string, number> }[] }) => (c.species[5]!.components["H+"] = 9),
      /species\[5\]\.chain.*expected/,
    ],
    [
      "a chain through a reaction that does not exist",
      "equilibria-species.json",
      (c: { species: { chain: [string, number][] }[] }) => (c.species[0]!.chain[0]![0] = "none"),
      /unknown reaction "none"/,
    ],
    [
      "an empty chain",
      "equilibria-species.json",
      (c: { species: { chain: unknown[] }[] }) => (c.species[0]!.chain = []),
      /species\[0\]\.chain/,
    ],
    [
      "a solid whose source is not listed",
      "solids.json",
      (c: { solids: { provenance: { source: string } }[] }) => (c.solids[0]!.provenance.source = "nobody"),
      /unknown source "nobody"/,
    ],
    [
      "a solid made from a dissolved species",
      "solids.json",
      (c: { solids: { chain: [string, number][] }[] }) => (c.solids[0]!.chain = [["hydroxide H+ [HL]/([L][H])", -1]]),
      /solids\[0\]\.chain/,
    ],
    [
      "a value from a source that is not listed",
      "equilibria-dyes.json",
      (c: { reactions: { single?: { source: string }[] }[] }) =>
        (c.reactions.find((r) => r.single)!.single![0]!.source = "hearsay"),
      /unknown source "hearsay"/,
    ],
    [
      "a component that stands twice",
      "components.json",
      (c: { components: { id: string }[] }) => (c.components[3]!.id = c.components[2]!.id),
      /components\[3\]\.id.*stands twice/,
    ],
  ] as never;

  test.each(faults)("%s, and says where", (_, file, edit, message) => {
    const load = () => loadEquilibria(withEdited(file, edit));
    expect(load).toThrow(DataError);
    expect(load).toThrow(message);
    expect(load).toThrow(file);
  });

  test("none of the files as they are", () => {
    expect(() => loadEquilibria(withEdited("components.json", () => undefined))).not.toThrow();
  });

  test("a file that is not JSON", () => {
    expect(() => loadEquilibria((name) => (name === "solids.json" ? "{" : readDataText(name)))).toThrow(/solids\.json/);
  });
});
