import { z } from "zod";
import { briefSchema } from "./contract-brief.ts";
import type { Immutable } from "./contract-immutable.ts";

const text = z.string().min(1);
const finite = z.number();
const level = z.number().min(0);
const share = z.number().min(0).max(1);

/** How many draws may be asked for, and how many are made where nothing is said. */
export const DRAWS = { least: 100, most: 100_000, usual: 1000 } as const;

/** The robustness of a method as a question: the brief, which method of its answer, how many draws, the seed. */
export const robustnessQuestionSchema = z.strictObject({
  brief: z.unknown(),
  method: text.optional(), // id of a method of the answer; the first where nothing is said
  draws: z.int().min(DRAWS.least).max(DRAWS.most).optional(),
  seed: z.int().min(0).max(Number.MAX_SAFE_INTEGER).optional(),
});

/** One thing that is not known exactly and matters. */
export const drawnParameterSchema = z.strictObject({
  kind: z.enum(["constant", "pH", "reagent", "matrix"]),
  id: text, // reaction, number of the titration from 1, reagent, component
  standardUncertainty: level,
  unit: z.enum(["log10 K", "pH", "%"]),
  shareOfUncertainty: share, // of the variance of its ranks that goes with this alone
  shareOfError: share,
  errorGoes: z.enum(["up", "down"]).nullable(), // when this rises; null where no direction shows
});

/** The expanded uncertainty over pH and the amount of one reagent, all else as planned; null where no end point is read. */
export const robustnessMapSchema = z.strictObject({
  titration: z.int().min(1),
  pH: z.array(finite),
  reagent: text,
  molPerL: z.array(level),
  planned: z.strictObject({ pH: finite, molPerL: level }),
  expandedPercent: z.array(z.array(level.nullable())), // one row for each amount
});

/** What becomes of a method when everything it rests on is only known so well. */
export const robustnessSchema = z.strictObject({
  contract: z.literal(1),
  knowledge: z.strictObject({ version: text, hash: text }),
  brief: briefSchema,
  method: z.strictObject({ id: text, summary: text }),
  requirementPercent: level,
  seed: z.int().min(0),
  draws: z.int().min(1), // asked for
  done: z.int().min(0),
  spreads: z.strictObject({ pH: level, reagentPercent: level, dyePercent: level, matrixPercent: level }), // standard uncertainties
  /** Share of the draws in which every result keeps the requirement, with its 95 % interval. */
  probability: z.strictObject({ meeting: z.int().min(0), fraction: share, low: share, high: share }),
  unread: z.int().min(0), // draws without an end point, or with the dye spoilt: they do not meet it
  results: z.array(
    z.strictObject({
      determines: z.array(text).min(1),
      planned: z.strictObject({ biasPercent: finite, expandedPercent: level }),
      quantiles: z.array(z.strictObject({ probability: share, biasPercent: finite, expandedPercent: level })),
    }),
  ),
  parameters: z.array(drawnParameterSchema), // what matters most first
  map: robustnessMapSchema.nullable(), // null while it is not worked out, or where there is nothing to show
  /** Titrations that every draw evaluates as a whole, which is slower, and why. */
  notCompiled: z.array(
    z.strictObject({ titration: z.int().min(1), why: z.enum(["release", "way round", "solid", "no end point"]) }),
  ),
  whole: z.int().min(0), // draws in which some titration was evaluated as a whole
});

export type RobustnessQuestion = Immutable<z.output<typeof robustnessQuestionSchema>>;
export type DrawnParameter = Immutable<z.output<typeof drawnParameterSchema>>;
export type RobustnessMap = Immutable<z.output<typeof robustnessMapSchema>>;
export type Robustness = Immutable<z.output<typeof robustnessSchema>>;
