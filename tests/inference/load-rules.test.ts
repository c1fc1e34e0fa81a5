import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { RuleError } from "../../src/errors.ts";
import { checkRules, inspectRules, loadRules } from "../../src/inference/index.ts";
import { planted, SOUND_RULE } from "./planted-rule.ts";

type Json = Record<string, unknown>;
const guard = SOUND_RULE.when.all[0];
const visual = SOUND_RULE.when.all[2];
const withWhen = (when: unknown): Json => ({ ...SOUND_RULE, when });
const withLeaf = (leaf: unknown): Json => withWhen({ all: [...SOUND_RULE.when.all, leaf] });
const without = (key: keyof typeof SOUND_RULE): Json =>
  Object.fromEntries(Object.entries(SOUND_RULE).filter(([name]) => name !== key));

/** Each fault with its twin: the smallest change that makes the same rule sound again. */
const PLANTED: readonly (readonly [fault: string, faulty: Json, twin: Json, path: string, says: RegExp])[] = [
  ["an empty all", withWhen({ all: [] }), SOUND_RULE, ".when.all", /at least one condition/],
  [
    "an empty any inside",
    withLeaf({ any: [] }),
    withLeaf({ any: [visual] }),
    ".when.all[3].any",
    /at least one condition/,
  ],
  [
    "an unknown operator",
    withLeaf({ fact: "pH", operator: "greaterThan", value: 1 }),
    withLeaf({ fact: "pH", operator: "above", value: 1 }),
    ".when.all[3].operator",
    /unknown operator greaterThan/,
  ],
  [
    "an unknown fact",
    withLeaf({ fact: "pHH", operator: "above", value: 1 }),
    withLeaf({ fact: "pH", operator: "above", value: 1 }),
    ".when.all[3].fact",
    /unknown fact pHH/,
  ],
  [
    "a fact of another scope",
    withLeaf({ fact: "stageCount", operator: "above", value: 0 }),
    withLeaf({ fact: "pH", operator: "above", value: 0 }),
    ".when.all[3].fact",
    /fact of scope method/,
  ],
  ["a misspelt key of the rule", { ...SOUND_RULE, wieght: -4 }, SOUND_RULE, "$.rules[0]", /Unrecognized key.*wieght/],
  [
    "a misspelt key of a comparison",
    withLeaf({ fact: "pH", operator: "above", value: 1, prioritty: 3 }),
    withLeaf({ fact: "pH", operator: "above", value: 1 }),
    ".when.all[3]",
    /Unrecognized key.*prioritty/,
  ],
  [
    "all beside any",
    withWhen({ all: SOUND_RULE.when.all, any: [visual] }),
    withWhen({ all: [...SOUND_RULE.when.all, { any: [visual] }] }),
    ".when",
    /stands alone/,
  ],
  [
    "text where a number is compared",
    withLeaf({ fact: "pH", operator: "above", value: "1" }),
    withLeaf({ fact: "pH", operator: "above", value: 1 }),
    ".when.all[3].value",
    /expected number/,
  ],
  [
    "a numeric operator on a word",
    withLeaf({ fact: "buffer", operator: "above", value: 1 }),
    withLeaf({ fact: "buffer", operator: "isNot", value: "acetate" }),
    ".when.all[3].operator",
    /reads number, but buffer is string/,
  ],
  [
    "a word that the fact never is",
    withLeaf({ fact: "contrast", operator: "isNot", value: "excellent" }),
    withLeaf({ fact: "contrast", operator: "isNot", value: "poor" }),
    ".when.all[3].value",
    /never excellent/,
  ],
  [
    "a falling range",
    withLeaf({ fact: "pH", operator: "between", value: [7, 5] }),
    withLeaf({ fact: "pH", operator: "between", value: [5, 7] }),
    ".when.all[3].value",
    /two rising numbers/,
  ],
  [
    "a number that may be absent without its guard",
    withWhen({ all: SOUND_RULE.when.all.slice(1) }),
    SOUND_RULE,
    ".when.all[0]",
    /guard solutionStatus must be tested/,
  ],
  [
    "a guard that lets failures pass",
    withWhen({ all: [{ ...guard, value: "failed" }, ...SOUND_RULE.when.all.slice(1)] }),
    SOUND_RULE,
    ".when.all[1]",
    /guard solutionStatus must be tested/,
  ],
  [
    "not around a number that may be absent",
    withWhen({ all: [...SOUND_RULE.when.all, { not: { fact: "titreML", operator: "above", value: 5 } }] }),
    withWhen({ all: [...SOUND_RULE.when.all, { not: { fact: "pH", operator: "above", value: 9 } }] }),
    ".when.all[3].not",
    /not around it/,
  ],
  ["no source", without("source"), SOUND_RULE, ".source", /Invalid input/],
  ["no rationale", without("rationale"), SOUND_RULE, ".rationale", /Invalid input/],
  ["an empty statement", { ...SOUND_RULE, statement: " " }, SOUND_RULE, ".statement", /Too small/],
  ["no examples", without("examples"), SOUND_RULE, ".examples", /Invalid input/],
  [
    "no silent example",
    { ...SOUND_RULE, examples: { ...SOUND_RULE.examples, silent: [] } },
    SOUND_RULE,
    ".examples.silent",
    /Too small/,
  ],
  [
    "an example that does not fire",
    { ...SOUND_RULE, examples: { ...SOUND_RULE.examples, fires: [{ sharpnessPercent: 0.5 }] } },
    SOUND_RULE,
    ".examples.fires[0]",
    /does not fire/,
  ],
  [
    "a silent example that fires",
    { ...SOUND_RULE, examples: { ...SOUND_RULE.examples, silent: [{ sharpnessPercent: 0.51 }] } },
    SOUND_RULE,
    ".examples.silent[0]",
    /fires/,
  ],
  [
    "silent examples far from the boundary",
    { ...SOUND_RULE, examples: { ...SOUND_RULE.examples, silent: [{ solutionStatus: "failed" }] } },
    SOUND_RULE,
    ".examples.silent",
    /miss by a single condition/,
  ],
  [
    "an example with an unknown fact",
    { ...SOUND_RULE, examples: { ...SOUND_RULE.examples, fires: [{ sharpness: 0.51 }] } },
    SOUND_RULE,
    ".examples.fires[0]",
    /no fact of scope stage/,
  ],
  [
    "a statement that names an unknown fact",
    { ...SOUND_RULE, statement: "Read to {sharpness}." },
    SOUND_RULE,
    ".statement",
    /unknown fact sharpness/,
  ],
  [
    "a statement that names a number which may be absent and is not tested",
    { ...SOUND_RULE, statement: "The titre is {titreML|mL}." },
    SOUND_RULE,
    ".statement",
    /only where the condition tests it/,
  ],
  [
    "a statement with an unknown format",
    { ...SOUND_RULE, statement: "At {pH|roman}." },
    { ...SOUND_RULE, statement: "At {pH|fixed1}." },
    ".statement",
    /unknown format roman/,
  ],
  ["a weight of the wrong sign", { ...SOUND_RULE, weight: 4 }, SOUND_RULE, ".weight", /weighs -60 to -1/],
  [
    "a weight on a caution",
    { ...SOUND_RULE, effect: "cautions" },
    { ...without("weight"), effect: "cautions" },
    ".weight",
    /carries no weight/,
  ],
  [
    "a reservation that is no caution",
    { ...SOUND_RULE, reservation: true },
    { ...without("weight"), effect: "cautions", reservation: true },
    ".reservation",
    /only a caution/,
  ],
  [
    "a requirement that requires nothing",
    { ...without("weight"), effect: "requires" },
    { ...without("weight"), effect: "requires", requires: { kind: "preparation", anyOf: ["boil"] } },
    ".requires",
    /says what/,
  ],
  [
    "a weight per a number that may be absent",
    { ...SOUND_RULE, per: { fact: "titreML", beyond: 1 } },
    { ...SOUND_RULE, per: { fact: "pH", beyond: 1 } },
    ".per.fact",
    /not a number that always exists/,
  ],
  [
    "an id of another topic",
    { ...SOUND_RULE, id: "kinetics/soft-end-point" },
    SOUND_RULE,
    ".id",
    /id of this file's topic/,
  ],
];

