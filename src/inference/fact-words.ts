import { END_POINT_FAULTS } from "./detection-facts.ts";

const KINETIC_WORDS = ["fast", "slow", "inert"];
const STATUS_WORDS = ["converged", "failed"];
const VOCABULARY: Readonly<Record<string, readonly string[]>> = {
  mode: ["direct", "back", "displacement", "indirect", "successive", "difference", "portions"],
  stageMode: ["direct", "back", "displacement"],
  evaluationStatus: [...STATUS_WORDS, "outOfModelRange"],
  solutionStatus: STATUS_WORDS,
  detection: ["visual", "photometric", "electrode"],
  endPointFault: END_POINT_FAULTS,
  electrodeStatus: ["read", "none"],
  photometerStatus: ["read", "none"],
  electrodeUse: ["published", "analogous", "none"],
  electrodeBasis: ["read", "memory", "none"],
  endPointBasis: ["constants", "table", "empirical", "electrode"],
  indicatorUse: ["published", "analogous", "none"],
  indicatorUseBasis: ["read", "memory", "none"],
  indicatorUseConfidence: ["high", "medium", "low", "none"],
  contrast: ["good", "poor", "none"],
  analyteKinetics: KINETIC_WORDS,
  kinetics: KINETIC_WORDS,
  temperatureRegime: ["cold", "ambient", "warm", "hot"],
  detourKind: ["none", "surplus", "precipitate", "exchange", "conversion"],
  detourRests: ["none", "equilibrium", "composition"],
  chelateAdded: ["none", "Mg-EDTA", "Zn-EDTA", "Cu-EDTA", "Zn-EGTA"],
  releaseBasis: ["none", "equilibrium", "record"],
  role: ["analyte", "matrix"],
  kind: ["metal", "ligand"],
  maskedVia: ["complexation", "precipitation", "reduction", "oxidation", "kinetic", "none"],
  maskingBasis: ["equilibrium", "empirical", "conversion", "none"],
  maskStanding: ["masks", "partial", "none"],
};

/** The words a fact can take, where they are a closed list; undefined where any word may stand. */
export function wordsOfFact(name: string): readonly string[] | undefined {
  return VOCABULARY[name];
}
