import { factsOfScope } from "./fact-catalogue.ts";
import type { Facts, FactValue, RuleScope } from "./types.ts";

// Where the neutral word is not "none": a plain direct titration of zinc that needs nothing, has nothing beside it and meets its requirement.
const NEUTRAL: Readonly<Record<string, FactValue>> = {
  mode: "direct",
  stageMode: "direct",
  titrant: "EDTA",
  analytes: ["Zn2+"],
  determines: ["Zn2+"],
  counted: ["Zn2+"],
  component: "Zn2+",
  role: "matrix",
  kind: "metal",
  analyteCount: 1,
  stageCount: 1,
  portionCount: 1,
  requirementPercent: 1,
  meetsRequirement: true,
  evaluationStatus: "converged",
  solutionStatus: "converged",
  indicators: ["xylenol-orange"],
  indicator: "xylenol-orange",
  indicatorClass: "triphenylmethane",
  endPointModel: "two-colour",
  endPointBasis: "table",
  indicatorUse: "published",
  indicatorUseBasis: "read",
  contrast: "good",
  detections: ["visual"],
  detection: "visual",
  buffers: ["hexamine"],
  buffer: "hexamine",
  bufferMolPerL: 0.05,
  reagents: ["EDTA", "hexamine", "xylenol-orange"],
  reagentCount: 1,
  dyeCount: 1,
  titrantIsUsual: true,
  titrantStrengthMolPerL: 0.01,
  buretteML: 25,
  pH: 5.5,
  analyteKinetics: "fast",
  kinetics: "fast",
  temperatureRegime: "ambient",
  indicatorMetal: "Zn2+",
  presentMolPerL: 0.002,
  ratioToAnalyte: 1,
};

const BLANK: Readonly<Record<string, FactValue>> = { number: 0, string: "none", boolean: false, strings: [] };

/**
 * The facts of an uneventful method, stage or component, for the examples of rules: a direct titration of zinc with EDTA at pH 5.5 in
 * hexamine with xylenol orange. Every fact that always exists has a value; numbers that may be absent are absent.
 */
export function neutralFacts(scope: RuleScope): Facts {
  const entries = [...factsOfScope(scope).values()].filter((fact) => !fact.optional);
  return Object.fromEntries(entries.map((fact) => [fact.name, NEUTRAL[fact.name] ?? BLANK[fact.type] ?? ""]));
}
