/** The closed vocabularies of briefs and answers. Reagent ids are data (contract-ids.json in constants). */

export const DETECTIONS = ["visual", "photometric", "electrode"] as const;
export const METHOD_MODES = [
  "direct",
  "back",
  "displacement",
  "indirect",
  "successive",
  "difference",
  "portions",
] as const;
export const STAGE_MODES = ["direct", "back", "displacement"] as const;
export const VERDICTS = ["fit", "fit-with-reservations", "not-fit"] as const;
/** What ends the room for a component; "none": nothing does up to the level given. */
export const LIMIT_ENDS = [
  "requirement",
  "blocking",
  "masking-used-up",
  "empirical-record",
  "precipitation",
  "fails",
  "none",
] as const;
export const MASKING_VIAS = ["complexation", "precipitation", "reduction", "oxidation", "kinetic"] as const;
export const RULE_EFFECTS = ["excludes", "requires", "favours", "disfavours", "cautions"] as const;
export const FINDING_KINDS = [
  "blocks-indicator",
  "titrates-with-analyte",
  "precipitates",
  "slow",
  "consumes-titrant",
  "complexes-analyte",
  "oxidises-indicator",
] as const;
export const CONCENTRATION_UNITS = ["mol/L", "mmol/L", "umol/L", "µmol/L", "g/L", "mg/L", "ug/L", "µg/L"] as const;
export const INDICATOR_CLASSES = [
  "azo",
  "triphenylmethane",
  "phthalein",
  "murexide-type",
  "pyridylazo",
  "redox",
  "extractive",
  "fluorescent",
  "self-coloured",
] as const;
export const PREPARATION_STEPS = [
  "warm",
  "heat",
  "boil",
  "cool",
  "wait",
  "excess-titrant-first",
  "remove-carbonate",
  "add-Mg-EDTA",
  "add-Zn-EDTA",
  "add-Zn-EGTA",
  "add-Cu-EDTA",
  "fluoride-release",
  "iodide-release",
  "thiol-release",
  "tetracyanonickelate-exchange",
  "separate",
  "precipitate-and-filter",
  "air-oxidise",
  "alcohol",
  "reduce",
  "depolymerise",
] as const;
