import { describe, expect, it } from "vitest";
import type { StageChoices } from "../../src/methods/optimise.ts";
import { conditionsDocument } from "../../src/recommendation/condition-words.ts";
import { inventedPlan, inventedTask } from "../methods/invented.ts";
import { developed } from "./developed.ts";

const task = inventedTask({ "Zn2+": 0.008 }, { "Al3+": 0.0005 });
const plan = inventedPlan({
  pH: 5.9,
  buffer: { id: "hexamine", molPerL: 0.1 },
  masking: [{ agent: "acetylacetone", masks: ["Al3+"], via: "complexation", molPerL: 0.05, basis: "equilibrium" }],
});
const stage = developed(task, plan);
const range = { low: 5.2, high: 6.3 };
const choices: StageChoices = {
  pH: {
    chosen: { pH: 5.9, expanded: 0.0031 },
    start: { pH: 5.3, expanded: 0.0044 },
    why: "least-uncertainty",
    next: { pH: 5.5, expanded: 0.0038 },
  },
  buffer: {
    id: "hexamine",
    chosen: { molPerL: 0.1, pHDrop: 0.03 },
    start: { molPerL: 0.2, pHDrop: 0.015 },
    less: { molPerL: 0.05, pHDrop: 0.06 },
    rounded: [],
  },
  masks: [
    {
      agent: "acetylacetone",
      chosenMolPerL: 0.05,
      startMolPerL: 0.08,
      ion: "Al3+",
      log10Margin: 1.34,
      ofRecord: null,
      why: "least-usual",
    },
  ],
};
const words = (change: Partial<StageChoices> = {}): string[] =>
  conditionsDocument(stage, range, { ...choices, ...change }, (id) => id).map((c) => c.statement);

describe("conditionsDocument", () => {
  it("gives a line to pH, buffer and each mask, with its figures", () => {
    expect(words()).toEqual([
      "pH 5.9: works from 5.2 to 6.3; the least expanded uncertainty clear of the edges (with the amounts first planned 0.31 % here, 0.44 % nearer the edge at pH 5.3 and 0.38 % nearer the edge at pH 5.5).",
      "hexamine 0.1 mol/L: the pH falls by 0.03 until the end point; with 0.05 mol/L the pH falls by 0.06.",
      "acetylacetone 0.05 mol/L (usual: 0.08): holds Al3+ with 1.3 in log alpha to spare; less is in no recipe.",
    ]);
  });
  it("holds value and planned value beside the statement", () => {
    const rows = conditionsDocument(stage, range, choices, (id) => id);
    expect(rows.map(({ of, id, value, planned }) => [of, id, value, planned])).toEqual([
      ["pH", null, 5.9, 5.3],
      ["buffer", "hexamine", 0.1, 0.2],
      ["masking", "acetylacetone", 0.05, 0.08],
    ]);
  });
  it("says why the published pH stays, and where nothing else can be looked at", () => {
    const pH = { ...choices.pH!, start: choices.pH!.chosen, next: null };
    expect(words({ pH: { ...pH, why: "published" } })[0]).toBe(
      "pH 5.9: works from 5.2 to 6.3; the pH in use for xylenol orange, and no other is better by a real amount (with the amounts first planned 0.31 % here).",
    );
    expect(words({ pH: { ...pH, why: "as-planned" } })[0]).toContain("dye, buffer and masks leave no other");
  });
  it("tells a mask known by record from one that is reckoned, and one that lacks strength", () => {
    const [mask] = choices.masks;
    expect(words({ masks: [{ ...mask!, ofRecord: 0.02, why: "level-on-record" }] })[2]).toBe(
      "acetylacetone 0.05 mol/L (usual: 0.08): Al3+ is at 0.02 of the level that the usual amount is reported to hold.",
    );
    expect(words({ masks: [{ ...mask!, ion: null, log10Margin: null, why: "record" }] })[2]).toBe(
      "acetylacetone 0.05 mol/L: the usual amount for Al3+.",
    );
    expect(words({ masks: [{ ...mask!, log10Margin: -0.5, why: "as-planned" }] })[2]).toContain("lacks 0.5");
    expect(words({ masks: [{ ...mask!, log10Margin: -0.02, why: "as-planned" }] })[2]).toContain("just so far");
  });
  it("names the planned amounts only where they were changed", () => {
    const { buffer } = choices;
    expect(words({ buffer: { ...buffer!, chosen: buffer!.start }, masks: [] })[0]).toContain("(0.31 % here");
  });
  it("is empty where nothing was chosen", () => {
    expect(words({ pH: null })).toEqual([]);
    expect(conditionsDocument(stage, range, null, (id) => id)).toEqual([]);
  });
});
