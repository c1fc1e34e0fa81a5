import { z } from "zod";
import { provenanceSchema } from "./practice-schema.ts";

const text = z.string().min(1);

/** What an agent frees from the chelate; pH on the activity scale, amounts mol/L in the titrated solution. */
export const releaseSchema = z.strictObject({
  id: text,
  agent: text,
  beside: z.array(text),
  titrants: z.array(text).min(1),
  ions: z
    .array(
      z.strictObject({
        ion: text,
        freed: z.boolean(),
        judgedBy: z.enum(["constants", "record"]),
        provenance: provenanceSchema.exactOptional(),
      }),
    )
    .refine((ions) => ions.some((i) => i.freed), "nothing is freed"),
  pH: z.tuple([z.number(), z.number()]).refine(([low, high]) => low < high, "low end above high end"),
  buffers: z.array(text).min(1),
  backTitrants: z.array(text).min(1),
  indicators: z.array(text).min(1),
  before: z.array(z.enum(["warm", "heat", "boil", "cool", "wait"])),
  step: z.enum(["fluoride-release", "iodide-release", "thiol-release"]).nullable(),
  after: z.array(z.enum(["warm", "heat", "boil", "cool", "wait"])),
  upTo: z.strictObject({ molPerL: z.number().positive(), text }).nullable(),
  detail: text,
  provenance: provenanceSchema,
  otherSources: z.array(provenanceSchema),
});
