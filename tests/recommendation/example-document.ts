import type { Recommendation, RecommendedMethod, StageDocument } from "../../src/recommendation/contract.ts";

// A document invented to exercise its readers; its figures are no result of a calculation.

export const STAGE: StageDocument = {
  determines: ["Zn2+"],
  mode: "direct",
  titrant: null,
  backTitrant: null,
  added: [],
  titreML: 20.1,
  pH: { target: 5.5, low: 5, high: 6, drop: 0.05 },
  buffer: { id: "hexamine", molPerL: 0.05 },
  conditions: [
    {
      of: "pH",
      id: null,
      value: 5.5,
      planned: 5.5,
      statement:
        "pH 5.5: works from 5 to 6; the pH in use for xylenol orange, and no other is better by a real amount (0.31 % here).",
    },
  ],
  detection: "visual",
  indicator: { id: "xylenol-orange", class: "triphenylmethane", colourChange: ["red-violet", "yellow"], molPerL: 2e-5 },
  masking: [
    {
      agent: "fluoride",
      masks: ["Al3+"],
      via: "complexation",
      molPerL: 0.1,
      basis: "equilibrium",
      chemistry: {
        masked: [{ ion: "Al3+", log10Alpha: 12.1, titratedFraction: 0.0004 }],
        onAnalyteLog10Alpha: 0.1,
        usedFraction: 0.2,
      },
      practice: [],
    },
  ],
  auxiliary: [],
  amounts: [],
  preparation: [],
  vessel: {
    removed: [],
    separation: [],
    separationUnknown: [],
    chelate: null,
    excessTitrantMolPerL: 0,
    carried: null,
    electrode: null,
    detour: null,
    release: null,
    demasked: null,
  },
  ionicStrength: { molPerL: 0.12, outOfModelRange: false },
  endPoint: {
    basis: "table",
    pM: 5.9,
    pMEquivalence: 6.1,
    bandPM: 0.3,
    sharpnessPercent: 0.05,
    indicatorMetal: "Zn2+",
    electrode: null,
    wavelengthNm: null,
  },
  conditional: [
    { metal: "Zn2+", log10ConditionalK: 10.4 },
    { metal: "Al3+", log10ConditionalK: 2.1 },
  ],
  interferents: [{ component: "Al3+", titratedFraction: 0.001, biasPercent: 0.01, maskedBy: "fluoride" }],
};

const CAUSES: RecommendedMethod["predicted"]["biasBySource"] = [
  { source: "end-point", percent: 0.03, uncancelledPercent: -0.03, kind: "end-point", by: null, titration: null },
  {
    source: "Al3+",
    percent: 0.01,
    uncancelledPercent: 0.01,
    kind: "incomplete-masking",
    by: "fluoride",
    titration: null,
  },
];

