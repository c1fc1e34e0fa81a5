import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { loadPractice } from "../../src/constants/load-practice.ts";
import { contractIdsSchema } from "../../src/constants/practice-schema.ts";
import { readRecords } from "../../src/constants/read-records.ts";
import { DataError } from "../../src/errors.ts";
import { expectRelative } from "../expect-relative.ts";

const read = (name: string) => readFileSync(new URL(`../../src/constants/data/${name}`, import.meta.url), "utf8");
const practice = loadPractice(read);
const ids = readRecords(read, "contract-ids.json", contractIdsSchema);
const indicator = (id: string) => {
  const found = practice.indicators.find((i) => i.id === id);
  if (found === undefined) throw new Error(`no indicator ${id}`);
  return found;
};

describe("the practice files", () => {
  test("hold a record for every titrant, indicator, buffer and agent of the vocabulary", () => {
    expect(practice.titrants.map((t) => t.id)).toEqual(ids.titrants);
    expect(practice.indicators.map((i) => i.id)).toEqual(ids.indicators);
    expect(practice.buffers.map((b) => b.id)).toEqual(ids.buffers);
    expect(practice.agents.map((a) => a.id)).toEqual(ids.agents);
    expect(practice.metalTitrants.map((t) => t.ion)).toEqual(expect.arrayContaining([...ids.metalTitrants]));
  });

  test("keep every masking, kinetic and buffer row that was compiled", () => {
    expect(practice.masking).toHaveLength(506);
    expect(practice.kinetics).toHaveLength(114);
    expect(practice.buffers).toHaveLength(19);
  });

  test("name no class outside the vocabulary and leave no class empty", () => {
    expect(new Set(practice.indicators.map((i) => i.class))).toEqual(new Set(ids.indicatorClasses));
  });

  test("speak of no file, path or task of their making", () => {
    const all = ["indicators", "masking", "kinetics", "buffers", "reagents", "ion-facts", "agents", "sources-practice"];
    for (const name of [...all, "practice-remarks"])
      expect(read(`${name}.json`)).not.toMatch(/shared\/|\.json|in this task|worked-example/);
  });
});

describe("indicators", () => {
  test("give the recalled transition table of mordant black 11 with magnesium", () => {
    const table = indicator("mordant-black-11").transitions.find((t) => t.ion === "Mg2+");
    expect(table?.points.find(([pH]) => pH === 10)).toEqual([10, 5.4]);
    expect(table?.provenance.basis).toBe("memory");
  });

  test("count everything not bound to the titrant for metals that hydrolyse at the pH of their titration, the free ion for others", () => {
    const counts = new Map(indicator("xylenol-orange").transitions.map((t) => [t.ion, t.counts]));
    expect(counts.get("Bi3+")).toBe("not-bound-to-titrant");
    expect(counts.get("Th4+")).toBe("not-bound-to-titrant");
    expect(counts.get("Zn2+")).toBe("free-ion");
  });

  test("give read blocking levels as mol/L in the titrated solution", () => {
    const copper = indicator("calmagite").blockers.find((b) => b.ion === "Cu2+" && b.kind === "blocks");
    expectRelative(copper?.fromMolPerL ?? Number.NaN, 0.1e-3 / 63.546, 0.03); // 0.10 mg/L, as printed to two figures
    expect(copper?.provenance.basis).toBe("read");
    expect(indicator("calmagite").blockers.find((b) => b.ion === "Ni2+")?.fromMolPerL).toBe(0); // "at all levels"
    expect(indicator("PAN").blockers.find((b) => b.ion === "Ni2+")?.fromMolPerL).toBe(null); // "block": no level said
  });

  test("keep both where a read level and a recalled one differ, the read one first, and remark on it", () => {
    const rows = indicator("calconcarboxylic-acid").blockers.filter((b) => b.ion === "Cu2+");
    expect(rows.map((b) => b.provenance.basis)).toEqual(["read", "memory"]);
    expect(practice.remarks).toContainEqual(
      expect.objectContaining({ kind: "disagreement", about: "calconcarboxylic-acid" }),
    );
  });

  test("take no level tolerated beside a masking agent for a blocking level", () => {
    const levels = indicator("mordant-black-11").blockers.filter((b) => b.ion === "Cu2+" && b.fromMolPerL !== null);
    expect(levels.map((b) => b.fromMolPerL)).toEqual([1.6e-6]);
    expect(indicator("mordant-black-11").needs.map((n) => n.fact)).toContainEqual(
      expect.stringContaining("Cu2+ beside cyanide"),
    );
  });

  test("split sums into ions and name the back titrant where the text does", () => {
    const uses = indicator("xylenol-orange").uses.filter((u) => u.ions.includes("Al3+") && u.mode === "back");
    expect(new Set(uses.map((u) => u.backTitrant))).toEqual(new Set(["Zn2+", "Pb2+", "Th4+"]));
    expect(indicator("mordant-black-11").uses.some((u) => u.ions.length === 2)).toBe(true);
    for (const { uses: all } of practice.indicators)
      for (const use of all) expect(use.ions.every((ion) => !ion.includes("++"))).toBe(true);
  });

  test("are marked special only where the vocabulary says so", () => {
    const special = practice.indicators.filter((i) => i.special).map((i) => i.id);
    expect(special).toEqual(["arsenazo-i", "arsenazo-iii", "calcichrome"]);
  });
});

