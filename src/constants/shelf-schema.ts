import { z } from "zod";
import { provenanceSchema } from "./practice-schema.ts";

// What stands on the shelf: reagents and their cautions, glassware, standards, titrants. Strict, as all practice data.
const text = z.string().min(1);
const positive = z.number().positive();
const molPerL = positive.max(20);

/** Kinds of hazard a reagent can carry. */
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

/** A reagent as bought; molar mass in g/mol. */
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

/** The caution that belongs to a hazard under a condition. */
export const cautionSchema = z.strictObject({
  tag: hazardTagSchema,
  when: z.enum(["always", "in-acid", "hot", "hot-acid"]),
  text,
  provenance: provenanceSchema,
});

/** Class A glassware; volumes in mL. */
export const glasswareSchema = z.strictObject({
  kind: z.enum(["burette", "pipette", "flask"]),
  nominalML: positive,
  toleranceML: positive,
  standard: text,
  provenance: provenanceSchema,
});

/** A primary standard; purity as mass fraction with its expanded uncertainty (k = 2). */
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

/** A complexone used as titrant; strengths mol/L. */
export const titrantSchema = z.strictObject({
  id: text,
  name: text,
  usualMolPerL: z.array(molPerL).min(1),
  donors: z.number().int().positive(),
  special: z.boolean(),
});

/** A metal salt solution; strengths mol/L. */
export const metalTitrantSchema = z.strictObject({
  ion: text,
  usualMolPerL: z.array(molPerL).min(1),
  special: z.boolean(),
  provenance: provenanceSchema,
});
