import { describe, expect, it } from "vitest";
import type { Task } from "../../src/methods/types.ts";
import { findingsOf } from "../../src/recommendation/findings.ts";
import { expectRelative } from "../expect-relative.ts";
import { calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "../methods/invented.ts";
import { developed, underJudgement } from "./developed.ts";

const findings = (task: Task, plan = inventedPlan()) =>
  findingsOf(task, underJudgement(task, developed(task, plan)).method, [], KNOWLEDGE);
const rows = (task: Task, plan = inventedPlan()) => findings(task, plan).map((f) => `${f.component} ${f.as}`);

describe("findingsOf", () => {
  it("finds nothing in a clean sample", () => expect(rows(inventedTask({ "Zn2+": 0.008 }))).toEqual([]));
  it("names what is titrated with the analyte, with its share and its bias", () => {
    const [row, ...more] = findings(inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 0.0008 }));
    expect([row?.component, row?.as, more]).toEqual(["Cd2+", "titrates-with-analyte", []]);
    expectRelative(row?.facts["biasPercent"] as number, 10, 0.01);
    expectRelative(row?.facts["titratedFraction"] as number, 1, 0.01);
  });
  it("reports a bias from a tenth of the requirement on", () => {
    // Cadmium is titrated whole: its bias is its ratio to zinc. 0.1 % of a requirement of 1 %.
    const ratio = (r: number) => rows(inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 0.008 * r }));
    expect(ratio(0.00095)).toEqual([]);
    expect(ratio(0.00106)).toEqual(["Cd2+ titrates-with-analyte"]);
  });
  it("names what spoils the dye, masked or not in the method shown", () => {
    const masking = [
      { agent: "cyanide", masks: ["Ni2+"], via: "complexation", molPerL: 0.08, basis: "equilibrium" },
    ] as const;
    const task = inventedTask({ "Mg2+": 0.008 }, { "Ni2+": 1e-4 });
    expect(rows(task, magnesiumPlan({ masking }))).toContain("Ni2+ blocks-indicator");
  });
  it("gives a precipitate to the partner from the matrix", () => {
    const task = inventedTask({ "Ca2+": 0.008 }, { carbonate: 0.004 });
    const found = rows(task, calciumPlan());
    expect(found).toContain("carbonate precipitates");
    expect(found).not.toContain("Ca2+ precipitates");
  });
  it("reports a ligand that holds the analyte, whatever its bias", () => {
    const found = rows(inventedTask({ "Zn2+": 0.008 }, { citrate: 0.02 }));
    expect(found).toContain("citrate complexes-analyte");
    expect(rows(inventedTask({ "Zn2+": 0.008 }, { chloride: 0.001 }))).toEqual([]);
  });
  it("calls aluminium slow and zinc not", () => {
    expect(findingsOf(inventedTask({ "Al3+": 0.008 }), null, [], KNOWLEDGE).map((f) => f.as)).toEqual(["slow"]);
    expect(findingsOf(inventedTask({ "Zn2+": 0.008 }), null, [], KNOWLEDGE)).toEqual([]);
  });
  it("reports what oxidises dyes", () => {
    const found = findingsOf(inventedTask({ "Zn2+": 0.008 }, { chromate: 1e-4, chloride: 1e-3 }), null, [], KNOWLEDGE);
    expect(found.map((f) => `${f.component} ${f.as}`)).toEqual(["chromate oxidises-indicator"]);
  });
  it("says each thing once, however many titrations show it", () => {
    const task = inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 0.0008 });
    const stage = developed(task, inventedPlan());
    const { method } = underJudgement(task, stage);
    expect(findingsOf(task, method, [stage, stage], KNOWLEDGE)).toHaveLength(1);
  });
});
