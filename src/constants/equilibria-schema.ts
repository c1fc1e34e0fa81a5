import { z } from "zod";

/** A composition over components, zero entries left out: { "Zn2+": 1, "ammonia": 2 }; hydroxo species carry a negative "H+". */
export const compositionSchema = z.record(z.string(), z.number());

/** One partner of a reaction: coefficient (products positive), composition, and "s" or "g" where it is not dissolved. */
const termSchema = z.union([
  z.tuple([z.number(), compositionSchema]),
  z.tuple([z.number(), compositionSchema, z.enum(["s", "g"])]),
]);

/**
 * One value of a compilation as printed: record id, value, temperature (C), ionic strength (mol/L), error column, footnote,
 * 1 where printed in parentheses. Value and error stay text, for the error counts in units of the last digit printed.
 */
const printedSchema = z.tuple([
  z.string().min(1),
  z.string().regex(/^-?\d+(\.\d+)?$/),
  z.number(),
  z.number().nonnegative(),
  z.string().regex(/^(0|\+\/-\d+|[+-]\d+)$/),
  z.string(),
  z.union([z.literal(0), z.literal(1)]),
]);

const confidenceSchema = z.enum(["high", "medium", "low"]);

/** One value from elsewhere: a handbook, a paper, or computed by us. */
const singleSchema = z.strictObject({
  value: z.number(),
  temperatureC: z.number(),
  ionicStrengthMolPerL: z.number().nonnegative(),
  uncertainty: z.number().positive().optional(),
  medium: z.string().optional(),
  source: z.string().min(1),
  where: z.string().optional(),
  record: z.string().optional(),
  basis: z.enum(["read", "memory", "computed"]),
  confidence: confidenceSchema,
});

const reactionSchema = z.strictObject({
  id: z.string().min(1),
  text: z.string().min(1),
  terms: z.array(termSchema).min(1),
  logK: z.array(printedSchema).optional(),
  enthalpy: z.array(printedSchema).optional(),
  single: z.array(singleSchema).optional(),
  notUsed: z.string().min(1).optional(), // why no species may be derived through this reaction
});

/** A file of reactions; `source` belongs to the printed values. */
export const reactionFileSchema = z.strictObject({
  about: z.string(),
  source: z.string().min(1),
  reactions: z.array(reactionSchema),
});

const chainSchema = z.array(z.tuple([z.string(), z.number()]));

/** A file of species: composition and the reactions that make it. */
export const speciesFileSchema = z.strictObject({
  about: z.string(),
  species: z.array(z.strictObject({ id: z.string().min(1), components: compositionSchema, chain: chainSchema })),
});

const provenanceSchema = z.strictObject({
  source: z.string().min(1),
  record: z.string().optional(),
  where: z.string().optional(),
  basis: z.enum(["read", "memory", "computed"]),
  confidence: confidenceSchema,
});

/** A file of solids. */
export const solidFileSchema = z.strictObject({
  about: z.string(),
  solids: z.array(
    z.strictObject({
      id: z.string().min(1),
      components: compositionSchema,
      chain: chainSchema,
      pace: z.enum(["fast", "minutes", "slow", "no"]),
      redissolvesWhileTitrated: z.boolean(),
      fresh: z.boolean(),
      note: z.string().optional(),
      provenance: provenanceSchema,
    }),
  ),
});

/** The file of components. */
export const componentFileSchema = z.strictObject({
  about: z.string(),
  components: z.array(
    z.strictObject({
      id: z.string().min(1),
      kind: z.enum(["proton", "metal", "ligand", "dye", "inert"]),
      charge: z.int(),
      name: z.string().min(1),
      ion: z.string().min(1),
      forms: z
        .array(
          z.strictObject({
            spelling: z.string().min(1),
            protonsPerComponent: z.number(),
            componentsPerFormula: z.int().positive(),
            charge: z.int(),
            molarMassGPerMol: z.number().positive(),
          }),
        )
        .min(1),
      synonyms: z.array(z.string().min(1)),
      molarMassGPerMol: z.number().positive(),
    }),
  ),
});

/** The file of sources of equilibrium data. */
export const sourceFileSchema = z.strictObject({
  about: z.string(),
  sources: z.array(
    z.strictObject({ id: z.string().min(1), citation: z.string().min(1), notice: z.string().optional() }),
  ),
});

/** The file of remarks written by hand or when the data were converted. */
export const remarkFileSchema = z.strictObject({
  about: z.string(),
  remarks: z.array(
    z.strictObject({
      kind: z.enum(["gap", "suspect", "passed-over", "disagreement", "unusable"]),
      about: z.string().min(1),
      text: z.string().min(1),
    }),
  ),
});

export type Composition = Readonly<Record<string, number>>;
export type Term =
  | readonly [number, Readonly<Record<string, number>>]
  | readonly [number, Readonly<Record<string, number>>, "s" | "g"];
export type FileReaction = z.infer<typeof reactionSchema>;
export type PrintedValue = z.infer<typeof printedSchema>;
export type SingleValue = z.infer<typeof singleSchema>;