export const METHOD: RecommendedMethod = {
  id: "Zn2+|direct|EDTA|xylenol-orange|5.5",
  rank: 1,
  summary: "Direct titration of Zn2+ with EDTA at pH 5.5 against xylenol orange, aluminium masked by fluoride.",
  mode: "direct",
  titrant: { id: "EDTA", molPerL: 0.01 },
  backTitrant: null,
  stages: [STAGE],
  calculation: [],
  predicted: {
    biasPercent: 0.04,
    biasUncancelledPercent: -0.02,
    biasBySource: CAUSES,
    relativeExpandedUncertaintyPercent: 0.31,
    titreML: 20.1,
    perAnalyte: [
      {
        determines: ["Zn2+"],
        biasPercent: 0.04,
        biasUncancelledPercent: -0.02,
        biasBySource: CAUSES,
        relativeExpandedUncertaintyPercent: 0.31,
      },
    ],
  },
  meetsRequirement: true,
  verdict: "fit",
  reservations: [],
  tolerance: [
    { component: "Al3+", limitMolPerL: 0.021, presentMolPerL: 0.002, withMasking: true, endsBy: "requirement" },
  ],
  uncertaintyBudget: [
    { source: "burette", percent: 0.08 },
    { source: "end point", percent: 0.05 },
  ],
  budget: {
    determines: ["Zn2+"],
    resultMolPerL: 0.008,
    rows: [
      {
        term: "burette",
        quantity: "burette",
        value: 20.1,
        unit: "mL",
        distribution: "triangular",
        halfWidth: 0.03,
        standardUncertainty: 0.0122,
        sensitivityPercentPerUnit: 4.975,
        percent: 0.0609,
        degreesOfFreedom: null,
      },
    ],
    combinedPercent: 0.135,
    coverageFactor: 2,
    effectiveDegreesOfFreedom: 60,
    notCounted: ["The uncertainty of the constants: the study of robustness carries it to the result."],
  },
  wouldMeet: null,
  workingConditions: { ionicStrengthMolPerL: 0.12, temperatureC: 25, outOfModelRange: false },
  scores: [{ rule: "mode/direct-first", weight: 3, statement: "A direct titration has the fewest steps." }],
  precedents: [],
  because: [
    {
      rule: "mode/direct-first",
      effect: "favours",
      statement: "A direct titration has the fewest steps.",
      facts: { mode: "direct" },
      source: "common practice",
      basis: "common practice",
      rationale: null,
      stage: null,
    },
  ],
  cautions: [
    "Fluoride is toxic, and in acid gives hydrogen fluoride: keep the solution above pH 5 and work in a hood.",
  ],
};

export const DOCUMENT: Recommendation = {
  contract: 1,
  knowledge: { version: "0.0.0-example", hash: "0123456789abcdef" },
  brief: {
    title: "Zinc in a galvanising rinse water",
    analytes: [{ ion: "Zn2+", concentration: { value: 0.008, unit: "mol/L" }, report: "individual" }],
    matrix: [{ component: "Al3+", concentration: { value: 0.002, unit: "mol/L" } }],
    portion: { volumeML: 25, titrationVolumeML: 100 },
    requirement: { relativeExpandedUncertaintyPercent: 0.5 },
    laboratory: { avoid: [], available: null, detection: ["visual"], heating: true, buretteML: 25 },
    temperatureC: 25,
  },
  verdict: "fit",
  findings: [
    {
      component: "Al3+",
      as: "blocks-indicator",
      statement: "Aluminium holds xylenol orange at pH 5.5.",
      facts: { pH: 5.5, wouldBlock: true },
    },
  ],
  methods: [
    METHOD,
    {
      ...METHOD,
      id: "Zn2+|back|EDTA|xylenol-orange|5.5",
      rank: 2,
      mode: "back",
      backTitrant: { id: "Pb2+", molPerL: 0.01 },
      summary: "Back titration of Zn2+ with lead at pH 5.5.",
    },
  ],
  rejected: [
    {
      mode: "direct",
      titrant: "EDTA",
      backTitrant: null,
      indicator: "mordant-black-11",
      pH: 10,
      because: [
        {
          rule: "indicator/blocked",
          effect: "excludes",
          statement: "Aluminium blocks mordant black 11 at pH 10.",
          facts: { blockedBy: ["Al3+"] },
          source: "common practice",
          basis: "common practice",
          rationale: null,
          stage: 0,
        },
      ],
    },
  ],
  decidedBy: {
    statement: "A direct titration needs one standard solution fewer.",
    differences: [
      { rule: "mode/direct-first", first: 3, second: 0, statement: "A direct titration has the fewest steps." },
    ],
  },
  disagreement: null,
  notes: ["Rows of one component were added."],
  constants: [
    {
      species: "ZnEDTA2-",
      log10Beta: 16.2,
      uncertainty: 0.1,
      evidence: [
        {
          reaction: "Zn2+ EDTA ML",
          text: "[ML]/([M][L])",
          record: "0",
          source: "an invented source",
          basis: "read",
          log10KFound: 16.5,
          ionicStrengthMolPerL: 0.1,
          temperatureC: 25,
          log10KUsed: 16.2,
          passedOver: 2,
        },
      ],
    },
  ],
};
