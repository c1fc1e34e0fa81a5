import { z } from "zod";
import { biasBySourceSchema, budgetSchema, wouldMeetSchema } from "./contract-budget.ts";
import { briefSchema } from "./contract-brief.ts";
import {
  DETECTIONS,
  FINDING_KINDS,
  INDICATOR_CLASSES,
  LIMIT_ENDS,
  MASKING_VIAS,
  METHOD_MODES,
  PREPARATION_STEPS,
  RULE_EFFECTS,
  STAGE_MODES,
  VERDICTS,
} from "./contract-vocabulary.ts";
import type { Immutable } from "./contract-immutable.ts";

const finite = z.number();
const level = z.number().min(0);
const text = z.string().min(1);

/** Values behind a statement, by fact name. */
export const factsSchema = z.record(text, z.union([finite, z.string(), z.boolean(), z.array(z.string())]));

/** A rule that spoke, with what it saw. */
export const becauseSchema = z.strictObject({
  rule: text,
  effect: z.enum(RULE_EFFECTS),
  statement: text,
  facts: factsSchema,
  source: text,
  basis: text.nullable(), // read, memory, common practice, computed
  rationale: z.string().nullable(),
  stage: z.int().min(0).nullable(), // index of the stage it speaks of; null = the whole method
});

const reagentSchema = z.strictObject({ id: text, molPerL: level });
const addedSchema = z.strictObject({ id: text, molPerL: level, purpose: text });

/** How the end of one titration is seen, and where it lies: pM of the ion followed, at the end point and at equivalence. */
export const endPointSchema = z.strictObject({
  basis: z.enum(["constants", "table", "empirical", "electrode"]),
  pM: finite.nullable(),
  pMEquivalence: finite.nullable(),
  bandPM: level, // +/- of the observer
  sharpnessPercent: level.nullable(), // half-width of the band in % of the titre
  indicatorMetal: text.nullable(), // the metal that holds the dye before the end point
  // What an electrode shows: its step from 99 to 101 % of the volume, the scatter of a reading, and what disturbs it most.
  electrode: z
    .strictObject({
      id: text,
      name: text,
      slopeMVPerDecade: finite,
      readingMV: level,
      jumpMV: level,
      interferingIon: text.nullable(),
    })
    .nullable(),
  wavelengthNm: z.tuple([level, level]).nullable(), // where a photometer measures; null where nothing is on record or it is seen otherwise
});

/** What a masking agent does in the vessel at the end point, by the equilibrium; null where there are no constants for it. */
export const maskChemistrySchema = z.strictObject({
  masked: z.array(
    z.strictObject({ ion: text, log10Alpha: finite.nullable(), titratedFraction: finite.nullable() }), // share that is titrated all the same
  ),
  onAnalyteLog10Alpha: finite.nullable(), // what the agent takes from the analyte
  usedFraction: finite.nullable(), // share of the agent that metals hold
});

/** What the record of practice says of an agent with one ion. */
export const maskPracticeSchema = z.strictObject({
  ion: text,
  order: text.nullable(),
  failsWhen: text.nullable(),
  sideEffects: text.nullable(),
  freedBy: z.array(text), // what sets the ion free again
  upToMolPerL: level.nullable(),
  source: text,
  basis: z.enum(["read", "memory", "computed"]),
});

/** One condition of a titration as it was chosen (pH, or mol/L of the reagent `id`), what the search had planned, and why. */
export const conditionSchema = z.strictObject({
  of: z.enum(["pH", "buffer", "masking"]),
  id: text.nullable(), // the reagent; null for the pH
  value: finite,
  planned: finite,
  statement: text,
});

