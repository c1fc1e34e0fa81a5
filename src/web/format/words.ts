/** The contract's short ids as words a chemist would write. */

export const VERDICT_WORDS: Readonly<Record<string, string>> = {
  fit: "Yes. It can be titrated.",
  "fit-with-reservations": "Yes, with reservations.",
  "not-fit": "No method found keeps the requirement.",
};

export const MODE_WORDS: Readonly<Record<string, string>> = {
  direct: "direct titration",
  back: "back titration",
  displacement: "displacement titration",
  indirect: "indirect titration",
  successive: "successive titrations",
  difference: "difference of two portions",
  portions: "separate portions",
};

export const PREPARATION_WORDS: Readonly<Record<string, string>> = {
  warm: "warm to 40 to 60 °C",
  heat: "heat to 60 to 90 °C",
  boil: "boil",
  cool: "let cool",
  wait: "wait for the reaction to finish",
  "excess-titrant-first": "add the titrant in excess before the pH is raised",
  "remove-carbonate": "boil out carbon dioxide from the acidified portion",
  "add-Mg-EDTA": "add magnesium-EDTA",
  "add-Zn-EDTA": "add zinc-EDTA",
  "add-Zn-EGTA": "add zinc-EGTA",
  "add-Cu-EDTA": "add a little copper-EDTA",
  "fluoride-release": "release with fluoride, after the first end point",
  "iodide-release": "release with iodide, after the first end point",
  "thiol-release": "release with a thiol, after the first end point",
  "tetracyanonickelate-exchange": "exchange on tetracyanonickelate",
  separate: "separate before titrating",
  "precipitate-and-filter": "precipitate and filter",
  "air-oxidise": "oxidise with air",
  alcohol: "add ethanol",
  reduce: "reduce",
  depolymerise: "boil in strong acid to break up polymers",
};

export const FINDING_WORDS: Readonly<Record<string, string>> = {
  "blocks-indicator": "holds the indicator",
  "titrates-with-analyte": "is titrated too",
  precipitates: "precipitates",
  slow: "reacts slowly",
  "consumes-titrant": "consumes titrant",
  "complexes-analyte": "binds the analyte",
  "oxidises-indicator": "oxidises the indicator",
};

export const EFFECT_WORDS: Readonly<Record<string, string>> = {
  excludes: "excludes",
  requires: "requires",
  favours: "speaks for it",
  disfavours: "speaks against it",
  cautions: "caution",
};

export const VIA_WORDS: Readonly<Record<string, string>> = {
  complexation: "as a complex",
  precipitation: "as a precipitate",
  reduction: "by reduction",
  oxidation: "by oxidation",
  kinetic: "by being too slow to react",
};

export const MASKING_BASIS_WORDS: Readonly<Record<string, string>> = {
  equilibrium: "calculated from constants",
  empirical: "an empirical record: no trustworthy constants exist",
  conversion: "complete conversion",
};

export const END_POINT_BASIS_WORDS: Readonly<Record<string, string>> = {
  constants: "calculated from the constants of the dye",
  table: "from a published table of transitions",
  empirical: "an empirical record: taken at equivalence with a wide band",
  electrode: "inflection of the computed potential",
};

export const BASIS_WORDS: Readonly<Record<string, string>> = {
  read: "read in the source",
  memory: "remembered, not read",
  computed: "computed by us",
  "common practice": "common practice",
};

/** The words of an id, or the id itself with its hyphens as spaces. */
export function wordsOf(table: Readonly<Record<string, string>>, id: string): string {
  return table[id] ?? id.replaceAll("-", " ");
}

/** The words of a camelCase name of a fact: "titratedFraction" gives "titrated fraction"; pH stays pH. */
export function spacedName(name: string): string {
  return name
    .replace(/([a-z])([A-Z])/g, "$1 $2")
    .replace(/([A-Z])([A-Z][a-z])/g, "$1 $2")
    .toLowerCase()
    .replace(/\bp ?h\b/g, "pH");
}

/** Joins names as a sentence does: "a", "a and b", "a, b and c". */
export function listing(items: readonly string[]): string {
  if (items.length < 2) return items[0] ?? "";
  return `${items.slice(0, -1).join(", ")} and ${items.at(-1) ?? ""}`;
}
