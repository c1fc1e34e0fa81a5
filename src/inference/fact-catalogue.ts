import { ELECTRODE_ROWS, END_POINT_FAULTS, PHOTOMETER_ROWS } from "./detection-facts.ts";
import { TITRANT_ROWS } from "./titrant-facts.ts";
import type { FactDefinition, FactRow, RuleScope } from "./types.ts";

// Known from the record of the masking, not from the solved solution.
const EMPIRICAL: readonly string[] = ["empiricalLimitMolPerL", "ratioToEmpiricalLimit"];

function facts(scope: RuleScope, guard: string, rows: readonly FactRow[]): readonly FactDefinition[] {
  return rows.map(([name, type, unit, presence, meaning]) => {
    const optional = presence === "may be absent";
    return { name, scope, type, unit, meaning, optional, guard: optional ? guard : null };
  });
}

const METHOD_FACTS = facts("method", "evaluationStatus", [
  ["mode", "string", null, "always", "mode of the whole method, in the contract's words"],
  ["titrant", "string", null, "always", "id of the titrant"],
  ["backTitrant", "string", null, "always", 'ion of the back titrant, "none" where there is none'],
  ["analytes", "strings", null, "always", "the analytes of the brief"],
  ["analyteCount", "number", null, "always", "how many analytes the brief names"],
  ["stageCount", "number", null, "always", "titrations in all, discarded readings not counted"],
  ["portionCount", "number", null, "always", "separate portions that are taken"],
  ["biasPercent", "number", "%", "may be absent", "signed systematic error of the result, all causes"],
  ["expandedUncertaintyPercent", "number", "%", "may be absent", "relative expanded uncertainty, k = 2, bias included"],
  ["requirementPercent", "number", "%", "always", "relative expanded uncertainty asked for, k = 2"],
  ["meetsRequirement", "boolean", null, "always", "whether the uncertainty keeps the requirement"],
  ["uncertaintyToRequirementRatio", "number", null, "may be absent", "expanded uncertainty over requirement"],
  [
    "evaluationStatus",
    "string",
    null,
    "always",
    "converged, failed or outOfModelRange; numbers exist unless it failed",
  ],
  ["indicators", "strings", null, "always", "ids of the dyes used"],
  ["detections", "strings", null, "always", "visual, photometric, electrode"],
  ["buffers", "strings", null, "always", "ids of the buffers used"],
  ["reagents", "strings", null, "always", "ids of every reagent used"],
  ["hazards", "strings", null, "always", "tags of the cautions that apply"],
  ["reagentCount", "number", null, "always", "masking, auxiliary and added reagents and buffers"],
  ["specialReagentCount", "number", null, "always", "reagents that are not on the usual shelf"],
  ["dyeCount", "number", null, "always", "different indicators that the method uses"],
  ["heats", "boolean", null, "always", "some step needs a temperature above ambient"],
  ["boils", "boolean", null, "always", "some step is done at the boil"],
  ["separates", "boolean", null, "always", "something is removed before the titration"],
  ["separationStepCount", "number", null, "always", "separation steps on record that the method needs"],
  ["separationHazards", "strings", null, "always", "hazardous reagents or products of the separation"],
  ["separationUnknown", "strings", null, "always", "ions to be removed that no step on record parts from the analyte"],
  ["separationUnknownCount", "number", null, "always", "how many those are"],
  ["preparation", "strings", null, "always", "ids of the preparation steps of all stages"],
  ["maskedComponentCount", "number", null, "always", "components kept from reacting by a masking agent"],
  ["empiricalMasking", "boolean", null, "always", "some masking rests on an empirical record"],
  ["empiricalEndPoint", "boolean", null, "always", "some end point rests on an empirical record"],
  ["analyteKinetics", "string", null, "always", "slowest of the analytes: fast, slow or inert"],
  ["convertsByRedox", "boolean", null, "always", "some component is reduced or oxidised first"],
  ["anyBlocked", "boolean", null, "always", "the dye of some stage is blocked"],
  ["titrantIsUsual", "boolean", null, "always", "the titrant is EDTA"],
  ["titrantStrengthMolPerL", "number", "mol/L", "always", "strength of the titrant"],
  ["minTitreML", "number", "mL", "may be absent", "smallest titre of the stages"],
  ["maxTitreML", "number", "mL", "may be absent", "largest titre of the stages"],
  ["buretteML", "number", "mL", "always", "volume of the burette"],
  [
    "richerMatrixBreaks",
    "boolean",
    null,
    "always",
    "half as much again of the metals of the matrix breaks the requirement",
  ],
]);

