import { z } from "zod";

const finite = z.number();
const level = z.number().min(0);
const text = z.string().min(1);

/** What shifts a result, cause by cause, %: with and without what the standardisation takes back. */
export const biasBySourceSchema = z.array(
  z.strictObject({
    source: text,
    percent: finite,
    uncancelledPercent: finite,
    kind: z.enum([
      "end-point",
      "interferent",
      "incomplete-masking",
      "analyte-lost",
      "analyte-held",
      "back-titrant-displacement",
      "indicator-consumption",
      "carbonate",
      "buffer-drift",
    ]),
    by: text.nullable(), // of an incomplete masking, the agent
    titration: z.int().min(1).nullable(), // where the result is a difference of two
  }),
);

/** The uncertainty budget of the worst result by JCGM 100, quantity by quantity. */
export const budgetSchema = z.strictObject({
  determines: z.array(text).min(1),
  resultMolPerL: level, // in the sample
  rows: z.array(
    z.strictObject({
      term: text, // of `uncertaintyBudget`
      quantity: text,
      value: finite,
      unit: z.string(),
      distribution: z.enum(["triangular", "rectangular", "normal"]),
      halfWidth: level, // of a normal distribution the standard uncertainty
      standardUncertainty: level, // in the unit
      sensitivityPercentPerUnit: finite,
      percent: level, // of the result
      degreesOfFreedom: level.nullable(), // null: infinitely many
    }),
  ), // largest first
  combinedPercent: level, // u_c
  coverageFactor: level,
  effectiveDegreesOfFreedom: level.nullable(), // Welch and Satterthwaite; null: infinitely many
  notCounted: z.array(text), // what the figures leave out
});

/** Other ware and strength for the same method: what would meet the requirement, or what comes nearest. */
export const wouldMeetSchema = z.strictObject({
  meets: z.boolean(),
  // null where no other ware was found to try
  with: z
    .strictObject({
      buretteML: level,
      portionML: level,
      titrantMolPerL: level,
      titreML: level,
      relativeExpandedUncertaintyPercent: level,
    })
    .nullable(),
  largest: z.strictObject({ source: text, percent: level }), // "bias" or a term of the budget
  statement: text,
});
