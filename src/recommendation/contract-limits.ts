import { z } from "zod";
import type { Immutable } from "./contract-immutable.ts";
import { methodSchema } from "./contract-recommendation.ts";

const text = z.string().min(1);

/** What tolerance limits are asked for: a brief, one of the methods of its answer, and what the sample might hold besides. */
export const limitsQuestionSchema = z.strictObject({
  brief: z.unknown(),
  method: text.optional(), // id of a method of the answer; the first where left out
  also: z.array(text.max(100)).max(60).default([]), // ions or components that the brief does not name
});

/** Tolerance limits of one method, for the matrix of the brief and for what else was asked about (present: 0). */
export const methodLimitsSchema = z.strictObject({
  contract: z.literal(1),
  knowledge: z.strictObject({ version: text, hash: text }),
  method: z.strictObject({ id: text, summary: text }),
  limits: methodSchema.shape.tolerance,
  without: z.array(text), // asked about, but carrying charge and nothing else, or taken out by a separation: no limit
});

export type MethodLimits = Immutable<z.output<typeof methodLimitsSchema>>;
