import { describe, expect, it } from "vitest";
import { combinedMethods } from "../../src/methods/combine.ts";
import { demasked, demaskersOf } from "../../src/methods/demask.ts";
import { shelfOf } from "../../src/methods/shelf.ts";
import { stageSolution } from "../../src/methods/solution.ts";
import { expectRelative } from "../expect-relative.ts";
import { inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const sample = inventedTask({ "Pb2+": 0.004, "Zn2+": 0.004 }, { "Cu2+": 0.0004 });
const shelf = shelfOf(sample, KNOWLEDGE, false);
const plan = magnesiumPlan({
  determines: ["Zn2+"],
  masking: [{ agent: "cyanide", masks: ["Zn2+", "Cu2+"], via: "complexation", molPerL: 0.08, basis: "equilibrium" }],
});

describe("a mask taken away between two titrations", () => {
  it("frees zinc and cadmium from cyanide by an aldehyde, but not copper, nickel or mercury", () => {
    // Schwarzenbach & Flaschka 1969: formaldehyde demasks Zn and Cd alone.
    expect(demaskersOf("cyanide", ["Zn2+", "Cd2+"], KNOWLEDGE, shelf)).toContain("formaldehyde");
    for (const ion of ["Cu2+", "Ni2+", "Hg2+"])
      expect(demaskersOf("cyanide", [ion], KNOWLEDGE, shelf)).not.toContain("formaldehyde");
    expect(demaskersOf("phenanthroline", ["Zn2+"], KNOWLEDGE, shelf)).toEqual([]);
  });

  it("uses the cyanide up mole for mole and leaves copper its own", () => {
    const after = demasked(plan, KNOWLEDGE, shelf)!;
    expect(after.demasked).toEqual({ agent: "cyanide", by: after.demasked!.by, frees: ["Zn2+"] });
    expect(after.masking).toEqual([{ ...plan.masking[0], masks: ["Cu2+"], basis: "empirical" }]);
    const aldehyde = after.auxiliary.find((a) => a.id === after.demasked!.by)!;
    expect(aldehyde.molPerL).toBeGreaterThanOrEqual(1.2 * 0.08); // HCHO + CN- + H2O = HOCH2CN + OH-: one to one, and a fifth more
    const solution = stageSolution(sample, after, KNOWLEDGE);
    expect(solution.totals.has("cyanide")).toBe(false);
    expectRelative(solution.totals.get("Zn2+")!, 0.001, 1e-9);
    expect(solution.held.map((h) => h.component)).toEqual(["Cu2+"]);
    // Before it, the same vessel holds all of the cyanide.
    expectRelative(stageSolution(sample, plan, KNOWLEDGE).totals.get("cyanide")!, 0.08, 1e-9);
  });

  it("gives nothing where the pH is not that of the record or the aldehyde is not to be used", () => {
    expect(demasked({ ...plan, pH: 12.5 }, KNOWLEDGE, shelf)).toBeNull();
    expect(demasked(plan, KNOWLEDGE, (id) => id !== "formaldehyde" && id !== "chloral-hydrate")).toBeNull();
    expect(demasked({ ...plan, determines: ["Pb2+"] }, KNOWLEDGE, shelf)?.demasked).toBeNull();
  });

  it("titrates lead in cyanide and then zinc in the same vessel", () => {
    const methods = combinedMethods(sample, [["Pb2+"], ["Zn2+"]], KNOWLEDGE, shelf).filter(
      (m) => m.mode === "successive" && m.stages[1]?.plan.demasked?.agent === "cyanide",
    );
    const best = methods.sort((a, b) => a.results[1]!.budget.expanded - b.results[1]!.budget.expanded)[0]!;
    expect(best.stages.map((s) => s.plan.determines.join())).toEqual(["Pb2+", "Zn2+"]);
    expect(best.stages[1]!.plan.auxiliary.map((a) => a.id)).toContain("tartrate"); // lead stays dissolved
    for (const result of best.results) expect(Math.abs(result.biasFraction)).toBeLessThan(5e-3);
  });
});
