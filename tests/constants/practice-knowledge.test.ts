import { describe, expect, test } from "vitest";
import { citedSources } from "../../src/constants/join-knowledge.ts";
import { buildKnowledge, loadContractIds, loadKnowledge, readDataFile } from "../../src/constants/load-knowledge.ts";
import { dyeComponentOf } from "../../src/constants/resolve-ions.ts";
import { vocabularyCoverage } from "../../src/constants/vocabulary-coverage.ts";
import { DataError } from "../../src/errors.ts";
import { expectRelative } from "../expect-relative.ts";

const knowledge = loadKnowledge();
const edited = (name: string, edit: (rows: Record<string, unknown>[]) => void) => (file: string) => {
  if (file !== name) return readDataFile(file);
  const rows = JSON.parse(readDataFile(name)) as Record<string, unknown>[];
  edit(rows);
  return JSON.stringify(rows);
};

describe("loadKnowledge", () => {
  test("gives the same object again, frozen through and through", () => {
    expect(loadKnowledge()).toBe(knowledge);
    expect(Object.isFrozen(knowledge.masking[0]?.provenance)).toBe(true);
    expect(Object.isFrozen(knowledge.indicators.get("PAN")?.colours)).toBe(true);
    expect(() => (knowledge.buffers as Map<string, unknown>).delete("ammonia")).toThrow(TypeError);
  });

  test("resolves every ion of the practice rows to a component, or remarks that it is outside the model", () => {
    const remarked = new Set(knowledge.remarks.filter((r) => r.text.startsWith("Outside the")).map((r) => r.about));
    const ions = [
      ...knowledge.masking.map((m) => m.ion),
      ...knowledge.kinetics.map((k) => k.ion),
      ...knowledge.ionFacts.map((f) => f.ion),
      ...knowledge.metalTitrants.keys(),
      ...[...knowledge.indicators.values()].flatMap((i) => [
        ...i.uses.flatMap((u) => u.ions),
        ...i.blockers.map((b) => b.ion),
        ...i.transitions.map((t) => t.ion),
      ]),
    ];
    for (const ion of ions) expect(knowledge.components.has(ion) || remarked.has(ion), ion).toBe(true);
    expect(ions.length).toBeGreaterThan(1000);
  });

  test("takes two spellings of one component for one", () => {
    const zirconium = [...knowledge.components.values()].find((c) => c.forms.some((f) => f.spelling === "ZrO2+"));
    const rows = knowledge.masking.filter((m) => m.ion === zirconium?.id);
    expect(rows.length).toBeGreaterThan(0);
    expect(knowledge.masking.some((m) => m.ion === "ZrO2+" && zirconium?.id !== "ZrO2+")).toBe(false);
  });

  test("claims constants only for dyes that are in the model, with a metal", () => {
    const withDye = [...knowledge.indicators.values()].filter((i) => i.hasConstants).map((i) => dyeComponentOf(i.id));
    expect(withDye.length).toBeGreaterThanOrEqual(14);
    for (const dye of withDye) {
      const metals = knowledge.species.filter(
        (s) =>
          dye in s.components && Object.keys(s.components).some((c) => knowledge.components.get(c)?.kind === "metal"),
      );
      expect(metals.length, dye).toBeGreaterThan(0);
    }
    expect(knowledge.indicators.get("dithizone")?.hasConstants).toBe(false);
  });

  test("cites every source it lists, and lists every source it cites", () => {
    // Atomic weights are joined to numbers: their source is seen in the file.
    const cited = new Set([
      ...citedSources(knowledge),
      ...citedSources(JSON.parse(readDataFile("atomic-weights.json"))),
    ]);
    expect([...cited].sort()).toEqual([...knowledge.sources.keys()].sort());
    expect(knowledge.sources.get("nist-srd-46")?.notice).toContain("NIST");
  });

  test("has at least 25 practice remarks of every kind that a reader must see, gaps and disagreements among them", () => {
    const kinds = new Map<string, number>();
    for (const { kind } of knowledge.remarks) kinds.set(kind, (kinds.get(kind) ?? 0) + 1);
    expect(kinds.get("gap")).toBeGreaterThanOrEqual(25);
    expect(kinds.get("disagreement")).toBeGreaterThanOrEqual(25);
    expect(kinds.get("unusable")).toBeGreaterThanOrEqual(1);
  });

  test("gives atomic weights that agree with the masses of the components", () => {
    expectRelative(knowledge.atomicWeights.get("Zn") ?? Number.NaN, 65.38, 1e-6);
    for (const metal of ["Mg2+", "Ca2+", "Cu2+", "Zn2+", "Pb2+", "Bi3+", "La3+", "Th4+", "Co2+", "Sn4+", "Zr4+"])
      expectRelative(
        knowledge.components.get(metal)?.molarMassGPerMol ?? Number.NaN,
        knowledge.atomicWeights.get(metal.replace(/\d*\+$/, "")) ?? Number.NaN,
        2e-4,
      );
  });
});

