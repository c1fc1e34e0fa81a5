import { describe, expect, it } from "vitest";
import type { IndicatorBlocker, IndicatorRecord } from "../../src/constants/knowledge.ts";
import { blockerOf, blockingLevel } from "../../src/methods/blocking.ts";
import { evaluateStage } from "../../src/methods/evaluate-stage.ts";
import { expectRelative } from "../expect-relative.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const blocker = (change: Partial<IndicatorBlocker>): IndicatorBlocker => ({
  ion: "Cu2+",
  fromMolPerL: 1e-6,
  kind: "blocks",
  detail: "invented",
  provenance: { source: "invented", basis: "memory", confidence: "low" },
  ...change,
});
const withBlockers = (...blockers: IndicatorBlocker[]): IndicatorRecord => ({
  ...KNOWLEDGE.indicators.get("calcon")!,
  blockers,
});
const read = { source: "invented", basis: "read", confidence: "high" } as const;
const level = (...blockers: IndicatorBlocker[]) => blockingLevel(withBlockers(...blockers), "Cu2+", 10, 2e-5);

describe("the level from which a metal spoils a dye", () => {
  it("is the one on record", () => expect(level(blocker({ fromMolPerL: 3e-5 }))).toBe(3e-5));
  it("is a tenth of the dye where none is stated", () => {
    expectRelative(level(blocker({ fromMolPerL: null }))!, 2e-6, 1e-12);
  });
  it("is a hundredth of the dye where it spoils at every level", () => {
    expectRelative(level(blocker({ fromMolPerL: 0 }))!, 2e-7, 1e-12);
  });
  it("is none for a metal that only exchanges slowly, or that has no record", () => {
    expect(level(blocker({ kind: "slow" }))).toBe(null);
    expect(level(blocker({ ion: "Fe3+" }))).toBe(null);
  });
  it("takes a value that was read before a lower one from memory, and the lower of two that were read", () => {
    const remembered = blocker({ fromMolPerL: 1e-7 });
    expect(level(remembered, blocker({ fromMolPerL: 5e-5, provenance: read }))).toBe(5e-5);
    expect(
      level(blocker({ fromMolPerL: 9e-5, provenance: read }), blocker({ fromMolPerL: 5e-5, provenance: read })),
    ).toBe(5e-5);
  });
  it("counts only at the pH to which the record confines itself, its ends included", () => {
    const dye = withBlockers(blocker({ pH: [5, 6] }));
    expect([4.99, 5, 6, 6.01].map((pH) => blockerOf(dye, "Cu2+", pH) !== null)).toEqual([false, true, true, false]);
  });
});

describe("the metals that spoil the dye of a titration", () => {
  const blockedBy = (matrix: Readonly<Record<string, number>>, change: Partial<StagePlan> = {}) =>
    evaluateStage(inventedTask({ "Mg2+": 0.008 }, matrix), magnesiumPlan(change), KNOWLEDGE).blockedBy;
  it("are there just above the level on record and not just below it", () => {
    // The level counts in the vessel: a quarter of what stands in the sample.
    const level = blockingLevel(KNOWLEDGE.indicators.get("mordant-black-11")!, "Cu2+", 10, 1e-5)!;
    expect(blockedBy({ "Cu2+": 4 * 0.98 * level })).toEqual([]);
    expect(blockedBy({ "Cu2+": 4 * 1.02 * level })).toEqual(["Cu2+"]);
  });
  it("are gone once a mask holds them", () => {
    const masking = [
      { agent: "cyanide", masks: ["Ni2+"], via: "complexation", molPerL: 0.08, basis: "equilibrium" },
    ] as const;
    expect(blockedBy({ "Ni2+": 1e-3 })).toEqual(["Ni2+"]);
    expect(blockedBy({ "Ni2+": 1e-3 }, { masking })).toEqual([]);
  });
  it("are gone once a separation took them out", () => {
    expect(blockedBy({ "Ni2+": 1e-3 }, { removed: ["Ni2+"] })).toEqual([]);
  });
  it("do not count the metal that the dye is in use for at this pH, though it would spoil it elsewhere", () => {
    const manganese = (determines: string[], pH: number) =>
      evaluateStage(inventedTask({ "Mn2+": 0.008 }, { "Mg2+": 0.004 }), magnesiumPlan({ determines, pH }), KNOWLEDGE)
        .blockedBy;
    const used = KNOWLEDGE.indicators
      .get("mordant-black-11")!
      .uses.find((use) => use.mode === "direct" && use.ions.includes("Mn2+"))!;
    expect(manganese(["Mn2+"], used.pH[0])).toEqual([]);
    expect(manganese(["Mg2+"], used.pH[0])).toEqual(["Mn2+"]);
  });
  it("are bound already where the titrant stands in excess before the dye", () => {
    const back = { mode: "back", backTitrant: { id: "Mg2+", molPerL: 0.01 }, excessTitrantMolPerL: 0.0035 } as const;
    expect(blockedBy({ "Ni2+": 1e-3 })).toEqual(["Ni2+"]);
    expect(blockedBy({ "Ni2+": 1e-3 }, back)).toEqual([]);
  });
  it("do not block where the mask has thrown them down, and do where only the ammonia has", () => {
    const sulfide = {
      masking: [{ agent: "sulfide", masks: ["Cu2+"], via: "precipitation", molPerL: 0.004, basis: "equilibrium" }],
    } as const;
    expect(blockedBy({ "Cu2+": 1e-4 }, sulfide)).toEqual([]);
    expect(blockedBy({ "Cu2+": 1e-4 })).toEqual(["Cu2+"]);
    expect(blockedBy({ "Al3+": 1e-3 })).toEqual(["Al3+"]);
  });
});
