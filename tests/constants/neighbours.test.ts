import { describe, expect, test } from "vitest";
import type { ConstantRecord, Reaction } from "../../src/constants/knowledge.ts";
import { checkNeighbours } from "../../src/constants/neighbours.ts";
import { equilibria } from "./read-equilibria.ts";

const value = (log10K: number, over: Partial<ConstantRecord> = {}): ConstantRecord => ({
  log10K,
  ionicStrengthMolPerL: 0.1,
  temperatureC: 25,
  uncertainty: 0.1,
  uncertaintyStated: true,
  doubtful: false,
  provenance: { source: "s", record: String(Math.round(log10K * 100)), basis: "read", confidence: "high" },
  ...over,
});
const react = (
  ligand: string,
  metal: string,
  text: string,
  records: ConstantRecord[],
  over: Partial<Reaction> = {},
): Reaction => ({
  id: `${ligand} ${metal} ${text}`,
  text,
  deltaZ2: 0,
  records,
  enthalpies: [],
  ...over,
});
const texts = (reactions: Reaction[]) => checkNeighbours(reactions).map((remark) => remark.text);
const ML = "[ML]/([M][L])";
const ML2 = "[ML2]/([M][L]^2)";

describe("checkNeighbours lists, and is silent just inside its limit", () => {
  test("records of one reaction under the same conditions more than 0.5 apart", () => {
    expect(texts([react("a", "Zn2+", ML, [value(5), value(5.6)])])).toEqual([
      expect.stringContaining("Same conditions"),
    ]);
    expect(texts([react("a", "Zn2+", ML, [value(5), value(5.4)])])).toEqual([]);
    const otherMedium = value(5.6, { medium: "Na+ background" });
    expect(texts([react("a", "Zn2+", ML, [value(5), otherMedium])])).toEqual([]);
  });

  test("records that run against ionic strength", () => {
    const zero = value(5, { ionicStrengthMolPerL: 0 });
    const shifted = react("a", "Zn2+", ML, [zero, value(5 - 8 * 0.107)], { deltaZ2: -8 });
    expect(texts([shifted])).toEqual([]);
    expect(texts([{ ...shifted, records: [zero, value(5.2)] }])).toEqual([
      expect.stringContaining("Runs against ionic strength"),
    ]);
  });

  test("enthalpies that jump", () => {
    const enthalpy = (kJPerMol: number) => ({
      kJPerMol,
      ionicStrengthMolPerL: 0.1,
      temperatureC: 25,
      doubtful: false,
      provenance: { source: "s", record: "1", basis: "read", confidence: "high" } as const,
    });
    const jump = react("a", "Zn2+", ML, [value(5)], { enthalpies: [enthalpy(-10), enthalpy(-25)] });
    expect(texts([jump])).toEqual([expect.stringContaining("Enthalpies jump")]);
    expect(texts([{ ...jump, enthalpies: [enthalpy(-10), enthalpy(-19)] }])).toEqual([]);
  });

  test("protonation constants that rise", () => {
    const first = react("a", "H+", "[HL]/([L][H])", [value(9)]);
    const second = (log10K: number) => react("a", "H+", "[H2L]/([HL][H])", [value(log10K)]);
    expect(texts([first, second(9.5)])).toEqual([expect.stringContaining("Protonation 2")]);
    expect(texts([first, second(8.9)])).toEqual([]);
  });

  test("a second ligand bound more firmly than the first, but for linear ions", () => {
    const series = (metal: string, beta2: number) => [
      react("a", metal, ML, [value(3)]),
      react("a", metal, ML2, [value(beta2)]),
    ];
    expect(texts(series("Zn2+", 7))).toEqual([expect.stringContaining("firmer than log10 K1")]);
    expect(texts(series("Zn2+", 6.4))).toEqual([]);
    expect(texts(series("Ag+", 7))).toEqual([]);
  });

  test("an overall constant that falls below the one before, from stepwise constants too", () => {
    const falls = [react("a", "Zn2+", ML, [value(3)]), react("a", "Zn2+", "[ML2]/([ML][L])", [value(-2)])];
    expect(texts(falls)).toEqual([expect.stringContaining("log10 beta2 lies below log10 beta1")]);
  });

  test("divalent metals out of order", () => {
    const pair = (nickel: number) => [react("a", "Ni2+", ML, [value(nickel)]), react("a", "Cu2+", ML, [value(10)])];
    expect(texts(pair(11))).toEqual([expect.stringContaining("Ni2+ 11.00")]);
    expect(texts(pair(10.4))).toEqual([]);
    const zinc = [react("a", "Zn2+", ML, [value(11)]), react("a", "Cu2+", ML, [value(10)])];
    expect(texts(zinc)).toEqual([expect.stringContaining("Zn2+ 11.00")]);
  });

  test("a rare earth off the line of its neighbours", () => {
    const series = (gadolinium: number) =>
      [
        ["La3+", 15],
        ["Gd3+", gadolinium],
        ["Lu3+", 19],
      ].map(([metal, k]) => react("a", metal as string, ML, [value(k as number)]));
    expect(texts(series(19))).toEqual([expect.stringContaining("off the line of its neighbours")]);
    expect(texts(series(17.3))).toEqual([]);
  });

  test("a rare earth whose enthalpy is off the line", () => {
    const series = (gadolinium: number) =>
      (
        [
          ["La3+", -12],
          ["Gd3+", gadolinium],
          ["Lu3+", -10],
        ] as const
      ).map(([metal, kJPerMol], i) =>
        react("a", metal, ML, [value(15 + i)], {
          enthalpies: [{ ...value(0), kJPerMol, provenance: { ...value(0).provenance, record: "7" } }],
        }),
      );
    expect(texts(series(8))).toEqual([expect.stringContaining("(enthalpy, record 7) is off the line")]);
    expect(texts(series(0))).toEqual([]);
  });

  test("reactions that have nothing but doubtful values", () => {
    expect(texts([react("a", "Zn2+", ML, [value(5, { doubtful: true })])])).toEqual([
      expect.stringContaining("printed in parentheses"),
    ]);
    expect(texts([react("a", "Zn2+", ML, [value(5, { doubtful: true }), value(5.1)])])).toEqual([]);
  });
});

