import { z } from "zod";
import { provenanceSchema } from "./practice-schema.ts";

// How the end of a titration is read without the eye. Strict, as all practice data.
const text = z.string().min(1);
const positive = z.number().positive();
const range = z.tuple([z.number(), z.number()]).refine(([low, high]) => low <= high, "low end above high end");
const nanometres = z.tuple([positive, positive]).refine(([low, high]) => low <= high, "low end above high end");

/** An indicator electrode; slope in mV per decade, limits mol/L. */
export const electrodeSchema = z.strictObject({
  id: text,
  name: text,
  ion: text,
  shows: z.array(text),
  membraneOf: text.nullable(),
  chelate: z.literal("Cu-EDTA").nullable(),
  couple: text.nullable(),
  slopeMVPerDecade: z.number(),
  slopeProvenance: provenanceSchema,
  detectionLimitMolPerL: positive,
  limitProvenance: provenanceSchema,
  bufferedLimit: z.strictObject({ molPerL: positive, provenance: provenanceSchema }).nullable(),
  reading: z.strictObject({ mV: positive, provenance: provenanceSchema }),
  pH: range,
  interferingIons: z.array(
    z.strictObject({ ion: text, log10Selectivity: z.number().nullable(), provenance: provenanceSchema }),
  ),
  uses: z.array(
    z.strictObject({
      mode: z.enum(["direct", "back"]),
      ions: z.array(text).min(1),
      text,
      provenance: provenanceSchema,
    }),
  ),
  poisons: z.array(
    z.strictObject({ component: text, effect: z.enum(["absent", "disturbs"]), text, provenance: provenanceSchema }),
  ),
  chloride: z.strictObject({ productMax: positive, provenance: provenanceSchema }).nullable(),
  avoidBuffers: z.array(z.strictObject({ buffer: text, text, provenance: provenanceSchema })),
  provenance: provenanceSchema,
});

/** Wavelengths of a dye or a coloured complex in a photometric titration, nm. */
export const photometricSchema = z.strictObject({
  id: text,
  indicator: text.nullable(),
  complex: z.strictObject({ metal: text, titrant: text }).nullable(),
  pH: range,
  freeNm: nanometres.nullable(),
  bound: z.array(z.strictObject({ ion: text, nm: nanometres })),
  usedNm: nanometres,
  usedProvenance: provenanceSchema,
  provenance: provenanceSchema,
});
