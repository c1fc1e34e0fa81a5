import type { FactRow } from "./types.ts";

/** What a titrant other than EDTA solves, and how much of a chelate is added; stage facts. */
export const TITRANT_ROWS: readonly FactRow[] = [
  [
    "sparesHeat",
    "boolean",
    null,
    "always",
    "the analyte would need heat or boiling with EDTA, and needs none with this titrant",
  ],
  [
    "toldApart",
    "strings",
    null,
    "always",
    "metals of the matrix, unmasked, that this titrant leaves and that EDTA would take with the analyte",
  ],
  ["toldApartCount", "number", null, "always", "how many those are"],
  [
    "chelateToAnalyteRatio",
    "number",
    null,
    "always",
    "chelate added over what is determined, by amount; 0 where there is none",
  ],
  [
    "chelateLead",
    "number",
    "log10",
    "always",
    "log K' of the metal of an added chelate minus that of what is determined; 0 without a chelate or where not known",
  ],
];
