import { describe, expect, it } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { InputError } from "../../src/errors.ts";
import type { Task } from "../../src/methods/types.ts";
import { briefOf } from "../../src/recommendation/brief-document.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { nearest, reagentIds } from "../../src/recommendation/brief-reagents.ts";
import { briefSchema } from "../../src/recommendation/contract.ts";
import { practiceCases } from "../practice/cases.ts";
import { expectRelative } from "../expect-relative.ts";

const KNOWLEDGE = loadKnowledge();
const read = (json: unknown): Task => readBrief(json, KNOWLEDGE);
const mmol = (value: number) => ({ value, unit: "mmol/L" });
const withMatrix = (...matrix: readonly object[]): object => ({
  title: "An invented sample",
  analytes: [{ ion: "Zn2+", concentration: mmol(8) }],
  matrix,
});

// The brief that the contract shows, with every field filled.
const CONTRACT_EXAMPLE = {
  title: "Zinc in a galvanising rinse water",
  analytes: [{ ion: "Zn2+", concentration: { value: 8.0, unit: "mmol/L" }, report: "individual" }],
  matrix: [
    { component: "Fe3+", concentration: { value: 0.4, unit: "mmol/L" } },
    { component: "SO4^2-", concentration: { value: 20, unit: "mmol/L" } },
  ],
  portion: { volumeML: 25, titrationVolumeML: 100 },
  requirement: { relativeExpandedUncertaintyPercent: 0.5 },
  laboratory: { avoid: ["cyanide"], available: null, detection: ["visual"], heating: true, buretteML: 25 },
  temperatureC: 25,
};