describe("masking agents", () => {
  test("are refused below the pH where cyanide and sulfide turn into their acids", () => {
    const low = (id: string) => practice.agents.find((a) => a.id === id)?.pH[0];
    expect(low("cyanide")).toBe(9.5);
    expect(low("sulfide")).toBe(9);
  });

  test("reduce copper to Cu+ with ascorbic acid only beside a ligand that holds it", () => {
    const agent = practice.agents.find((a) => a.id === "ascorbic-acid");
    const copper = agent?.converts.find((c) => c.from === "Cu2+");
    expect(copper?.to).toBe("Cu+");
    expect(copper?.conditions).toContain("thiourea, thiosulfate, iodide");
    expect(agent?.converts.find((c) => c.from === "Fe3+")?.to).toBe("Fe2+");
  });

  test("say how a level was converted", () => {
    const row = practice.masking.find((m) => m.agent === "cyanide" && m.ion === "Ni2+");
    expectRelative(row?.upToMolPerL ?? Number.NaN, (20e-3 / 58.693) * 0.5, 0.01); // 20 mg/L, 25 mL diluted to 50 mL
    expect(row?.upToText).toContain("25 mL of sample diluted to 50 mL");
    for (const m of practice.masking) if (m.upToMolPerL !== null) expect(m.upToText).not.toBe(null);
  });

  test("never present a calculation as a reading", () => {
    for (const row of practice.masking)
      for (const p of [row.provenance, ...row.otherSources])
        if (p.source === "nist-srd-46") expect(p.basis).toBe("computed");
  });
});

describe("readRecords", () => {
  const files: Record<string, string> = { "buffers.json": read("buffers.json") };
  const change = (name: string, edit: (rows: Record<string, unknown>[]) => void) => (file: string) => {
    if (file !== name) return files[file] ?? read(file);
    const rows = JSON.parse(read(name)) as Record<string, unknown>[];
    edit(rows);
    return JSON.stringify(rows);
  };
  const faulty: [string, string, (rows: Record<string, unknown>[]) => void, RegExp][] = [
    [
      "a misspelt key",
      "buffers.json",
      (r) => Object.assign(r[2] ?? {}, { workingPh: [1, 2] }),
      /buffers\.json \$\[2\]/,
    ],
    [
      "a range upside down",
      "masking.json",
      (r) => Object.assign(r[5] ?? {}, { pH: [9, 3] }),
      /masking\.json \$\[5\]\.pH/,
    ],
    ["a text for a number", "kinetics.json", (r) => Object.assign(r[0] ?? {}, { temperatureC: ["25", 25] }), /\$\[0\]/],
    ["a missing field", "agents.json", (r) => delete r[1]?.["usualMolPerL"], /agents\.json \$\[1\]/],
    [
      "an unknown tag",
      "cautions.json",
      (r) => Object.assign(r[0] ?? {}, { tag: "acid" }),
      /cautions\.json \$\[0\]\.tag/,
    ],
  ];
  test.each(faulty)("names file and path of %s", (_what, name, edit, place) => {
    expect(() => loadPractice(change(name, edit))).toThrow(DataError);
    expect(() => loadPractice(change(name, edit))).toThrow(place);
  });

  test("accepts the same files unchanged", () => {
    expect(loadPractice(change("buffers.json", () => undefined)).buffers).toEqual(practice.buffers);
  });

  test("names a file that is no JSON", () => {
    expect(() => loadPractice((name) => (name === "titrants.json" ? "[" : read(name)))).toThrow(/titrants\.json \$:/);
  });
});
