import { describe, expect, it } from "vitest";
import type { EvaluatedMethod } from "../../src/methods/methods.ts";
import { amountsOf } from "../../src/recommendation/bench-amounts.ts";
import { resultFormulas } from "../../src/recommendation/result-formula.ts";
import { expectRelative } from "../expect-relative.ts";
import { calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "../methods/invented.ts";
import { developed, underJudgement } from "./developed.ts";

const task = inventedTask({ "Zn2+": 0.008 });
const single = (plan = inventedPlan()): EvaluatedMethod => underJudgement(task, developed(task, plan)).method;

describe("resultFormulas", () => {
  it("gives a direct titration one factor, as the pharmacopoeia's equivalent does", () => {
    // European Pharmacopoeia 2.5.11, zinc: 1 mL of 0.1 mol/L is equivalent to 6.54 mg of Zn.
    const { volumeML } = task.portion;
    const [formula] = resultFormulas(task, single(), KNOWLEDGE);
    expect(formula).toContain(`Zn2+ (mol/L) = V × c(EDTA) / ${volumeML} mL`);
    const perML = Number(/or ([\d.]+) mg\/L/.exec(formula ?? "")?.[1]);
    expectRelative(((perML * volumeML) / 1000) * (0.1 / inventedPlan().titrant.molPerL), 6.54, 0.001);
  });
  it("takes the back titrant from the titrant put in", () => {
    // 0.003 mol/L in the vessel, as mL of the standard solution.
    const plan = inventedPlan({
      mode: "back",
      backTitrant: { id: "Zn2+", molPerL: 0.02 },
      excessTitrantMolPerL: 0.003,
    });
    const mL = (0.003 * task.portion.titrationVolumeML) / plan.titrant.molPerL;
    const method = { ...single(), stages: [{ ...single().stages[0]!, plan }] };
    expect(resultFormulas(task, method, KNOWLEDGE)[0]).toContain(`(${mL} mL × c(EDTA) - V × c(Zn2+)) /`);
  });
  it("subtracts the second titration where a result is a difference", () => {
    const hard = inventedTask({ "Ca2+": 0.004, "Mg2+": 0.002 });
    const total = developed(hard, magnesiumPlan({ determines: ["Ca2+", "Mg2+"] }));
    const part = developed(hard, calciumPlan());
    const results = underJudgement(hard, part).method.results.flatMap((r) => [
      { ...r, determines: ["Ca2+"] },
      { ...r, determines: ["Mg2+"] },
    ]);
    const method = { ...single(), mode: "difference" as const, stages: [total, part], results };
    const said = resultFormulas(hard, method, KNOWLEDGE);
    expect(said[0]).toMatch(/^Ca2\+ \(mol\/L\) = V2 × c\(EDTA\) /);
    expect(said[1]).toMatch(/^Mg2\+ \(mol\/L\) = \(V1 × c\(EDTA\) - V2 × c\(EDTA\)\) /);
  });
});

describe("amountsOf", () => {
  it("weighs salts and leaves solutions and what sets the pH alone", () => {
    const plan = inventedPlan({
      masking: [{ agent: "fluoride", masks: ["Al3+"], via: "complexation", molPerL: 0.1, basis: "equilibrium" }],
      buffer: { id: "ammonia", molPerL: 0.2 },
    });
    const amounts = amountsOf(task, plan, KNOWLEDGE);
    // Ammonium fluoride, 37.04 g/mol (handbook).
    const mmol = 0.1 * task.portion.titrationVolumeML;
    expect(amounts).toContainEqual({
      id: "fluoride",
      mmol,
      grams: Number((0.03704 * mmol).toPrecision(2)),
      bottle: "ammonium fluoride",
    });
    expect(amounts.find((a) => a.id === "ammonia")?.grams).toBeNull();
  });
});
