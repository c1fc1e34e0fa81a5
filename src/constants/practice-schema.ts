import { z } from "zod";

/** One JSON file of practice data is one array of these; every object is strict, so that a misspelt key is an error. */
const text = z.string().min(1);
const positive = z.number().positive();
const range = z.tuple([z.number(), z.number()]).refine(([low, high]) => low <= high, "low end above high end");
const molPerL = z.number().positive().max(20);

export const provenanceSchema = z.strictObject({
  source: text,
  record: text.exactOptional(),
  where: text.exactOptional(),
  basis: z.enum(["read", "memory", "computed"]),
  confidence: z.enum(["high", "medium", "low"]),
});
const factSchema = z.strictObject({ fact: text, provenance: provenanceSchema });

export const sourceSchema = z.strictObject({ id: text, citation: text, notice: text.exactOptional() });

const indicatorUseSchema = z.strictObject({
  ions: z.array(text).min(1),
  mode: z.enum(["direct", "back", "displacement", "indirect"]),
  backTitrant: text.exactOptional(),
  pH: range,
  detail: z.string(),
  provenance: provenanceSchema,
});

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

export const agentSchema = z
  .strictObject({
    id: text,
    name: text,
    component: text.nullable(),
    counterIonCharge: z.number().int(),
    usualMaxMolPerL: molPerL,
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
        provenance: provenanceSchema,
      }),
    ),
    provenance: provenanceSchema,
  })
  .refine((agent) => agent.usualMolPerL <= agent.usualMaxMolPerL, "usual amount above the usual maximum");

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
  provenance: provenanceSchema,
});

export const hazardTagSchema = z.enum([
  "cyanide",
  "sulfide",
  "fluoride",
  "mercury",
  "perchlorate",
  "strong-acid",
  "strong-alkali",
  "lead",
  "cadmium",
  "thorium-uranium",
  "carcinogen",
  "stench",
  "oxidiser",
  "formaldehyde",
  "corrosive",
  "flammable",
  "heat-sensitive",
  "toxic",
]);

export const reagentSchema = z.strictObject({
  id: text,
  name: text,
  formula: text,
  molarMassGPerMol: positive.nullable(),
  preparation: z.array(text),
  hazards: z.array(text),
  hazardTags: z.array(hazardTagSchema),
  disposal: z.array(text),
  provenance: provenanceSchema,
});

export const cautionSchema = z.strictObject({
  tag: hazardTagSchema,
  when: z.enum(["always", "in-acid", "hot", "hot-acid"]),
  text,
  provenance: provenanceSchema,
});

export const glasswareSchema = z.strictObject({
  kind: z.enum(["burette", "pipette", "flask"]),
  nominalML: positive,
  toleranceML: positive,
  standard: text,
  provenance: provenanceSchema,
});

export const standardSchema = z.strictObject({
  id: text,
  formula: text,
  forIon: text,
  molarMassGPerMol: positive,
  purityMassFraction: positive.max(1),
  purityExpandedUncertainty: positive.max(0.05),
  treatment: text,
  provenance: provenanceSchema,
});

export const titrantSchema = z.strictObject({
  id: text,
  name: text,
  usualMolPerL: z.array(molPerL).min(1),
  donors: z.number().int().positive(),
  special: z.boolean(),
});

export const metalTitrantSchema = z.strictObject({
  ion: text,
  usualMolPerL: z.array(molPerL).min(1),
  special: z.boolean(),
  provenance: provenanceSchema,
});

export const electrodeSchema = z.strictObject({
  id: text,
  ion: text,
  slopeMVPerDecade: z.number(),
  detectionLimitMolPerL: positive,
  pH: range,
  interferingIons: z.array(
    z.strictObject({ ion: text, log10Selectivity: z.number().nullable(), provenance: provenanceSchema }),
  ),
  provenance: provenanceSchema,
});

export const ionFactSchema = z.strictObject({
  ion: text,
  fact: text,
  kind: z.enum(["oxidation-state", "hydrolysis", "hazard", "not-by-this-technique", "usual-practice"]),
  provenance: provenanceSchema,
});

/** Half width of the interval of the standard atomic weight; null where only the conventional value is on record. */
export const atomicWeightSchema = z.strictObject({
  element: z.string().regex(/^[A-Z][a-z]?$/),
  gPerMol: positive,
  halfWidth: z.number().nonnegative().nullable(),
  provenance: provenanceSchema,
});

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
