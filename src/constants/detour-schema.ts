import { z } from "zod";
import { provenanceSchema } from "./practice-schema.ts";

const text = z.string().min(1);
const range = z.tuple([z.number(), z.number()]).refine(([low, high]) => low <= high, "low end above high end");
const amounts = z.record(text, z.number().positive());

const reagentSchema = z.strictObject({
  id: text,
  alsoCalled: z.array(text),
  barredWith: z.array(text),
  components: amounts,
  special: z.boolean(),
});

/** A way round: an ion determined through a metal; pH on the activity scale, amounts mol/L or ratios as named. */
export const detourSchema = z
  .strictObject({
    id: text,
    analyte: text,
    kind: z.enum(["surplus", "precipitate", "exchange", "conversion"]),
    methodMode: z.enum(["indirect", "displacement"]),
    metal: text,
    analytePerMetal: z.number().positive(),
    reagent: reagentSchema,
    reagentOverNeed: z.number().min(1),
    precipitant: reagentSchema
      .extend({ analytePerMetal: z.number().positive(), overNeed: z.number().min(1) })
      .nullable(),
    further: z.array(z.strictObject({ id: text, purpose: text, molPerL: z.number().nonnegative() })),
    precipitation: z.strictObject({ pH: z.number(), with: amounts, words: text }).nullable(),
    solids: z.array(text),
    filtered: z.boolean(),
    rests: z.enum(["equilibrium", "composition"]),
    compositionUncertainty: z.number().min(0).max(0.2),
    finish: z.strictObject({
      mode: z.enum(["direct", "back"]),
      pH: range,
      backTitrants: z.array(text),
      dyes: z.array(text),
    }),
    auxiliary: z.array(z.strictObject({ id: text, purpose: text })),
    preparation: z.array(text),
    note: text,
    provenance: provenanceSchema,
    otherSources: z.array(provenanceSchema),
  })
  .refine((row) => row.rests === "composition" || row.compositionUncertainty === 0, "a calculated way assumes nothing");