const STAGE_FACTS = facts("stage", "solutionStatus", [
  ["stageMode", "string", null, "always", "direct, back or displacement"],
  ["determines", "strings", null, "always", "what the titration gives"],
  ["titrant", "string", null, "always", "id of the titrant"],
  ["backTitrant", "string", null, "always", 'ion of the back titrant, "none" where there is none'],
  ["pH", "number", "pH", "always", "pH at which the end point is taken"],
  ["pHLow", "number", "pH", "may be absent", "lower end of the range in which the requirement holds"],
  ["pHHigh", "number", "pH", "may be absent", "upper end of that range"],
  ["pHWindowWidth", "number", "pH", "may be absent", "width of that range"],
  ["buffer", "string", null, "always", "id of the buffer"],
  ["bufferMolPerL", "number", "mol/L", "always", "total of the buffer in the titrated solution"],
  [
    "bufferCapacityMolPerLPerPH",
    "number",
    "mol/L per pH",
    "may be absent",
    "buffer capacity at the pH of the titration",
  ],
  ["pHDrop", "number", "pH", "may be absent", "fall of pH from the protons that the titration sets free"],
  ["detection", "string", null, "always", "visual, photometric or electrode"],
  ["endPointFault", "string", null, "always", 'why no end point shows, "none" where one does'],
  ["indicator", "string", null, "always", 'id of the dye, "none" where there is none'],
  ["indicatorClass", "string", null, "always", 'class of the dye, "none" where there is none'],
  ["endPointModel", "string", null, "always", 'kind of end point, "none" for an electrode'],
  ["endPointBasis", "string", null, "always", "constants, table, empirical or electrode"],
  [
    "indicatorUse",
    "string",
    null,
    "always",
    "published, analogous or none: record of this dye for this metal, mode and pH",
  ],
  ["indicatorUseBasis", "string", null, "always", "read, memory or none: what that record rests on"],
  ["indicatorUseConfidence", "string", null, "always", "high, medium, low or none: how firmly that record is known"],
  ["contrast", "string", null, "always", "good, poor or none: contrast of the colours at this pH"],
  [
    "log10ConditionalK",
    "number",
    "log10",
    "may be absent",
    "conditional constant with the titrant, smallest over what is determined",
  ],
  [
    "log10ConditionalKGap",
    "number",
    "log10",
    "may be absent",
    "the same minus that of the strongest unmasked interferent",
  ],
  ["sharpnessPercent", "number", "%", "may be absent", "half-width of the observer band in the titre"],
  ["sharpnessToRequirementRatio", "number", null, "may be absent", "sharpnessPercent over what the brief requires"],
  ["endPointBiasPercent", "number", "%", "may be absent", "end point against equivalence point"],
  ["titreML", "number", "mL", "may be absent", "titre of the stage"],
  ["titreToBuretteRatio", "number", null, "may be absent", "titre over the volume of the burette"],
  ["blocked", "boolean", null, "always", "the dye is held past equivalence"],
  ["blockedBy", "strings", null, "always", "what holds it"],
  [
    "indicatorMetal",
    "string",
    null,
    "always",
    'metal that holds the dye before the end point, "none" where there is none',
  ],
  ["analyteKinetics", "string", null, "always", "slowest of what is determined: fast, slow or inert"],
  ["dyeShowsOthers", "strings", null, "always", "metals of the matrix that the dye is also in use for at this pH"],
  ["dyeShowsOtherCount", "number", null, "always", "how many those are"],
  ["heats", "boolean", null, "always", "the stage is done warm or hot"],
  [
    "analytePrecipitates",
    "boolean",
    null,
    "always",
    "would precipitate at this pH before the titrant is in, nothing done",
  ],
  [
    "analyteKeptInSolution",
    "boolean",
    null,
    "always",
    "held in solution by an auxiliary or by titrant in excess first",
  ],
  ["excessTitrantFirst", "boolean", null, "always", "titrant in excess before the pH is raised"],
  ["carbonateRisk", "boolean", null, "always", "a carbonate is supersaturated at this pH"],
  ["phosphateRisk", "boolean", null, "always", "a phosphate of the analyte is supersaturated at this pH"],
  [
    "hydroxideMaskedMagnesiumRatio",
    "number",
    null,
    "always",
    "Mg over analyte where Mg is precipitated as hydroxide, else 0",
  ],
  ["ionicStrengthMolPerL", "number", "mol/L", "may be absent", "ionic strength of the titrated solution"],
  ["outOfModelRange", "boolean", null, "always", "ionic strength beyond the range of the activity model"],
  ["auxiliaries", "strings", null, "always", "ids of the auxiliary reagents"],
  ["maskAgents", "strings", null, "always", "ids of the masking agents"],
  ["preparation", "strings", null, "always", "ids of the preparation steps"],
  ["reductants", "strings", null, "always", "ids of the reducing agents"],
  ["reducedByIodide", "boolean", null, "always", "iodide stands against a metal that sets iodine free from it"],
  ["temperatureRegime", "string", null, "always", "cold, ambient, warm or hot"],
  [
    "backTitrantStealsFraction",
    "number",
    null,
    "may be absent",
    "share of the analyte's titrant taken by the back titrant at the end point",
  ],
  [
    "counted",
    "strings",
    null,
    "always",
    "metals whose titre is the result: what is determined, or the metal of a way round",
  ],
  [
    "detourKind",
    "string",
    null,
    "always",
    "surplus, precipitate, exchange, conversion; none where the titrant binds the analyte",
  ],
  ["detourMetal", "string", null, "always", 'metal that a way round counts, "none" without one'],
  ["detourPrecipitant", "string", null, "always", 'what precipitates the analyte, "none" where nothing does'],
  ["detourRests", "string", null, "always", "equilibrium, composition (taken as complete) or none"],
  ["detourFilters", "boolean", null, "always", "a precipitate is filtered off or collected"],
  ["detourBesideCarbonate", "boolean", null, "always", "carbonate of the sample meets the surplus metal"],
  ["detourCompany", "strings", null, "always", "components of the matrix that fall with the reagent of a way round"],
  ["detourLossPercent", "number", "%", "may be absent", "analyte that a way round leaves dissolved or unexchanged"],
  ["detourCompanyPercent", "number", "%", "may be absent", "what falls with the reagent, in the result"],
  [
    "detourCountedPercent",
    "number",
    "%",
    "may be absent",
    "metals of the matrix counted in a way round, in the result",
  ],
  ["detourSurplusRatio", "number", null, "may be absent", "reagent left over to what the analyte takes, in a surplus"],
  ["chelateAdded", "string", null, "always", 'chelate added for a displacement, "none" where there is none'],
  ["releaseAgent", "string", null, "always", 'agent that sets the titrant free, "none" where there is none'],
  ["releaseBasis", "string", null, "always", "equilibrium, record or none: on what the release rests"],
  ["releaseMolPerL", "number", "mol/L", "always", "release agent in the titrated solution, 0 where there is none"],
  ["alsoReleased", "strings", null, "always", "metals of the matrix that the agent frees too"],
  ["leftBound", "strings", null, "always", "metals of the matrix that stay bound through a release"],
  ["leftBoundCount", "number", null, "always", "how many metals stay bound through a release"],
  ["ratioToReleaseLimit", "number", null, "always", "analyte over the reported limit of the release, 0 without one"],
  ["solutionStatus", "string", null, "always", "converged or failed; numbers exist when converged"],
]);