describe("readBrief", () => {
  it("reads the contract's example into mol/L of components", () => {
    const task = read(CONTRACT_EXAMPLE);
    expect(task).toMatchObject({
      title: CONTRACT_EXAMPLE.title,
      analytes: [{ component: "Zn2+", shown: "Zn2+", molPerL: 0.008, report: "individual" }],
      portion: CONTRACT_EXAMPLE.portion,
      requirementPercent: 0.5,
      laboratory: CONTRACT_EXAMPLE.laboratory,
      temperatureC: 25,
      notes: [],
    });
    expect(task.matrix.map((row) => row.shown)).toEqual(["Fe3+", "SO4^2-"]);
  });
  it("reads every brief of the acceptance cases", () => {
    for (const testCase of practiceCases()) expect(read(testCase.brief).analytes.length).toBeGreaterThan(0);
  });
  it.each([
    ["SO42-", "SO4^2-"],
    ["SO4--", "SO4^2-"],
    ["sulphate", "SO4^2-"],
    ["Fe(III)", "Fe3+"],
    ["Fe+3", "Fe3+"],
    ["iron(III)", "Fe3+"],
    ["calcium", "Ca2+"],
    ["HCO3^-", "HCO3-"],
    ["VO2+", "VO2+"],
    ["VO2^+", "VO2^+"],
    ["UO2^2+", "UO2^2+"],
    ["NH4+", "NH4+"],
    ["citrate", "citrate"],
  ])("reads %s as %s", (written, shown) => {
    expect(read(withMatrix({ component: written, concentration: mmol(1) })).matrix.map((row) => row.shown)).toEqual([
      shown,
    ]);
  });
  it("keeps the protons that a written form brings along", () => {
    const [row] = read(withMatrix({ component: "HCO3-", concentration: mmol(3) })).matrix;
    expect(row).toMatchObject({ shown: "HCO3-", molPerL: 0.003, protonsPerComponent: 1 });
  });
  it("counts two chromates in a dichromate", () => {
    const [row] = read(withMatrix({ component: "Cr2O7^2-", concentration: mmol(1) })).matrix;
    expect(row?.molPerL).toBe(0.002);
  });
  it("adds rows of one component, with a note and the mean of their protons", () => {
    const task = read(
      withMatrix(
        { component: "HCO3-", concentration: mmol(3) },
        { component: "Cl-", concentration: mmol(1) },
        { component: "CO3^2-", concentration: mmol(1) },
      ),
    );
    expect(task.matrix.map((row) => row.shown)).toEqual(["HCO3-", "Cl-"]);
    expectRelative(task.matrix[0]?.molPerL ?? 0, 0.004, 1e-12);
    expectRelative(task.matrix[0]?.protonsPerComponent ?? 0, 0.75, 1e-12);
    expect(task.notes).toEqual([
      expect.stringMatching(/HCO3- 0\.003 mol\/L and CO3\^2- 0\.001 mol\/L .* 0\.004 mol\/L/),
    ]);
  });
  it("adds an analyte that stands twice", () => {
    const analytes = [
      { ion: "Zn2+", concentration: mmol(3) },
      { ion: "zinc", concentration: mmol(1) },
    ];
    const task = read({ title: "t", analytes });
    expect(task.analytes).toHaveLength(1);
    expectRelative(task.analytes[0]?.molPerL ?? 0, 0.004, 1e-12);
    expect(task.notes).toHaveLength(1);
  });
  it("leaves out a matrix row of nothing, and says so", () => {
    const task = read(withMatrix({ component: "Cl-", concentration: mmol(0) }));
    expect({ matrix: task.matrix, notes: task.notes.length }).toEqual({ matrix: [], notes: 1 });
  });
  it("reads hardness in mg/L as calcium carbonate with the atomic weights of the knowledge base", () => {
    const level = { value: 100.09, unit: "mg/L", as: "CaCO3" };
    const task = read({ title: "t", analytes: [{ ion: "Mg2+", concentration: level }] });
    expectRelative(task.analytes[0]?.molPerL ?? 0, 1e-3, 1e-4);
  });
  it("reads reagent ids in other case, with blanks, by synonym and as ions", () => {
    const laboratory = {
      avoid: ["Cyanide", "xylenol orange"],
      available: ["edta", "Eriochrome Black T", "zinc", "Zn2+", "water"],
    };
    expect(read({ ...CONTRACT_EXAMPLE, laboratory }).laboratory).toMatchObject({
      avoid: ["cyanide", "xylenol-orange"],
      available: ["EDTA", "mordant-black-11", "Zn2+", "water"],
    });
  });
  it("accepts every reagent id of the contract, both to avoid and on the shelf", () => {
    const ids = [...reagentIds(KNOWLEDGE)];
    const { laboratory } = read({ ...CONTRACT_EXAMPLE, laboratory: { avoid: ids, available: ids } });
    expect([laboratory.avoid, laboratory.available]).toEqual([ids, ids]);
  });
  it("names a detection once", () => {
    const laboratory = { detection: ["electrode", "visual", "electrode"] };
    expect(read({ ...CONTRACT_EXAMPLE, laboratory }).laboratory.detection).toEqual(["electrode", "visual"]);
  });
  it("throws every fault of a brief at once, and only an InputError", () => {
    const bad = {
      title: "",
      analytes: [{ ion: "iron", concentration: { value: -1, unit: "mmol/L" } }],
      laboratory: { avoid: ["soap"] },
    };
    expect(() => read(bad)).toThrow(InputError);
    expect(() => read(bad)).toThrow(
      /\$\.title: .*\n\$\.analytes\[0\]\.concentration\.value: .*\n\$\.laboratory\.avoid\[0\]: /,
    );
  });
});

describe("briefOf", () => {
  it("writes a task as a brief that reads back to the same task", () => {
    const task = read({
      ...CONTRACT_EXAMPLE,
      matrix: [...CONTRACT_EXAMPLE.matrix, { component: "Cr2O7^2-", concentration: mmol(1) }],
    });
    const brief = briefOf(task, KNOWLEDGE);
    expect(briefSchema.parse(brief)).toEqual(brief);
    expect(read(brief)).toEqual(task);
    expect(brief.matrix.at(-1)).toEqual({ component: "Cr2O7^2-", concentration: { value: 0.001, unit: "mol/L" } });
  });
  it("does so for every acceptance case, but for the notes of what was added", () => {
    for (const testCase of practiceCases()) {
      const task = read(testCase.brief);
      expect(read(briefOf(task, KNOWLEDGE)), testCase.id).toEqual({ ...task, notes: [] });
    }
  });
});

describe("nearest", () => {
  it("finds the reagent that was meant", () => {
    const ids = [...reagentIds(KNOWLEDGE)];
    expect(nearest("triethanolamin", ids)[0]).toBe("triethanolamine");
    expect(nearest("Ascorbic Acid", ids)[0]).toBe("ascorbic-acid");
  });
});
