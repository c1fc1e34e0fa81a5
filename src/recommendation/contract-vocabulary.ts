/** The words of the contract: enumerations and reagent ids that briefs and answers may use. */

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

const words = (text: string): readonly string[] => text.trim().split(/[\s,]+/);

/** Reagent ids that the contract names, by what they are. A brief may name any of them, whether or not the knowledge base holds data for it. */
export const CONTRACT_REAGENTS = {
  titrants: words("EDTA CDTA EGTA DTPA HEDTA NTA TTHA trien"),
  metalTitrants: words("Zn2+ Mg2+ Ca2+ Cu2+ Pb2+ Bi3+ Th4+ Fe3+ Ni2+ Mn2+ Ba2+ La3+"),
  indicators: words(`mordant-black-11 calmagite calcon calconcarboxylic-acid hydroxynaphthol-blue acid-chrome-blue-k
    murexide zincon xylenol-orange semi-xylenol-orange methylthymol-blue thymolphthalexone phthalein-purple calcein PAN
    Cu-PAN PAR TAN pyrocatechol-violet bromopyrogallol-red pyrogallol-red sulfosalicylic-acid tiron variamine-blue
    dithizone fast-sulphon-black-f arsenazo-i arsenazo-iii thoron eriochrome-cyanine-r chromazurol-s calcichrome gha`),
  buffers: words(`nitric-acid perchloric-acid hydrochloric-acid chloroacetate glycine formate acetate hexamine
    imidazole tris borate triethanolamine-buffer ammonia ethanolamine diethylamine piperidine carbonate
    sodium-hydroxide potassium-hydroxide`),
  agents: words(`cyanide sulfide triethanolamine tartrate citrate fluoride iodide bromide chloride thiosulfate thiourea
    thiocyanate thioglycolate dimercaprol dimercaptopropanesulfonate cysteine sulfosalicylate tiron acetylacetone
    phenanthroline phosphate pyrophosphate ascorbic-acid hydroxylamine hydrogen-peroxide ferrocyanide sulfate carbonate
    hydroxide EGTA Mg-CDTA tetraethylenepentamine triethylenetetramine ammonia formaldehyde chloral-hydrate`),
  chelates: words("Mg-EDTA Zn-EDTA Zn-EGTA Cu-EDTA tetracyanonickelate"),
} as const;