describe("loadRules", () => {
  it.each(PLANTED)("refuses %s, and loads its twin", (_, faulty, twin, path, says) => {
    const { base, faults } = inspectRules(planted(faulty));
    expect(base.rules).toEqual([]);
    expect(faults.map((fault) => fault.message)).toEqual([expect.stringMatching(says)]);
    expect(faults[0]!.details["path"]).toEqual(expect.stringContaining(path));
    expect(() => loadRules(planted(faulty))).toThrow(RuleError);
    expect(loadRules(planted(twin)).rules.map((rule) => rule.scope)).toEqual(["stage"]);
  });

  it("refuses an id that stands twice, also across files, and loads two ids", () => {
    const other = { ...SOUND_RULE, id: "planted/other" };
    const again = { ...planted(SOUND_RULE)[0]!, name: "again.rules.json" };
    expect(() => loadRules(planted(SOUND_RULE, SOUND_RULE))).toThrow(/stands already in planted\.rules\.json/);
    expect(() => loadRules([...planted(SOUND_RULE), again])).toThrow(/again\.rules\.json/);
    expect(loadRules(planted(SOUND_RULE, other)).byId.size).toBe(2);
  });

  it("names the rule and the file of a fault", () => {
    const { faults } = inspectRules(planted(SOUND_RULE, { ...SOUND_RULE, id: "planted/bad", weight: 0 }));
    expect(faults).toHaveLength(1);
    expect(faults[0]!.details).toEqual({ rule: "planted/bad", path: "planted.rules.json $.rules[1].weight" });
  });

  it("refuses text that is not JSON, a misspelt key of the file and a file without rules", () => {
    const refused = ["{", '{"topic":"planted","about":"x","rulez":[]}', '{"topic":"planted","about":"x","rules":[]}'];
    for (const text of refused) expect(() => loadRules([{ name: "x.rules.json", text }]), text).toThrow(RuleError);
  });

  it("collects the faults of every rule and keeps the sound ones", () => {
    const { base, faults } = inspectRules(planted({ ...SOUND_RULE, id: "planted/a", effect: "hints" }, SOUND_RULE, 7));
    expect(base.rules.map((rule) => rule.id)).toEqual([SOUND_RULE.id]);
    expect(faults.length).toBeGreaterThanOrEqual(2);
  });
});

describe("checkRules", () => {
  it("reads a folder of rule files and leaves other files alone", async () => {
    const folder = mkdtempSync(join(tmpdir(), "rules-"));
    try {
      writeFileSync(join(folder, "planted.rules.json"), planted(SOUND_RULE)[0]!.text);
      writeFileSync(join(folder, "notes.txt"), "{");
      const { rules, faults } = await checkRules(folder);
      expect(rules).toHaveLength(1);
      expect(faults).toEqual([]);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });

  it("reports a folder that is missing or holds no rules as a fault", async () => {
    const folder = mkdtempSync(join(tmpdir(), "rules-"));
    try {
      expect((await checkRules(join(folder, "missing"))).faults.map((fault) => fault.message)).toEqual([
        expect.stringContaining("cannot be read"),
      ]);
      expect((await checkRules(folder)).faults.map((fault) => fault.message)).toEqual([
        expect.stringContaining("no file ends in"),
      ]);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});
