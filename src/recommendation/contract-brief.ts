import { z } from "zod";
import type { Immutable } from "./contract-immutable.ts";
import { CONCENTRATION_UNITS, DETECTIONS } from "./contract-vocabulary.ts";

/** Limits of a brief: beyond them the question is not one for a burette, or not one for one answer. */
export const BRIEF_LIMITS = {
  titleCharacters: 200,
  analytes: 6,
  matrixRows: 60,
  reagentIds: 300,
  textBytes: 256 * 1024,
  volumeML: [0.05, 5000],
  titrationVolumeML: [1, 10_000],
  requirementPercent: [0.001, 100],
  buretteML: [1, 100],
  temperatureC: [0, 100],
  concentrationMolPerL: 20,
} as const;

const between = ([low, high]: readonly [number, number]): z.ZodNumber => z.number().min(low).max(high);

/** A level as the chemist knows it: molar, or mass of the ion, or mass of another formula named by `as`. */
export const concentrationSchema = z.strictObject({
  value: z.number().min(0),
  unit: z.enum(CONCENTRATION_UNITS),
  as: z.string().min(1).max(60).optional(),
});

/** One ion to be determined. */
export const analyteSchema = z.strictObject({
  ion: z.string().min(1).max(100),
  concentration: concentrationSchema,
  report: z.enum(["individual", "sum"]).default("individual"),
});

/** One thing known to be in the solution beside the analytes. */
export const matrixRowSchema = z.strictObject({
  component: z.string().min(1).max(100),
  concentration: concentrationSchema,
});

const reagentIdsSchema = z.array(z.string().min(1).max(100)).max(BRIEF_LIMITS.reagentIds);

export const portionSchema = z.strictObject({
  volumeML: between(BRIEF_LIMITS.volumeML).default(50),
  titrationVolumeML: between(BRIEF_LIMITS.titrationVolumeML).default(100),
});
export const requirementSchema = z.strictObject({
  relativeExpandedUncertaintyPercent: between(BRIEF_LIMITS.requirementPercent).default(1),
});
export const laboratorySchema = z.strictObject({
  avoid: reagentIdsSchema.default([]),
  available: reagentIdsSchema.nullable().default(null),
  detection: z.array(z.enum(DETECTIONS)).min(1).max(DETECTIONS.length).default(["visual"]),
  heating: z.boolean().default(true),
  buretteML: between(BRIEF_LIMITS.buretteML).default(25),
});

/** The brief as its writer sends it: shape, limits and defaults; what the words mean is settled by `readBrief`. */
export const briefSchema = z.strictObject({
  title: z
    .string()
    .trim()
    .min(1)
    .max(BRIEF_LIMITS.titleCharacters)
    .refine((title) => !/\p{Cc}/u.test(title), "a text without control characters"),
  analytes: z.array(analyteSchema).min(1).max(BRIEF_LIMITS.analytes),
  matrix: z.array(matrixRowSchema).max(BRIEF_LIMITS.matrixRows).default([]),
  portion: portionSchema.default({ volumeML: 50, titrationVolumeML: 100 }),
  requirement: requirementSchema.default({ relativeExpandedUncertaintyPercent: 1 }),
  laboratory: laboratorySchema.default({
    avoid: [],
    available: null,
    detection: ["visual"],
    heating: true,
    buretteML: 25,
  }),
  temperatureC: between(BRIEF_LIMITS.temperatureC).default(25),
});

/** What a writer may send: everything with a default may be left out. */
export type BriefInput = z.input<typeof briefSchema>;
/** A brief with every default filled in; in an answer also canonical ions and mol/L. */
export type Brief = Immutable<z.output<typeof briefSchema>>;
export type Concentration = Immutable<z.output<typeof concentrationSchema>>;
