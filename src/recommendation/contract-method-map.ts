import { z } from "zod";
import { briefSchema } from "./contract-brief.ts";
import type { Immutable } from "./contract-immutable.ts";
import { factsSchema } from "./contract-recommendation.ts";
import { DETECTIONS, PREPARATION_STEPS, VERDICTS } from "./contract-vocabulary.ts";

const text = z.string();
const finite = z.number();
const reagent = z.strictObject({ id: text, molPerL: finite });

/** Modes that concern one analyte; the others combine several. */
export const SINGLE_MODES = ["direct", "back", "displacement", "indirect"] as const;

/**
 * What is said of a mode: open with or without reservations, closed by calculation or by a rule, or not known because the
 * constants are missing.
 */
export const MAP_STATUSES = ["open", "open-with-reservations", "closed", "unknown"] as const;

/** An evaluated method that opens a mode, with the brief whose reagents are just its own. */
export const mappedMethodSchema = z.strictObject({
  id: text,
  summary: text,
  verdict: z.enum(VERDICTS),
  titrant: reagent,
  backTitrant: reagent.nullable(),
  through: text.nullable(), // the metal that stands for the analyte on a way round
  pH: finite,
  buffer: reagent,
  detection: z.enum(DETECTIONS),
  indicator: text.nullable(),
  electrode: text.nullable(),
  preparation: z.array(z.enum(PREPARATION_STEPS)),
  log10ConditionalK: finite.nullable(), // of the analyte with the titrant at the end point
  biasPercent: finite,
  relativeExpandedUncertaintyPercent: finite, // k = 2, bias included
  reservations: z.array(text),
  cautions: z.array(text),
  brief: briefSchema,
});

/** One reason why a mode is not open, with the numbers behind it. */
export const mapReasonSchema = z.strictObject({
  kind: z.enum([
    "not-by-this-technique",
    "no-constants",
    "no-way",
    "no-dye",
    "reacts-slowly",
    "too-weak",
    "rule",
    "misses",
    "no-end-point",
  ]),
  statement: text,
  rule: text.nullable(),
  source: text.nullable(),
  basis: text.nullable(),
  facts: factsSchema,
});

export const mappedModeSchema = z.strictObject({
  mode: z.enum(SINGLE_MODES),
  status: z.enum(MAP_STATUSES),
  tried: z.int().min(0), // titrations worked out
  judged: z.int().min(0), // of these, put before the rules
  methods: z.array(mappedMethodSchema), // the best of each titrant, best first; empty unless open
  nearest: text.nullable(), // the titration that came nearest, where none is open
  reasons: z.array(mapReasonSchema), // why the mode is not open; empty where it is
});

/** What is open for one ion. */
export const ionMapSchema = z.strictObject({
  ion: text,
  name: text,
  status: z.enum(MAP_STATUSES), // of its best mode
  modes: z.array(mappedModeSchema),
  log10K: z.array(z.strictObject({ titrant: text, best: finite, pH: finite, needed: finite })), // conditional constants met in the search
  brief: briefSchema,
});

/** The map as far as it is worked out. */
export const methodMapSchema = z.strictObject({
  contract: z.literal(1),
  knowledge: z.strictObject({ version: text, hash: text }),
  total: z.int(), // ions the map is about
  done: z.int(),
  failed: z.array(z.strictObject({ ion: text, message: text })),
  severalAnalytes: z.record(text, text), // modes that concern several analytes, and why they are not here
  ions: z.array(ionMapSchema),
});

export type SingleMode = (typeof SINGLE_MODES)[number];
export type MapStatus = (typeof MAP_STATUSES)[number];
export type MappedMethod = Immutable<z.output<typeof mappedMethodSchema>>;
export type MapReason = Immutable<z.output<typeof mapReasonSchema>>;
export type MappedMode = Immutable<z.output<typeof mappedModeSchema>>;
export type IonMap = Immutable<z.output<typeof ionMapSchema>>;
export type MethodMap = Immutable<z.output<typeof methodMapSchema>>;