describe("the remarks on the data", () => {
  const about = (pattern: RegExp) =>
    equilibria.remarks.filter((remark) => pattern.test(`${remark.about} ${remark.text}`));

  // Oddities that are printed so in SRD 46
  test.each([
    ["equilibrium 280, printed without a bracket", /equilibrium 280/i],
    ["equilibrium 628, printed one proton short", /equilibrium 628/i],
    ["equilibria whose text is cut off", /cut off/],
    ["Fe(II) hydroxide, whose beta4 lies below beta3 (record 170683)", /hydroxide Fe2\+.*170683.*beta4 lies below/],
    ["Zn(OH)2 and Cd(OH)4, doubtful at zero ionic strength", /hydroxide .*Zn2\+ \[ML2\].*Cd2\+ \[ML4\]/],
    ["lanthanum fluoride, whose solubility runs against ionic strength", /fluoride La3\+.*Runs against/],
    ["vanadyl hydroxide, likewise", /hydroxide VO2\+.*Runs against/],
    ["the solid AgCN of record 171966", /171966/],
    ["arsenazo III, whose metal records contradict its protonation", /arsenazo-iii Y3\+/],
    ["hydroxo dimers printed the other way up", /EDTA Th4\+ \[M2\(OH\)2L2\]/],
  ])("name %s", (_, pattern) => {
    expect(about(pattern).length).toBeGreaterThanOrEqual(1);
  });

  test("list what is missing: mercury-EDTA with ammonia, dyes without constants, metals without a complexone", () => {
    for (const pattern of [/mercury-EDTA with ammonia/, /hydroxynaphthol-blue/, /No complex constants for/]) {
      expect(about(pattern).some((remark) => remark.kind === "gap")).toBe(true);
    }
  });
});
