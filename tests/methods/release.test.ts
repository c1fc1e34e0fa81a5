import { describe, expect, it } from "vitest";
import { bareStage } from "../../src/methods/develop.ts";
import { evaluate } from "../../src/methods/evaluate.ts";
import { releaseExcess, releaseSkeletons, withReleaseAmount } from "../../src/methods/release-plan.ts";
import { shelfOf } from "../../src/methods/shelf.ts";
import { USUAL_FIELD } from "../../src/methods/skeletons.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { expectRelative } from "../expect-relative.ts";
import { dye, inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

/** Aluminium by fluoride at pH 5.5: 0.01 mol/L zinc before and after, xylenol orange. */
function fluoridePlan(task: Task, fluorideMolPerL: number, change: Partial<StagePlan> = {}): StagePlan {
  const plan = inventedPlan({
    determines: ["Al3+"],
    mode: "displacement",
    backTitrant: { id: "Zn2+", molPerL: 0.01 },
    preparation: ["excess-titrant-first", "boil", "cool", "fluoride-release", "boil", "cool"],
    auxiliary: [
      { id: "fluoride", molPerL: fluorideMolPerL, purpose: "after the first end point: sets free the titrant of Al3+" },
    ],
    release: { agent: "fluoride", molPerL: fluorideMolPerL },
    ...change,
  });
  return { ...plan, excessTitrantMolPerL: releaseExcess(task, plan, KNOWLEDGE) };
}

const skeletonsFor = (task: Task, determines: readonly string[]) =>
  releaseSkeletons({
    task,
    knowledge: KNOWLEDGE,
    shelf: shelfOf(task, KNOWLEDGE, true),
    determines,
    field: USUAL_FIELD,
  });

describe("a release read between two end points", () => {
  const alloy = inventedTask({ "Al3+": 0.004 }, { "Zn2+": 0.04 });

  it("finds c(V2 - V1), and its ledger adds up to the bias", () => {
    const e = evaluate(alloy, fluoridePlan(alloy, 0.1), KNOWLEDGE);
    // 25 mL of 0.004 mol/L aluminium is 0.1 mmol: 10 mL of 0.01 mol/L zinc.
    expectRelative(e.endPointML, 10, 5e-3);
    expectRelative(e.foundMol, 0.01e-3 * e.endPointML, 1e-9);
    const uncancelled = e.ledger.filter((l) => l.source !== "standardised alike").reduce((s, l) => s + l.fraction, 0);
    expect(Math.abs(uncancelled - e.uncancelledBiasFraction)).toBeLessThan(1e-6);
  });

  it("titrates the excess at the first end point: what was added less what the metals take", () => {
    const plan = fluoridePlan(alloy, 0.1);
    const e = evaluate(alloy, plan, KNOWLEDGE);
    // In 100 mL: 0.1 mmol aluminium and 1 mmol zinc are bound; the rest of the titrant needs zinc, 1:1.
    const excessMmol = 100 * plan.excessTitrantMolPerL - 1.1;
    expectRelative(e.firstReading!.volumeML, excessMmol / 0.01, 5e-3);
  });

  it("does not mind the back titrant in the sample: ten times the zinc moves the result by less than 0.2 %", () => {
    const little = inventedTask({ "Al3+": 0.004 }, { "Zn2+": 0.004 });
    const a = evaluate(alloy, fluoridePlan(alloy, 0.1), KNOWLEDGE);
    const b = evaluate(little, fluoridePlan(little, 0.1), KNOWLEDGE);
    expect(Math.abs(a.biasFraction - b.biasFraction)).toBeLessThan(2e-3);
    expect(a.titrated.get("Zn2+")).toBe(0);
    // The plain back titration of the same vessel counts the zinc ten to one.
    const back = evaluate(
      alloy,
      {
        ...fluoridePlan(alloy, 0.1),
        mode: "back",
        release: null,
        auxiliary: [],
        backTitrant: { id: "Cu2+", molPerL: 0.01 },
        indicator: dye("PAN"),
        pH: 4.5,
      },
      KNOWLEDGE,
    );
    expect(back.biasFraction).toBeGreaterThan(5);
  });

  it("frees iron with much fluoride as PRACTICE has it: 18 % at 0.4 mol/L and pH 5.5, next to nothing at 0.1", () => {
    // By hand at the second end point, I = 0.1 (Martell & Smith): log beta3(FeF3) 11.9, log K(FeY) 25.1, log K(ZnY) 16.5.
    // [FeF]/[FeY] = beta3 [F]^3 / (K(FeY) [Y]), [Y] = [ZnY] / (K(ZnY) [Zn]) with ZnY 2e-3 and the Zn of the dye, 2e-6 mol/L:
    // 8e11 x 0.064 / (1.3e25 x 3.2e-14) = 0.12; with the ionic strength of 0.4 mol/L NaF the constants give 0.1 to 0.3.
    const iron = inventedTask({ "Al3+": 0.004 }, { "Fe3+": 0.004 });
    const freed = (molPerL: number): number =>
      evaluate(iron, fluoridePlan(iron, molPerL), KNOWLEDGE).titrated.get("Fe3+") ?? Number.NaN;
    expect(freed(0.4)).toBeGreaterThan(0.05);
    expect(freed(0.4)).toBeLessThan(0.3);
    expect(freed(0.1)).toBeLessThan(0.01);
  });

  it("chooses the amount by what it frees: enough for aluminium, too little for the iron", () => {
    const iron = inventedTask({ "Al3+": 0.004 }, { "Fe3+": 0.012 });
    const chosen = withReleaseAmount(iron, fluoridePlan(iron, 0.25), KNOWLEDGE);
    const e = evaluate(iron, chosen, KNOWLEDGE);
    expect(chosen.release!.molPerL).toBeGreaterThanOrEqual(0.012); // six fluoride an aluminium ion
    expect(chosen.release!.molPerL).toBeLessThan(0.25);
    expect(Math.abs(e.biasFraction)).toBeLessThan(5e-3);
    expectRelative(e.titrated.get("Al3+")!, 1, 3e-3);
  });

  it("counts titanium that fluoride frees beside aluminium, mole for mole", () => {
    const both = inventedTask({ "Al3+": 0.004 }, { "TiO2+": 0.001 });
    const e = evaluate(both, fluoridePlan(both, 0.1), KNOWLEDGE);
    expectRelative(e.biasOf.get("TiO2+")!, 0.25, 1e-2);
  });
});

describe("releases as the records have them", () => {
  it("frees bismuth by a thiol and leaves what the source says is left", () => {
    const task = inventedTask({ "Bi3+": 0.003 }, { "Pb2+": 0.003, "Th4+": 0.002, "Fe3+": 0.002 });
    const skeleton = skeletonsFor(task, ["Bi3+"]).find((s) => s.plan.release?.agent === "thioglycolate")!;
    const { bare } = bareStage(task, skeleton, KNOWLEDGE, shelfOf(task, KNOWLEDGE, true));
    expectRelative(bare.titrated.get("Bi3+")!, 1, 1e-3);
    expect(Math.abs(bare.biasFraction)).toBeLessThan(5e-3); // Talanta 1985, 32, 1011: within 0.5 %
  });

  it("frees titanium by tartrate while aluminium keeps its chelate", () => {
    const task = inventedTask({ "TiO2+": 0.004 }, { "Al3+": 0.004, "Fe3+": 0.001 });
    const skeleton = skeletonsFor(task, ["TiO2+"]).find((s) => s.plan.release?.agent === "tartrate")!;
    const { bare } = bareStage(task, skeleton, KNOWLEDGE, shelfOf(task, KNOWLEDGE, true));
    expect(Math.abs(bare.titrated.get("Al3+")!)).toBeLessThan(1e-3);
    expectRelative(bare.titrated.get("TiO2+")!, 1, 5e-3);
  });

  it("frees mercury by iodide within what was published, beside zinc and lead", () => {
    const task = inventedTask({ "Hg2+": 0.004 }, { "Zn2+": 0.004, "Pb2+": 0.002 });
    const skeleton = skeletonsFor(task, ["Hg2+"]).find(
      (s) => s.plan.release?.agent === "iodide" && s.plan.indicator?.id === "methylthymol-blue",
    )!;
    const { bare } = bareStage(task, skeleton, KNOWLEDGE, shelfOf(task, KNOWLEDGE, true));
    expect(Math.abs(bare.biasFraction)).toBeLessThan(4e-3); // Turk. J. Chem. 1998, 22, 215: within 0.4 %
  });

  it("offers nothing for a metal that no agent frees, and nothing with an agent that is avoided", () => {
    expect(skeletonsFor(inventedTask({ "Zn2+": 0.004 }), ["La3+"])).toHaveLength(0);
    const al = inventedTask({ "Al3+": 0.004 });
    const without = { ...al, laboratory: { ...al.laboratory, avoid: ["fluoride"] } };
    expect(skeletonsFor(al, ["Al3+"]).some((s) => s.plan.release?.agent === "fluoride")).toBe(true);
    expect(skeletonsFor(without, ["Al3+"]).some((s) => s.plan.release?.agent === "fluoride")).toBe(false);
  });

  it("names only metals that a masking row of the same agent knows as masked", () => {
    const unknown = KNOWLEDGE.releases.flatMap((r) =>
      r.ions
        .filter((i) => i.freed && i.provenance === undefined)
        .filter(
          (i) => !KNOWLEDGE.masking.some((m) => m.agent === r.agent && m.ion === i.ion && m.effect !== "doesNotMask"),
        )
        .map((i) => `${r.id} ${i.ion}`),
    );
    expect(unknown).toEqual([]);
  });
});