describe("the hash of the knowledge", () => {
  test("is a sha256, the same for the same files, another when a figure changes", () => {
    expect(knowledge.hash).toMatch(/^[0-9a-f]{64}$/);
    expect(buildKnowledge(readDataFile).hash).toBe(knowledge.hash);
    const other = buildKnowledge(
      edited("buffers.json", (rows) => Object.assign(rows[3] ?? {}, { workingPH: [1.8, 3.5] })),
    );
    expect(other.hash).not.toBe(knowledge.hash);
  });

  test("does not depend on the kind of line ends", () => {
    expect(buildKnowledge((name) => readDataFile(name).replaceAll("\n", "\r\n")).hash).toBe(knowledge.hash);
  });
});

describe("a broken reference", () => {
  const faults: [string, string, (rows: Record<string, unknown>[]) => void, RegExp][] = [
    [
      "a kinetic row of an unknown dye",
      "kinetics.json",
      (r) => Object.assign(r[0] ?? {}, { indicator: "litmus" }),
      /unknown indicator "litmus"/,
    ],
    [
      "a masking row of an unknown agent",
      "masking.json",
      (r) => Object.assign(r[0] ?? {}, { agent: "soap" }),
      /unknown agent "soap"/,
    ],
    [
      "a buffer listed twice",
      "buffers.json",
      (r) => r.push(r[0] ?? {}),
      /buffers\.json \$\[19\]: the id "nitric-acid" stands twice/,
    ],
    [
      "a source nobody cites",
      "sources-practice.json",
      (r) => r.push({ id: "x", citation: "X" }),
      /"x" is listed but nowhere cited/,
    ],
    ["a citation of no source", "sources-practice.json", (r) => r.splice(0, 1), /is cited but not listed/],
  ];
  test.each(faults)("%s is refused", (_what, name, edit, message) => {
    expect(() => buildKnowledge(edited(name, edit))).toThrow(DataError);
    expect(() => buildKnowledge(edited(name, edit))).toThrow(message);
  });
});

describe("vocabularyCoverage", () => {
  const ids = loadContractIds();
  const coverage = vocabularyCoverage(knowledge, ids);

  test("speaks of every id of the vocabulary once", () => {
    expect(coverage).toHaveLength(Object.values({ ...ids }).reduce((sum, list) => sum + list.length, 0));
    expect(ids.indicators).toHaveLength(33);
    expect(ids.buffers).toHaveLength(19);
    expect(ids.agents).toHaveLength(36);
  });

  test("finds usable data for every id", () => {
    expect(coverage.filter((c) => c.status === "no-usable-data").map((c) => c.id)).toEqual([]);
  });

  test("says so when the data of an id are taken away", () => {
    const without = new Map(knowledge.indicators);
    without.delete("zincon");
    const rows = vocabularyCoverage({ ...knowledge, indicators: without }, ids);
    expect(rows.filter((c) => c.status === "no-usable-data").map((c) => c.id)).toEqual(["zincon"]);
  });

  test("names what an id lacks: no dye constants for hydroxynaphthol blue", () => {
    const row = coverage.find((c) => c.id === "hydroxynaphthol-blue");
    expect(row?.missing).toContain("metal constants");
    expect(row?.rests).toContain("uses on record");
  });
});
