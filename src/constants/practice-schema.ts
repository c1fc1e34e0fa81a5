import { z } from "zod";

// One JSON file of practice data is one array of records; every object is strict, so that a misspelt key is an error.
const text = z.string().min(1);
const positive = z.number().positive();
const range = z.tuple([z.number(), z.number()]).refine(([low, high]) => low <= high, "low end above high end");
const molPerL = z.number().positive().max(20);

/** Where a value comes from. */
export const provenanceSchema = z.strictObject({
  source: text,
  record: text.exactOptional(),
  where: text.exactOptional(),
  basis: z.enum(["read", "memory", "computed"]),
  confidence: z.enum(["high", "medium", "low"]),
});
const factSchema = z.strictObject({ fact: text, provenance: provenanceSchema });

/** A source that records cite by id. */
export const sourceSchema = z.strictObject({ id: text, citation: text, notice: text.exactOptional() });

const indicatorUseSchema = z.strictObject({
  ions: z.array(text).min(1),
  mode: z.enum(["direct", "back", "displacement", "indirect"]),
  backTitrant: text.exactOptional(),
  pH: range,
  detail: z.string(),
  temperature: z.enum(["warm", "heat", "boil"]).exactOptional(),
  alcohol: z.boolean().exactOptional(),
  chelate: z.enum(["Mg-EDTA", "Zn-EDTA", "Zn-EGTA", "Cu-EDTA"]).exactOptional(),
  titrant: text.exactOptional(),
  auxiliaryAnyOf: z.array(text).min(1).exactOptional(),
  provenance: provenanceSchema,
});

/** An indicator: colours, transitions, uses, blockers; pH on the activity scale, amounts mol/L in the titrated solution. */
export const indicatorSchema = z.strictObject({
  id: text,
  name: text,
  synonyms: z.array(text),
  class: z.enum([
    "azo",
    "triphenylmethane",
    "phthalein",
    "murexide-type",
    "pyridylazo",
    "redox",
    "extractive",
    "fluorescent",
    "self-coloured",
  ]),
  endPointModel: z.enum(["two-colour", "one-colour", "redox", "extractive", "fluorescence"]),
  molarMassGPerMol: positive.nullable(),
  usualMolPerL: molPerL,
  observerBandPM: positive.max(2),
  observerBandProvenance: provenanceSchema,
  practisedShiftPM: z.strictObject({ value: z.number().positive(), provenance: provenanceSchema }).exactOptional(),
  colours: z
    .array(
      z.strictObject({
        pH: range,
        free: text,
        bound: text,
        contrast: z.enum(["good", "poor", "none"]),
        provenance: provenanceSchema,
      }),
    )
    .min(1),
  transitions: z.array(
    z.strictObject({
      ion: text,
      counts: z.enum(["free-ion", "not-bound-to-titrant"]),
      metalsPerDye: z.literal(2).exactOptional(),
      points: z
        .array(z.tuple([z.number(), z.number()]))
        .min(1)
        .refine((points) => points.every(([pH], i) => i === 0 || pH > points[i - 1]![0]), "pH does not rise"),
      provenance: provenanceSchema,
    }),
  ),
  uses: z.array(indicatorUseSchema),
  blockers: z.array(
    z.strictObject({
      ion: text,
      fromMolPerL: z.number().nonnegative().nullable(),
      kind: z.enum(["blocks", "slow"]),
      pH: range.exactOptional(),
      detail: text,
      provenance: provenanceSchema,
    }),
  ),
  instability: z.array(factSchema),
  needs: z.array(factSchema),
  redox: z.strictObject({ potentialV: z.number(), provenance: provenanceSchema }).nullable(),
  hasConstants: z.boolean(),
  special: z.boolean(),
});

/** A buffer, strong acid or alkali: pKa as concentration quotients, amounts mol/L. */
export const bufferSchema = z.strictObject({
  id: text,
  name: text,
  component: text.nullable(),
  counterIon: z.strictObject({ charge: z.union([z.literal(1), z.literal(-1)]) }),
  kind: z.enum(["pair", "strong-acid", "strong-base"]),
  pKa: z.array(
    z.strictObject({
      value: z.number(),
      uncertainty: positive,
      acidCharge: z.number().int(),
      provenance: provenanceSchema,
    }),
  ),
  workingPH: range,
  usualMolPerL: z.tuple([molPerL, molPerL]).refine(([low, high]) => low <= high, "low end above high end"),
  provenance: provenanceSchema,
  precipitates: z.array(text),
  incompatible: z.array(z.strictObject({ with: text, why: text, provenance: provenanceSchema })),
  special: z.boolean(),
});

