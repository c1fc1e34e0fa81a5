import { z } from "zod";
import { briefSchema } from "./contract-brief.ts";
import type { Immutable } from "./contract-immutable.ts";
import { VERDICTS } from "./contract-vocabulary.ts";

const text = z.string().min(1);
const level = z.number().min(0);

/** What of a brief can be changed by itself. */
export const CHANGES = ["analyte-level", "matrix-level", "requirement", "forbid", "allow"] as const;

/** What an answer comes to: its verdict and its first method. */
export const standingSchema = z.strictObject({
  verdict: z.enum(VERDICTS),
  method: z
    .strictObject({
      id: text,
      kind: text, // equal kinds are the same method: mode, way round, titrants, dye or electrode, masking agents, separation
      words: text, // the same in words
    })
    .nullable(), // null where no method stands
});

const changeFields = {
  what: z.enum(CHANGES),
  subject: z.string(), // the ion, as the brief writes it, or the reagent; empty for the requirement
  direction: z.enum(["up", "down"]).nullable(), // null for a reagent
  unit: z.enum(["mol/L", "%"]).nullable(),
  from: level.nullable(),
};

/** A change of the brief by which the first method or the verdict becomes another. */
export const turningPointSchema = z.strictObject({
  ...changeFields,
  to: level.nullable(),
  factor: level.nullable(), // to over from; null for a reagent and where nothing was there
  changes: z.array(z.enum(["method", "verdict"])).min(1),
  after: standingSchema,
  /** Nine tenths of the change, by difference and by ratio: seen to change nothing. Empty for a reagent. */
  unchangedAt: z.array(level),
  brief: briefSchema, // the changed brief
});

/** A change that was looked at and did nothing, up to there; or one that could not be settled in the runs allowed. */
export const unmovedSchema = z.strictObject({ ...changeFields, upTo: level.nullable(), settled: z.boolean() });

/** Turning points of one brief, smallest change first, as far as they are worked out. */
export const turningPointsSchema = z.strictObject({
  contract: z.literal(1),
  knowledge: z.strictObject({ version: text, hash: text }),
  brief: briefSchema,
  before: standingSchema,
  points: z.array(turningPointSchema),
  unmoved: z.array(unmovedSchema),
  done: z.int().min(0), // changes looked at
  total: z.int().min(0),
  runs: z.int().min(0), // recommendations worked out
});

export type Standing = Immutable<z.output<typeof standingSchema>>;
export type TurningPoint = Immutable<z.output<typeof turningPointSchema>>;
export type UnmovedChange = Immutable<z.output<typeof unmovedSchema>>;
export type TurningPoints = Immutable<z.output<typeof turningPointsSchema>>;