const COMPONENT_FACTS = facts("component", "solutionStatus", [
  ["component", "string", null, "always", "id of the component"],
  ["role", "string", null, "always", "analyte or matrix"],
  ["kind", "string", null, "always", "metal or ligand"],
  ["stageMode", "string", null, "always", "direct, back or displacement"],
  ["pH", "number", "pH", "always", "pH at which the end point is taken"],
  ["indicator", "string", null, "always", 'id of the dye, "none" where there is none'],
  ["indicatorClass", "string", null, "always", 'class of the dye, "none" where there is none'],
  ["titrant", "string", null, "always", "id of the titrant"],
  ["buffer", "string", null, "always", "id of the buffer"],
  ["presentMolPerL", "number", "mol/L", "always", "total in the titrated solution"],
  ["ratioToAnalyte", "number", null, "always", "total over that of the analyte"],
  ["titratedFraction", "number", null, "may be absent", "share of it counted at the end point"],
  ["biasPercent", "number", "%", "may be absent", "bias that it makes"],
  ["blocksIndicator", "boolean", null, "always", "holds the dye as the method is, after masking"],
  ["wouldBlock", "boolean", null, "always", "would hold the dye if nothing were done"],
  ["maskedBy", "string", null, "always", 'masking agent, "none" where there is none'],
  ["maskedVia", "string", null, "always", "complexation, precipitation, reduction, oxidation, kinetic or none"],
  ["maskingBasis", "string", null, "always", "equilibrium, empirical, conversion or none"],
  ["maskStanding", "string", null, "always", "masks, partial (practice knows it as a partial mask) or none"],
  ["empiricalLimitMolPerL", "number", "mol/L", "may be absent", "level up to which the empirical record holds"],
  ["ratioToEmpiricalLimit", "number", null, "may be absent", "level present over that limit"],
  ["maskMolPerL", "number", "mol/L", "always", "masking agent in the titrated solution, 0 where there is none"],
  ["precipitates", "boolean", null, "always", "with a matrix partner or as hydroxide at this pH"],
  ["saturationIndex", "number", "log10", "may be absent", "of the solid that comes first"],
  ["kinetics", "string", null, "always", "fast, slow or inert towards the titrant"],
  ["complexesAnalyte", "boolean", null, "always", "binds the analyte appreciably"],
  ["oxidisesIndicator", "boolean", null, "always", "destroys or bleaches the dye"],
  ["solutionStatus", "string", null, "always", "converged or failed; numbers exist when converged"],
]).map((fact) => (EMPIRICAL.includes(fact.name) ? { ...fact, guard: "maskingBasis" } : fact));