/** One titration of a method. */
export const stageSchema = z.strictObject({
  determines: z.array(text),
  mode: z.enum(STAGE_MODES),
  titrant: reagentSchema.nullable(), // only where it is not the method's
  backTitrant: reagentSchema.nullable(),
  added: z.array(addedSchema),
  titreML: level.nullable(),
  pH: z.strictObject({ target: finite, low: finite, high: finite, drop: finite.nullable() }), // target: at the end point; drop: by how much it falls until there
  buffer: reagentSchema,
  conditions: z.array(conditionSchema).default([]), // empty where nothing was to be chosen: the requirement is missed, or the titration hangs on another
  detection: z.enum(DETECTIONS),
  indicator: z
    .strictObject({ id: text, class: z.enum(INDICATOR_CLASSES), colourChange: z.tuple([text, text]), molPerL: level })
    .nullable(),
  masking: z.array(
    z.strictObject({
      agent: text,
      masks: z.array(text).min(1),
      via: z.enum(MASKING_VIAS),
      molPerL: level,
      basis: z.enum(["equilibrium", "empirical", "conversion"]),
      chemistry: maskChemistrySchema,
      practice: z.array(maskPracticeSchema),
    }),
  ),
  auxiliary: z.array(addedSchema),
  preparation: z.array(z.enum(PREPARATION_STEPS)),
  // what the titration takes of each reagent but the titrants, and g of the bottle where it is weighed
  amounts: z.array(z.strictObject({ id: text, mmol: level, grams: level.nullable(), bottle: text.nullable() })),
  // What the calculation put into the vessel beside the reagents above: enough, with them, to compute the titration again.
  vessel: z.strictObject({
    removed: z.array(text), // ions taken out by a separation
    separation: z.array(
      z.strictObject({
        kind: z.enum(["extraction", "ion exchange", "precipitation", "electrolysis", "volatilisation", "destruction"]),
        step: text,
        takes: z.enum(["interferents", "analyte"]),
        ions: z.array(text).min(1), // parted from the analyte by it
        source: text,
        basis: z.enum(["read", "memory", "computed"]),
      }),
    ),
    separationUnknown: z.array(text), // of `removed`, what no step on record parts from the analyte
    chelate: z.strictObject({ metal: text, ligand: text, molPerL: level }).nullable(),
    excessTitrantMolPerL: level,
    carried: z.strictObject({ metals: z.array(text), titrantMolPerL: level, addedML: level }).nullable(), // left by an earlier titration of the same solution
    electrode: text.nullable(), // which one, where the end point is read with one
    // the ion is determined through this metal
    detour: z
      .strictObject({
        id: text,
        metal: text,
        analytePerMetal: finite,
        reagent: reagentSchema,
        precipitant: reagentSchema.nullable(),
        kind: z.enum(["surplus", "precipitate", "exchange", "conversion"]),
        filtered: z.boolean(),
        precipitationPH: finite.nullable(),
        precipitationWords: text.nullable(), // how the precipitate is made
        stoichiometry: text, // "2 Ag+ for 1 EDTA"
        rests: z.enum(["equilibrium", "composition"]),
        source: text,
        basis: z.enum(["read", "memory", "computed"]),
      })
      .nullable(),
    release: z.strictObject({ agent: text, molPerL: level }).nullable(), // sets the analyte's titrant free after the discarded reading
    demasked: z.strictObject({ agent: text, by: text, frees: z.array(text).min(1) }).nullable(), // a mask taken away again
  }),
  ionicStrength: z.strictObject({ molPerL: level.nullable(), outOfModelRange: z.boolean() }),
  endPoint: endPointSchema,
  conditional: z.array(z.strictObject({ metal: text, log10ConditionalK: finite })),
  interferents: z.array(
    z.strictObject({
      component: text,
      titratedFraction: finite.nullable(),
      biasPercent: finite.nullable(),
      maskedBy: text.nullable(),
    }),
  ),
});

const perResult = {
  biasPercent: finite, // after what the standardisation takes back
  biasUncancelledPercent: finite, // as it is in the titration
  relativeExpandedUncertaintyPercent: level,
  biasBySource: biasBySourceSchema, // largest first; adds up to both
};

/** What the calculation expects of a method: bias signed, uncertainty k = 2 with the bias included; the figures are those of the worst result. */
export const predictedSchema = z.strictObject({
  ...perResult,
  titreML: level,
  perAnalyte: z.array(z.strictObject({ determines: z.array(text).min(1), ...perResult })),
});

