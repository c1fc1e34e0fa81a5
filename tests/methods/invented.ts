import { loadKnowledge } from "../../src/constants/index.ts";
import type { StagePlan, Task, TaskComponent } from "../../src/methods/types.ts";

/** The built-in knowledge, loaded once for a test file. */
export const KNOWLEDGE = loadKnowledge();

type Levels = Readonly<Record<string, number>>; // mol/L in the sample solution

const rows = (levels: Levels): TaskComponent[] =>
  Object.entries(levels).map(([component, molPerL]) => ({
    component,
    shown: component,
    molPerL,
    protonsPerComponent: 0,
  }));

/** An invented task: analytes and matrix in mol/L of the sample, 25 mL of it diluted to 100 mL, 1 % asked for. */
export function inventedTask(analytes: Levels, matrix: Levels = {}, change: Partial<Task> = {}): Task {
  return {
    title: "An invented sample",
    analytes: rows(analytes).map((row) => ({ ...row, report: "individual" })),
    matrix: rows(matrix),
    portion: { volumeML: 25, titrationVolumeML: 100 },
    requirementPercent: 1,
    laboratory: { avoid: [], available: null, detection: ["visual"], heating: true, buretteML: 25 },
    temperatureC: 25,
    notes: [],
    ...change,
  };
}

/** A dye at its usual concentration. */
export function dye(id: string): NonNullable<StagePlan["indicator"]> {
  const record = KNOWLEDGE.indicators.get(id);
  if (record === undefined) throw new Error(`no indicator ${id}`);
  return { id, molPerL: record.usualMolPerL };
}

/** A direct titration with 0.01 mol/L EDTA of zinc at pH 5.5 (hexamine, xylenol orange), changed as asked. */
export function inventedPlan(change: Partial<StagePlan> = {}): StagePlan {
  return {
    determines: ["Zn2+"],
    mode: "direct",
    titrant: { id: "EDTA", molPerL: 0.01 },
    backTitrant: null,
    pH: 5.5,
    buffer: { id: "hexamine", molPerL: 0.05 },
    detection: "visual",
    indicator: dye("xylenol-orange"),
    masking: [],
    auxiliary: [],
    added: [],
    preparation: [],
    removed: [],
    chelate: null,
    excessTitrantMolPerL: 0,
    carried: null,
    electrode: null,
    detour: null,
    release: null,
    demasked: null,
    ...change,
  };
}

/** Calcium at pH 12.5 with calcon. */
export const calciumPlan = (change: Partial<StagePlan> = {}): StagePlan =>
  inventedPlan({
    determines: ["Ca2+"],
    pH: 12.5,
    buffer: { id: "sodium-hydroxide", molPerL: 0.05 },
    indicator: dye("calcon"),
    ...change,
  });

/** Magnesium at pH 10 with mordant black 11. */
export const magnesiumPlan = (change: Partial<StagePlan> = {}): StagePlan =>
  inventedPlan({
    determines: ["Mg2+"],
    pH: 10,
    buffer: { id: "ammonia", molPerL: 0.1 },
    indicator: dye("mordant-black-11"),
    ...change,
  });

/** Nickel with EDTA in excess (0.28 mmol for 0.2 mmol), back with 0.01 mol/L zinc at pH 5.5 to xylenol orange. */
export const backPlan = (change: Partial<StagePlan> = {}): StagePlan =>
  inventedPlan({
    determines: ["Ni2+"],
    mode: "back",
    backTitrant: { id: "Zn2+", molPerL: 0.01 },
    preparation: ["excess-titrant-first"],
    excessTitrantMolPerL: 0.0028,
    ...change,
  });
