import type { PREPARATION_STEPS } from "./contract-vocabulary.ts";

/** What a preparation step of the contract means at the bench, as an order. */
export const PREPARATION_WORDS: Readonly<Record<(typeof PREPARATION_STEPS)[number], string>> = {
  warm: "Warm to 40 to 60 °C.",
  heat: "Heat to 60 to 90 °C.",
  boil: "Boil for a few minutes.",
  cool: "Cool to room temperature.",
  wait: "Wait until the reaction is complete.",
  "excess-titrant-first": "Add the titrant in excess before the pH is raised.",
  "remove-carbonate": "Acidify and drive off the carbon dioxide before the solution is made alkaline.",
  "add-Mg-EDTA": "Add the magnesium chelate (Mg-EDTA).",
  "add-Zn-EDTA": "Add the zinc chelate (Zn-EDTA).",
  "add-Zn-EGTA": "Add the zinc chelate (Zn-EGTA).",
  "add-Cu-EDTA": "Add a little of the copper chelate (Cu-EDTA).",
  "fluoride-release":
    "Titrate the excess first, discard that reading, then add fluoride, which sets the analyte's titrant free.",
  "iodide-release":
    "Titrate the excess first, discard that reading, then add iodide, which sets the analyte's titrant free.",
  "thiol-release":
    "Titrate the excess first, discard that reading, then add the thiol, which sets the analyte's titrant free.",
  "tetracyanonickelate-exchange": "Add tetracyanonickelate: the analyte sets nickel free, which is then titrated.",
  separate:
    "Separate first (extraction, ion exchange or precipitation), and go on with the fraction that holds the analyte.",
  "precipitate-and-filter": "Let the precipitate form, and filter it off.",
  "air-oxidise": "Shake with air until the oxidation is complete.",
  alcohol: "Add ethanol.",
  reduce: "Add the reductant and wait until the reduction is complete.",
  depolymerise: "Boil in strong acid to break down polymers, then cool.",
};

export const MODE_WORDS = {
  direct: "direct titration",
  back: "back titration",
  displacement: "displacement titration",
  indirect: "indirect titration",
  successive: "successive titration",
  difference: "titration by difference",
  portions: "titration of separate portions",
} as const;

export const VERDICT_WORDS = {
  fit: "FIT",
  "fit-with-reservations": "FIT, WITH RESERVATIONS",
  "not-fit": "NOT FIT",
} as const;

export const FINDING_WORDS = {
  "blocks-indicator": "blocks the indicator",
  "titrates-with-analyte": "titrates with the analyte",
  precipitates: "precipitates",
  slow: "reacts slowly",
  "consumes-titrant": "consumes titrant",
  "complexes-analyte": "binds the analyte",
  "oxidises-indicator": "destroys the indicator",
} as const;

/** A reagent id as words: "xylenol-orange" -> "xylenol orange"; ions, chelates and abbreviations stay as they are ("Mg-EDTA", "PAN"). */
export const reagentWords = (id: string): string =>
  /^[a-z0-9-]+$/.test(id) ? id.replaceAll("-", " ").replace(/ [a-z]$/, (letter) => letter.toUpperCase()) : id;

/** A number at three significant figures, without an exponent where it reads well without one; "0" stays "0". */
export function figures(value: number, digits = 3): string {
  if (value === 0) return "0";
  const size = Math.abs(value);
  if (size < 1e-3 || size >= 1e5) return value.toExponential(digits - 1).replace(/\.?0+e/, "e");
  return String(Number(value.toPrecision(digits)));
}

/** A percentage with its unit; signed where the sign means something. */
export const percent = (value: number): string => `${figures(value, value >= 10 ? 3 : 2)} %`;
export const signedPercent = (value: number): string => `${value > 0 ? "+" : ""}${figures(value, 2)} %`;

/** Joins words as a sentence does: "a", "a and b", "a, b and c". */
export function listed(words: readonly string[]): string {
  if (words.length < 2) return words.join("");
  return `${words.slice(0, -1).join(", ")} and ${words.at(-1) ?? ""}`;
}
