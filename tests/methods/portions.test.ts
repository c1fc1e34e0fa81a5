import { describe, expect, it } from "vitest";
import { combinedMethods } from "../../src/methods/combine.ts";
import { seenWith, type EvaluatedMethod } from "../../src/methods/methods.ts";
import { separationsOf } from "../../src/methods/separation.ts";
import { shelfOf } from "../../src/methods/shelf.ts";
import { inventedTask, KNOWLEDGE } from "./invented.ts";

const methodsFor = (analytes: Record<string, number>, matrix: Record<string, number>): EvaluatedMethod[] => {
  const task = inventedTask(analytes, matrix);
  const groups = Object.keys(analytes).map((ion) => [ion]);
  return combinedMethods(task, groups, KNOWLEDGE, shelfOf(task, KNOWLEDGE, false));
};
const stepsOf = (method: EvaluatedMethod): string[] => [
  ...new Set(
    separationsOf(
      method.stages.map((s) => s.plan),
      KNOWLEDGE,
    ).flatMap((s) => s.steps.map((step) => step.record.id)),
  ),
];

describe("separate portions", () => {
  // Vogel 5th ed. (recalled): barium goes as chromate, strontium stays in the filtrate; both are titrated with one dye.
  it("take strontium and barium through one separation, and with one dye where one serves both", () => {
    const pairs = methodsFor({ "Sr2+": 0.005, "Ba2+": 0.005 }, {}).filter((m) => m.mode === "portions");
    expect(pairs.length).toBeGreaterThan(4);
    expect(pairs.length).toBeLessThanOrEqual(8);
    expect(pairs.some((m) => stepsOf(m).length === 1)).toBe(true);
    expect(pairs.some((m) => new Set(m.stages.map((s) => seenWith(s.plan))).size === 1)).toBe(true);
  });

  // Schwarzenbach & Flaschka 1969 (recalled): cyanide keeps zinc, nickel and copper from magnesium at pH 10; an aldehyde gives zinc back.
  it("have the turn of cyanide and an aldehyde as a rival for magnesium and zinc beside nickel and copper", () => {
    const turns = methodsFor({ "Mg2+": 0.005, "Zn2+": 0.005 }, { "Ni2+": 0.0003, "Cu2+": 0.0003 }).filter(
      (m) => m.mode === "successive" && m.stages[1]?.plan.demasked?.agent === "cyanide",
    );
    expect(turns.length).toBeGreaterThan(0);
    const [magnesium, zinc] = turns[0]!.stages;
    expect(magnesium!.plan.masking.flatMap((m) => m.masks)).toContain("Zn2+");
    expect(zinc!.plan.demasked!.frees).toEqual(["Zn2+"]);
    expect(zinc!.plan.masking.flatMap((m) => m.masks).sort()).toEqual(["Cu2+", "Ni2+"]);
  });
});
