import { readFileSync } from "node:fs";
import { z } from "zod";
import { FINDING_KINDS, METHOD_MODES, PREPARATION_STEPS, VERDICTS } from "../../src/recommendation/contract.ts";

const words = z.array(z.string().min(1)).default([]);
const interval = z.tuple([z.number(), z.number()]);
const modes = z.array(z.enum(METHOD_MODES)).default([]);
const steps = z.array(z.enum(PREPARATION_STEPS)).default([]);

/** A titration as published practice does it; an empty list means that practice does not mind. */
const acceptedStageSchema = z.strictObject({
  determines: z.array(z.string()).min(1),
  titrants: words,
  pH: interval, // of the target
  indicators: words,
  detections: words, // none listed: visual with one of the indicators, or by electrode where no indicator is listed
  buffers: words,
  masking: z.record(z.string(), z.array(z.string()).min(1)).default({}), // per ion; "none" = unmasked is right, "separate" = removed is right
  preparation: steps, // all of them
  anyOf: z.array(z.array(z.string()).min(1)).default([]), // one agent of each group, anywhere in the stage
});

const acceptedMethodSchema = z.strictObject({
  modes: z.array(z.enum(METHOD_MODES)).min(1),
  titrants: words, // of the method; not compared where its stages name their own
  backTitrants: words,
  stages: z.array(acceptedStageSchema).min(1),
});

/** A pattern that must not describe the first-ranked method. */
const wrongMethodSchema = z.strictObject({
  modes,
  titrants: words,
  backTitrants: words,
  indicators: words,
  pH: interval.optional(),
  unmasked: words, // wrong while any of these is neither masked nor removed
  without: steps, // a method that does one of these steps is not meant
  why: z.string().min(1),
});

const flagSchema = z.strictObject({ component: z.string(), as: z.enum(FINDING_KINDS), note: z.string().optional() });

const caseSchema = z.strictObject({
  id: z.string().regex(/^[a-z0-9-]+$/),
  topic: z.string(),
  difficulty: z.enum(["plain", "interference", "kinetic", "exotic", "multi-analyte"]),
  sources: z
    .array(z.strictObject({ citation: z.string().min(1), basis: z.enum(["read", "partly read", "memory"]) }))
    .min(1),
  brief: z.looseObject({ title: z.string() }),
  accepts: z.array(acceptedMethodSchema),
  rejects: z.array(wrongMethodSchema).default([]),
  flags: z.array(flagSchema).default([]),
  notFlags: z.array(flagSchema).default([]),
  verdicts: z.array(z.enum(VERDICTS)).min(1),
  notes: z.string(),
});

export type PracticeCase = z.output<typeof caseSchema>;
export type AcceptedMethod = z.output<typeof acceptedMethodSchema>;
export type AcceptedStage = z.output<typeof acceptedStageSchema>;
export type WrongMethod = z.output<typeof wrongMethodSchema>;

/**
 * Briefs, and every answer that published practice supports: the acceptance cases, or the project's own invented briefs of the trades.
 * Throws when the file does not keep its schema.
 */
export function practiceCases(set: "cases" | "trade-briefs" = "cases"): readonly PracticeCase[] {
  const file = new URL(`${set}.json`, import.meta.url);
  return z.array(caseSchema).parse(JSON.parse(readFileSync(file, "utf8")));
}