const ALL_STAGE_FACTS: readonly FactDefinition[] = [
  ...STAGE_FACTS,
  ...facts("stage", "solutionStatus", TITRANT_ROWS),
  ...facts("stage", "electrodeStatus", ELECTRODE_ROWS),
  ...facts("stage", "photometerStatus", PHOTOMETER_ROWS),
];

/** Every fact a rule may look at. Numbers that may be absent name the status fact that says whether they exist. */
export const FACT_CATALOGUE: readonly FactDefinition[] = [...METHOD_FACTS, ...ALL_STAGE_FACTS, ...COMPONENT_FACTS];

/** For each guard fact, the values under which the numbers it guards may exist; a rule that uses one must narrow the guard to these. */
export const GUARD_VALUES: Readonly<Record<string, readonly string[]>> = {
  evaluationStatus: ["converged", "outOfModelRange"],
  solutionStatus: ["converged"],
  maskingBasis: ["empirical"],
  electrodeStatus: ["read"],
  photometerStatus: ["read"],
};

const BY_SCOPE: Readonly<Record<RuleScope, ReadonlyMap<string, FactDefinition>>> = {
  method: new Map(METHOD_FACTS.map((fact) => [fact.name, fact])),
  stage: new Map(ALL_STAGE_FACTS.map((fact) => [fact.name, fact])),
  component: new Map(COMPONENT_FACTS.map((fact) => [fact.name, fact])),
};

/** The facts of one scope by name. */
export function factsOfScope(scope: RuleScope): ReadonlyMap<string, FactDefinition> {
  return BY_SCOPE[scope];
}

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
