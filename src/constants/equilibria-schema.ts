import { z } from "zod";
import {
  type Composition,
  hasKeys,
  isChain,
  isComposition,
  isListOf,
  isPrinted,
  isTerm,
  isText,
  type StoredChain,
} from "./equilibria-rows.ts";

const listOf = <T>(is: (value: unknown) => value is T, what: string) =>
  z.custom<readonly T[]>((value) => isListOf(value, is), `expected a list of ${what}`);

/** A list of rows: those that `isRow` passes are taken as they are, the others are put to `schema`, whose faults name their place. */
function rowsOf<S extends z.ZodType>(schema: S, isRow: (row: unknown) => boolean) {
  return z.custom<readonly z.infer<S>[]>().superRefine((rows: unknown, context) => {
    if (!Array.isArray(rows)) {
      context.addIssue({ code: "custom", message: "expected a list" });
      return;
    }
    for (const [i, row] of (rows as readonly unknown[]).entries()) {
      if (isRow(row)) continue;
      for (const issue of schema.safeParse(row).error?.issues ?? []) {
        context.addIssue({ code: "custom", message: issue.message, path: [i, ...issue.path] });
      }
    }
  });
}

const compositionSchema = z.custom<Composition>(
  isComposition,
  'expected counts by component, as { "Zn2+": 1 }, none of them 0',
);
const termsSchema = listOf(isTerm, 'partners [coefficient, composition] or [coefficient, composition, "s" or "g"]');
const printedSchema = listOf(isPrinted, "values [record, value as text, C, mol/L, error column, footnote, 0 or 1]");
const chainSchema = z.custom<StoredChain>(isChain, "expected a chain [[reaction, factor], ...]");

/** The acknowledgement that travels with data of the compilation: source, as is, modified work, what was changed and when. */
const noticeSchema = z.string().min(1);

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
  terms: termsSchema,
  logK: printedSchema.optional(),
  enthalpy: printedSchema.optional(),
  single: z.array(singleSchema).optional(),
  notUsed: z.string().min(1).optional(), // why no species may be derived through this reaction
});

function isReactionRow(row: unknown): boolean {
  return (
    hasKeys(row, ["id", "text", "terms"], ["logK", "enthalpy", "single", "notUsed"]) &&
    isText(row["id"]) &&
    isText(row["text"]) &&
    isListOf(row["terms"], isTerm) &&
    (row["logK"] === undefined || isListOf(row["logK"], isPrinted)) &&
    (row["enthalpy"] === undefined || isListOf(row["enthalpy"], isPrinted)) &&
    (row["notUsed"] === undefined || isText(row["notUsed"])) &&
    row["single"] === undefined // these few are put to the schema
  );
}

/** A file of reactions; `source` belongs to the printed values. */
export const reactionFileSchema = z.strictObject({
  about: z.string(),
  notice: noticeSchema,
  source: z.string().min(1),
  reactions: rowsOf(reactionSchema, isReactionRow),
});

const speciesSchema = z.strictObject({ id: z.string().min(1), components: compositionSchema, chain: chainSchema });

function isSpeciesRow(row: unknown): boolean {
  return (
    hasKeys(row, ["id", "components", "chain"], []) &&
    isText(row["id"]) &&
    isComposition(row["components"]) &&
    isChain(row["chain"])
  );
}

/** A file of species: composition and the reactions that make it. */
export const speciesFileSchema = z.strictObject({
  about: z.string(),
  notice: noticeSchema,
  species: rowsOf(speciesSchema, isSpeciesRow),
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
  notice: noticeSchema,
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

export type SingleValue = z.infer<typeof singleSchema>;

export type FileReaction = z.infer<typeof reactionSchema>;