/** One method, complete enough to be carried out and to be defended. */
export const methodSchema = z.strictObject({
  id: text, // stable key of the method: the same plan has the same id in every answer
  rank: z.int().min(1),
  summary: text, // one sentence
  mode: z.enum(METHOD_MODES),
  titrant: reagentSchema,
  backTitrant: reagentSchema.nullable(),
  stages: z.array(stageSchema).min(1),
  calculation: z.array(text), // how each result is calculated from the volumes read
  predicted: predictedSchema,
  meetsRequirement: z.boolean(),
  verdict: z.enum(VERDICTS),
  reservations: z.array(text),
  tolerance: z.array(
    z.strictObject({
      component: text,
      limitMolPerL: level, // 0: not even a trace is borne; with endsBy "none" the highest level looked at
      presentMolPerL: level,
      withMasking: z.boolean(),
      endsBy: z.enum(LIMIT_ENDS),
    }),
  ),
  uncertaintyBudget: z.array(z.strictObject({ source: text, percent: level })), // standard uncertainties, largest first
  budget: budgetSchema,
  wouldMeet: wouldMeetSchema.nullable(), // of the first-ranked method, where it misses the requirement
  workingConditions: z.strictObject({
    ionicStrengthMolPerL: level.nullable(),
    temperatureC: finite,
    outOfModelRange: z.boolean(),
  }),
  scores: z.array(z.strictObject({ rule: text, weight: finite, statement: text })),
  because: z.array(becauseSchema),
  precedents: z.array(
    z.strictObject({
      stage: z.int().min(0),
      statement: text,
      sources: z.array(z.strictObject({ cite: text, basis: z.enum(["read", "memory", "computed"]) })).min(1),
      pHBasis: z.enum(["read", "memory"]),
    }),
  ), // published methods that the titrations follow; found after the ranking
  cautions: z.array(text),
});

/** What one component would do if nothing were done about it. */
export const findingSchema = z.strictObject({
  component: text,
  as: z.enum(FINDING_KINDS),
  statement: text,
  facts: factsSchema,
});

/** A family of methods that was looked at and put aside, and why. */
export const rejectedSchema = z.strictObject({
  mode: z.enum(METHOD_MODES),
  titrant: text,
  backTitrant: text.nullable(),
  indicator: text.nullable(),
  pH: finite.nullable(),
  because: z.array(becauseSchema).min(1),
});

/** A constant that the first-ranked methods rest on, followed down to its records. */
export const constantUsedSchema = z.strictObject({
  species: text,
  log10Beta: finite, // as used, at the working ionic strength and temperature
  uncertainty: level,
  evidence: z.array(
    z.strictObject({
      reaction: text,
      text,
      record: text.nullable(),
      source: text,
      basis: z.enum(["read", "memory", "computed"]),
      log10KFound: finite,
      ionicStrengthMolPerL: level,
      temperatureC: finite,
      log10KUsed: finite,
      passedOver: z.int().min(0),
    }),
  ),
});

/** The answer to one brief. */
export const recommendationSchema = z.strictObject({
  contract: z.literal(1),
  knowledge: z.strictObject({ version: text, hash: text }),
  brief: briefSchema,
  verdict: z.enum(VERDICTS),
  findings: z.array(findingSchema),
  methods: z.array(methodSchema),
  rejected: z.array(rejectedSchema),
  decidedBy: z
    .strictObject({
      statement: text,
      differences: z.array(z.strictObject({ rule: text, first: finite, second: finite, statement: text })),
    })
    .nullable(), // null where there is no second method
  disagreement: text.nullable(), // where published methods differ and methods shown here follow different ones
  notes: z.array(text),
  constants: z.array(constantUsedSchema),
});

export type Recommendation = Immutable<z.output<typeof recommendationSchema>>;
export type RecommendedMethod = Immutable<z.output<typeof methodSchema>>;
export type ConditionDocument = Immutable<z.output<typeof conditionSchema>>;
export type StageDocument = Immutable<z.output<typeof stageSchema>>;
export type Finding = Immutable<z.output<typeof findingSchema>>;
export type RejectedMethod = Immutable<z.output<typeof rejectedSchema>>;
export type Because = Immutable<z.output<typeof becauseSchema>>;
export type ConstantUsed = Immutable<z.output<typeof constantUsedSchema>>;
export type EndPointDocument = Immutable<z.output<typeof endPointSchema>>;
export type Predicted = Immutable<z.output<typeof predictedSchema>>;