/** What one agent does to one ion; amounts mol/L in the titrated solution. */
export const maskingSchema = z.strictObject({
  agent: text,
  ion: text,
  effect: z.enum(["masks", "partial", "doesNotMask", "auxiliary", "demasks"]),
  via: z.enum(["complexation", "precipitation", "reduction", "oxidation", "kinetic"]).nullable(),
  pH: range,
  usualMolPerL: molPerL.nullable(),
  upToMolPerL: positive.nullable(),
  upToText: z.string().nullable(),
  failsWhen: text.nullable(),
  order: text.nullable(),
  sideEffects: text.nullable(),
  releasedBy: z.array(text),
  provenance: provenanceSchema,
  otherSources: z.array(provenanceSchema),
});

/** A masking, demasking, auxiliary or reducing agent with its usual amounts (mol/L). */
export const agentSchema = z
  .strictObject({
    id: text,
    name: text,
    component: text.nullable(),
    counterIonCharge: z.number().int(),
    usualMaxMolPerL: molPerL,
    usualMinMolPerL: molPerL.optional(), // the lower end of its usual amounts, where they are known as a range
    usualMolPerL: molPerL,
    pH: range,
    special: z.boolean(),
    converts: z.array(
      z.strictObject({
        from: text,
        to: text,
        via: z.enum(["reduction", "oxidation"]),
        pH: range,
        conditions: z.string(),
        unaided: z.literal(true).optional(), // the two cannot stand in one sample
        provenance: provenanceSchema,
      }),
    ),
    provenance: provenanceSchema,
  })
  .refine((agent) => agent.usualMolPerL <= agent.usualMaxMolPerL, "usual amount above the usual maximum")
  .refine((agent) => (agent.usualMinMolPerL ?? 0) <= agent.usualMolPerL, "usual amount below the usual minimum");

/** A fact about rates and what follows for a method; temperatures in C. */
export const kineticSchema = z.strictObject({
  ion: text,
  titrant: text.nullable(),
  indicator: text.nullable(),
  statement: text,
  consequences: z
    .array(
      z.enum([
        "heat",
        "boil",
        "warm",
        "back-only",
        "excess-and-wait",
        "kinetic-masking",
        "titrate-slowly",
        "titrate-at-once",
        "keep-cold",
        "depolymerise",
        "blocks-indicator",
        "none",
      ]),
    )
    .min(1),
  temperatureC: range.nullable(),
  pH: range.nullable(),
  waterExchangePerS: z.number().positive().exactOptional(),
  provenance: provenanceSchema,
});

/** A fact about an ion that equilibrium data do not hold. */
export const ionFactSchema = z.strictObject({
  ion: text,
  fact: text,
  kind: z.enum(["oxidation-state", "hydrolysis", "hazard", "not-by-this-technique"]),
  provenance: provenanceSchema,
});

/** A way of taking ions out of a solution before a titration. */
export const separationSchema = z.strictObject({
  id: text,
  removes: z.array(text).min(1),
  takesAlong: z.array(text),
  kind: z.enum(["extraction", "ion exchange", "precipitation", "electrolysis", "volatilisation", "destruction"]),
  step: text,
  hazards: z.array(text),
  provenance: provenanceSchema,
});

/** A published method of one ion, as far as the source states it. */
export const precedentSchema = z.strictObject({
  ion: text,
  mode: z.enum(["direct", "back", "displacement", "indirect", "successive", "difference"]),
  titrant: text,
  backTitrant: text.nullable(),
  pH: z.tuple([z.number(), z.number()]),
  pHBasis: z.enum(["read", "memory"]),
  indicators: z.array(text),
  buffers: z.array(text),
  preparation: z.array(text),
  auxiliary: z.array(text),
  stoichiometry: text.nullable(),
  scope: text.nullable(),
  provenance: provenanceSchema,
  otherSources: z.array(provenanceSchema),
});

/** Half width of the interval of the standard atomic weight; null where only the conventional value is on record. */
export const atomicWeightSchema = z.strictObject({
  element: z.string().regex(/^[A-Z][a-z]?$/),
  gPerMol: positive,
  halfWidth: z.number().nonnegative().nullable(),
  provenance: provenanceSchema,
});

/** Something about the data that a reader must know. */
export const remarkSchema = z.strictObject({
  kind: z.enum(["gap", "suspect", "passed-over", "disagreement", "unusable"]),
  about: text,
  text,
});

/** The ids that briefs and answers use, by kind: what the practice data have to cover. */
export const contractIdsSchema = z.strictObject({
  titrants: z.array(text).min(1),
  metalTitrants: z.array(text).min(1),
  indicators: z.array(text).min(1),
  buffers: z.array(text).min(1),
  agents: z.array(text).min(1),
  indicatorClasses: z.array(text).min(1),
  preparation: z.array(text).min(1),
});
