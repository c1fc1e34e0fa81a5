/**
 * What the program knows, as types: data with provenance, no behaviour. Every layer above reads these.
 * Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.
 */

/** Id of a component: a metal ion in the contract's canonical spelling ("Zn2+", "UO2^2+"), a ligand or dye by name ("EDTA", "ammonia", "xylenol-orange"), or "H+". */
export type ComponentId = string;
export type SpeciesId = string;
export type ReactionId = string;
export type SourceId = string;

/** Whether the value was read in the named source, recalled from memory, or computed by us from other values. */
export type Basis = "read" | "memory" | "computed";
export type Confidence = "high" | "medium" | "low";

/** Where a value comes from. */
export interface Provenance {
  readonly source: SourceId;
  readonly record?: string; // e.g. "108224" for an SRD 46 record
  readonly where?: string; // page, table, section
  readonly basis: Basis;
  readonly confidence: Confidence;
}

export interface SourceRecord {
  readonly id: SourceId;
  readonly citation: string;
  readonly notice?: string; // an acknowledgement that must be shown with it
}

/** A component of the equilibrium model. */
export interface ComponentRecord {
  readonly id: ComponentId;
  readonly kind: "proton" | "metal" | "ligand" | "dye" | "inert";
  readonly charge: number; // of the component as modelled (metal ion; fully deprotonated ligand)
  readonly name: string; // plain English: "zinc", "sulfate"
  readonly ion: string; // canonical spelling in briefs and answers: "Zn2+", "SO4^2-", "citrate"
  readonly forms: readonly ComponentForm[]; // every canonical spelling that means this component, the component itself included
  readonly synonyms: readonly string[]; // further spellings a reader must understand, compared without case
  readonly molarMassGPerMol: number; // of the component's own form
}

/** A spelling of a component with the protons it carries: HCO3- is carbonate with protons 1; CrO4^2- / Cr2O7^2- per formula unit. */
export interface ComponentForm {
  readonly spelling: string;
  readonly protonsPerComponent: number;
  readonly componentsPerFormula: number; // 2 for Cr2O7^2-
  readonly charge: number; // of the formula
  readonly molarMassGPerMol: number; // of the formula
}

/** One measured or recalled value of a reaction, as found. */
export interface ConstantRecord {
  readonly log10K: number;
  readonly ionicStrengthMolPerL: number;
  readonly temperatureC: number;
  readonly medium?: string; // background salt in words where stated: "KNO3", "NaClO4"
  readonly uncertainty: number; // standard uncertainty in log10 units
  readonly uncertaintyStated: boolean; // false = none stated, assumed by the rule in constants/uncertainty.ts
  readonly doubtful: boolean;
  readonly provenance: Provenance;
}

export interface EnthalpyRecord {
  readonly kJPerMol: number;
  readonly ionicStrengthMolPerL: number;
  readonly temperatureC: number;
  readonly doubtful: boolean;
  readonly provenance: Provenance;
}

/** A reaction as its source wrote it, e.g. "[ML2]/([ML][L])" for Zn2+ and ammonia; several records may stand for it. */
export interface Reaction {
  readonly id: ReactionId;
  readonly text: string;
  readonly deltaZ2: number; // sum of nu*z^2 over the reaction: the Davies factor
  readonly records: readonly ConstantRecord[];
  readonly enthalpies: readonly EnthalpyRecord[];
}

/** A species with its composition and the reactions whose log10 K, times the factors, add up to its overall log10 beta. */
export interface SpeciesDefinition {
  readonly id: SpeciesId; // readable and unique: "Zn(NH3)2 2+", "CaHEDTA-"
  readonly components: Readonly<Record<ComponentId, number>>; // integers; hydroxo species carry a negative "H+"
  readonly charge: number;
  readonly chain: readonly { readonly reaction: ReactionId; readonly factor: number }[];
}

export type SolidPace = "fast" | "minutes" | "slow" | "no";

/** A solid: composition per formula unit; the chain adds up to log10 of its formation constant from the components (= minus log10 Ksp). */
export interface SolidDefinition {
  readonly id: SpeciesId; // "CaCO3 (calcite)"
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly chain: readonly { readonly reaction: ReactionId; readonly factor: number }[];
  readonly pace: SolidPace; // how fast it forms on the time scale of a titration
  readonly redissolvesWhileTitrated: boolean;
  readonly fresh: boolean; // fresh or active phase (the one a titration meets)
  readonly note?: string;
  readonly provenance: Provenance; // of pace and redissolution
}

export type IndicatorClass =
  | "azo"
  | "triphenylmethane"
  | "phthalein"
  | "murexide-type"
  | "pyridylazo"
  | "redox"
  | "extractive"
  | "fluorescent"
  | "self-coloured";
export type EndPointModel = "two-colour" | "one-colour" | "redox" | "extractive" | "fluorescence";

/** A pH window in which the dye is used for an ion, as published or remembered. */
export interface IndicatorUse {
  readonly ions: readonly ComponentId[]; // more than one: their sum
  readonly mode: "direct" | "back" | "displacement" | "indirect";
  readonly backTitrant?: ComponentId; // for back titrations where the use names one
  readonly pH: readonly [number, number];
  readonly detail: string;
  /** What the use asks for besides pH, as far as the record says: temperature, solvent, the chelate added, the titrant where it is not EDTA, agents. */
  readonly temperature?: "warm" | "heat" | "boil";
  readonly alcohol?: boolean;
  readonly chelate?: "Mg-EDTA" | "Zn-EDTA" | "Zn-EGTA" | "Cu-EDTA";
  readonly titrant?: string;
  readonly auxiliaryAnyOf?: readonly string[];
  readonly provenance: Provenance;
}

/** A metal that spoils this dye: it stays bound, or exchanges too slowly. */
export interface IndicatorBlocker {
  readonly ion: ComponentId;
  /** Total in the titrated solution at which the end point is spoilt, mol/L; 0 = at every level; null = level not stated. */
  readonly fromMolPerL: number | null;
  readonly kind: "blocks" | "slow";
  readonly pH?: readonly [number, number]; // where the record confines itself to acid, alkali or a pH range
  readonly detail: string;
  readonly provenance: Provenance;
}

export interface IndicatorRecord {
  readonly id: ComponentId; // also the component id of the dye where it has constants
  readonly name: string;
  readonly synonyms: readonly string[];
  readonly class: IndicatorClass;
  readonly endPointModel: EndPointModel;
  readonly molarMassGPerMol: number | null;
  readonly usualMolPerL: number; // in the titrated solution
  readonly observerBandPM: number; // +/- in pM
  readonly observerBandProvenance: Provenance;
  /** How far past half change, in pM, the observer of this dye stops, where a record of its own says so; else the general rule holds. */
  readonly practisedShiftPM?: { readonly value: number; readonly provenance: Provenance };
  readonly colours: readonly {
    readonly pH: readonly [number, number];
    readonly free: string;
    readonly bound: string;
    readonly contrast: "good" | "poor" | "none";
    readonly provenance: Provenance;
  }[];
  /** Published pM at half change against pH, per metal. */
  readonly transitions: readonly {
    readonly ion: ComponentId;
    readonly counts: "free-ion" | "not-bound-to-titrant";
    /** 2 where the slope of the table against pH shows two metal ions a dye (xylenol orange: Zn and Pb by its constants too; Cd and La are our inference from the slope alone); else 1. */
    readonly metalsPerDye?: 2;
    readonly points: readonly (readonly [pH: number, pM: number])[];
    readonly provenance: Provenance;
  }[];
  readonly uses: readonly IndicatorUse[];
  readonly blockers: readonly IndicatorBlocker[];
  readonly instability: readonly { readonly fact: string; readonly provenance: Provenance }[];
  readonly needs: readonly { readonly fact: string; readonly provenance: Provenance }[];
  readonly redox: { readonly potentialV: number; readonly provenance: Provenance } | null;
  /** True where metal constants for the dye exist as reactions (component kind "dye"). */
  readonly hasConstants: boolean;
  readonly special: boolean; // not on the usual shelf
}

export interface BufferRecord {
  readonly id: string;
  readonly name: string;
  readonly component: ComponentId | null; // the ligand whose protonation buffers ("ammonia"); null for strong acids, alkalis and pairs without constants
  readonly counterIon: { readonly charge: number }; // of the salt that is weighed: the inert partner
  readonly kind: "pair" | "strong-acid" | "strong-base";
  readonly pKa: readonly {
    readonly value: number;
    readonly uncertainty: number;
    readonly acidCharge: number;
    readonly provenance: Provenance;
  }[];
  readonly workingPH: readonly [number, number];
  readonly usualMolPerL: readonly [number, number];
  readonly provenance: Provenance; // of working pH and amounts
  readonly precipitates: readonly string[];
  readonly incompatible: readonly { readonly with: string; readonly why: string; readonly provenance: Provenance }[];
  readonly special: boolean;
}

export type MaskingEffect = "masks" | "partial" | "doesNotMask" | "auxiliary" | "demasks";
export type MaskingVia = "complexation" | "precipitation" | "reduction" | "oxidation" | "kinetic";

/** Practice knowledge of one agent with one ion. */
export interface MaskingRecord {
  readonly agent: string;
  readonly ion: ComponentId;
  readonly effect: MaskingEffect;
  readonly via: MaskingVia | null;
  readonly pH: readonly [number, number];
  readonly usualMolPerL: number | null;
  readonly upToMolPerL: number | null; // ion total in the titrated solution up to which it is reported to hold
  readonly upToText: string | null;
  readonly failsWhen: string | null;
  readonly order: string | null;
  readonly sideEffects: string | null;
  readonly releasedBy: readonly string[];
  readonly provenance: Provenance; // the strongest of its sources
  readonly otherSources: readonly Provenance[];
}

/** A masking, demasking, auxiliary or reducing agent. */
export interface AgentRecord {
  readonly id: string;
  readonly name: string;
  readonly component: ComponentId | null; // the ligand it brings ("fluoride"), where the model has one
  readonly counterIonCharge: number; // charge of the inert partner per component (Na+ salts: 1 each)
  readonly usualMaxMolPerL: number;
  readonly usualMinMolPerL?: number | undefined; // lower end of the usual amounts, where they are known as a range
  readonly usualMolPerL: number;
  readonly pH: readonly [number, number]; // where it may be used at all (cyanide from 9.5)
  readonly special: boolean;
  /** Complete conversions by reduction or oxidation, with the product ion and the conditions. */
  readonly converts: readonly {
    readonly from: ComponentId;
    readonly to: ComponentId;
    readonly via: "reduction" | "oxidation";
    readonly pH: readonly [number, number];
    readonly conditions: string;
    /** True where the agent converts the ion by itself: a sample that is said to hold both holds the product. */
    readonly unaided?: true | undefined;
    readonly provenance: Provenance;
  }[];
  readonly provenance: Provenance;
}

/** An agent that takes metals from the chelate, so that what it sets free can be titrated: one published or remembered way. */
export interface ReleaseRecord {
  readonly id: string;
  readonly agent: string;
  /** Agents that go in with it (ascorbic acid with thiourea). */
  readonly beside: readonly string[];
  readonly titrants: readonly string[];
  /**
   * Which metals give up the chelate and which keep it. "constants": the equilibrium decides how far; "record": completely freed,
   * or completely left, as the source says, because the model lacks constants or the exchange is a matter of rate.
   */
  readonly ions: readonly {
    readonly ion: ComponentId;
    readonly freed: boolean;
    readonly judgedBy: "constants" | "record";
    readonly provenance?: Provenance; // where it is not that of the record
  }[];
  readonly pH: readonly [number, number];
  readonly buffers: readonly string[];
  readonly backTitrants: readonly ComponentId[];
  readonly indicators: readonly string[];
  /** Steps between the excess of titrant and the first end point, and between the agent and the second. */
  readonly before: readonly ("warm" | "heat" | "boil" | "cool" | "wait")[];
  readonly step: "fluoride-release" | "iodide-release" | "thiol-release" | null;
  readonly after: readonly ("warm" | "heat" | "boil" | "cool" | "wait")[];
  /** Ion total in the titrated solution up to which it is reported. */
  readonly upTo: { readonly molPerL: number; readonly text: string } | null;
  readonly detail: string;
  readonly provenance: Provenance;
  readonly otherSources: readonly Provenance[];
}

export type KineticClass = "fast" | "slow" | "inert";

/** What is known of the rate of one metal with one titrant (or with any), or of its release from one dye. */
export interface KineticRecord {
  readonly ion: ComponentId;
  readonly titrant: string | null; // null = any
  readonly indicator: string | null; // null = concerns the titrant reaction
  readonly statement: string;
  /** What follows for a method. */
  readonly consequences: readonly (
    | "heat"
    | "boil"
    | "warm"
    | "back-only"
    | "excess-and-wait"
    | "kinetic-masking"
    | "titrate-slowly"
    | "titrate-at-once"
    | "keep-cold"
    | "depolymerise"
    | "blocks-indicator"
    | "none"
  )[];
  readonly temperatureC: readonly [number, number] | null;
  readonly pH: readonly [number, number] | null;
  /** Rate constant of water exchange on the aqua ion at 25 C, 1/s, where the row states one: the upper limit for complex formation. */
  readonly waterExchangePerS?: number;
  readonly provenance: Provenance;
}

/** A reagent as bought: for preparation, molar mass, hazards. */
export interface ReagentRecord {
  readonly id: string; // reagent id of the contract where it has one
  readonly name: string;
  readonly formula: string;
  readonly molarMassGPerMol: number | null;
  readonly preparation: readonly string[];
  readonly hazards: readonly string[]; // sentences
  readonly hazardTags: readonly HazardTag[];
  readonly disposal: readonly string[];
  readonly provenance: Provenance;
}

export type HazardTag =
  | "cyanide"
  | "sulfide"
  | "fluoride"
  | "mercury"
  | "perchlorate"
  | "strong-acid"
  | "strong-alkali"
  | "lead"
  | "cadmium"
  | "thorium-uranium"
  | "carcinogen"
  | "stench"
  | "oxidiser"
  | "formaldehyde"
  | "corrosive"
  | "flammable"
  | "heat-sensitive" // decomposes when heated: hydroxylamine, ammonium nitrate, dithionite
  | "toxic";

/** The usual caution for a hazard, shown wherever a reagent with the tag is proposed under these conditions. */
export interface CautionRecord {
  readonly tag: HazardTag;
  readonly when: "always" | "in-acid" | "hot" | "hot-acid";
  readonly text: string;
  readonly provenance: Provenance;
}

export interface GlasswareRecord {
  readonly kind: "burette" | "pipette" | "flask";
  readonly nominalML: number;
  readonly toleranceML: number; // class A, maximum permissible error
  readonly standard: string; // "ISO 385"
  readonly provenance: Provenance;
}

export interface PrimaryStandardRecord {
  readonly id: string;
  readonly formula: string;
  readonly forIon: ComponentId;
  readonly molarMassGPerMol: number;
  readonly purityMassFraction: number;
  readonly purityExpandedUncertainty: number; // k = 2, mass fraction
  readonly treatment: string;
  readonly provenance: Provenance;
}

export interface TitrantRecord {
  readonly id: ComponentId; // EDTA, ... ; also its component id
  readonly name: string;
  readonly usualMolPerL: readonly number[]; // strengths a bench keeps
  readonly donors: number;
  readonly special: boolean;
}

/** A metal salt solution used to back titrate, to standardise or as the metal of a chelate. */
export interface MetalTitrantRecord {
  readonly ion: ComponentId;
  readonly usualMolPerL: readonly number[];
  readonly special: boolean;
  readonly provenance: Provenance;
}

/** An indicator electrode: what it shows, how steeply, how far down, and what spoils it. Slope at 25 C. */
export interface ElectrodeRecord {
  readonly id: string;
  readonly name: string; // in words
  readonly ion: ComponentId; // the ion whose activity sets the potential
  /** Metals that it follows by itself, without a chelate to lend it its ion. */
  readonly shows: readonly ComponentId[];
  /** The electrode whose membrane it shares, with that membrane's interfering ions and poisons. */
  readonly membraneOf: string | null;
  /** The chelate that is added so that it follows a metal it does not answer. */
  readonly chelate: "Cu-EDTA" | null;
  /** The reduced form of a redox couple, of which a trace is added; the potential then follows the ratio. */
  readonly couple: ComponentId | null;
  readonly slopeMVPerDecade: number;
  readonly slopeProvenance: Provenance;
  readonly detectionLimitMolPerL: number; // in a solution that nothing buffers
  readonly limitProvenance: Provenance;
  /** How far it follows the free ion where a ligand in excess buffers it, as after the end of a titration. */
  readonly bufferedLimit: { readonly molPerL: number; readonly provenance: Provenance } | null;
  /** Scatter of one reading in a titration. */
  readonly reading: { readonly mV: number; readonly provenance: Provenance };
  readonly pH: readonly [number, number];
  readonly interferingIons: readonly {
    readonly ion: ComponentId;
    readonly log10Selectivity: number | null; // null: must be absent
    readonly provenance: Provenance;
  }[];
  /** Titrations that practice does with it. */
  readonly uses: readonly {
    readonly mode: "direct" | "back";
    readonly ions: readonly ComponentId[];
    readonly text: string;
    readonly provenance: Provenance;
  }[];
  readonly poisons: readonly {
    readonly component: ComponentId;
    readonly effect: "absent" | "disturbs"; // it must be absent, or it shifts the reading
    readonly text: string;
    readonly provenance: Provenance;
  }[];
  /** Product [ion][Cl-]^2 above which chloride disturbs a sulfide membrane, (mol/L)^3. */
  readonly chloride: { readonly productMax: number; readonly provenance: Provenance } | null;
  readonly avoidBuffers: readonly { readonly buffer: string; readonly text: string; readonly provenance: Provenance }[];
  readonly provenance: Provenance;
}

/** At which wavelengths the colour of a dye, or of a coloured complex itself, is followed in a titration; nm. */
export interface PhotometricRecord {
  readonly id: string;
  readonly indicator: string | null; // null where the complex itself is coloured
  readonly complex: { readonly metal: ComponentId; readonly titrant: ComponentId } | null;
  readonly pH: readonly [number, number];
  readonly freeNm: readonly [number, number] | null;
  readonly bound: readonly { readonly ion: ComponentId; readonly nm: readonly [number, number] }[];
  readonly usedNm: readonly [number, number];
  readonly usedProvenance: Provenance;
  readonly provenance: Provenance;
}

/** Something about the data that a reader must know: a gap, a value that looks wrong beside its neighbours, a record passed over. */
export interface DataRemark {
  readonly kind: "gap" | "suspect" | "passed-over" | "disagreement" | "unusable";
  readonly about: string; // component, reaction or record ids
  readonly text: string;
}

/**
 * A way round: how an ion that the titrants do not bind, or bind too weakly, is determined through a metal that they bind well.
 * "surplus": a metal in known excess takes the analyte up, what is left of it is titrated. "precipitate": the precipitate is
 * collected and its metal titrated. "exchange": the analyte (or the silver of its silver salt) sets the metal free from a complex.
 * "conversion": the precipitate sets titrant free from another complex, which is titrated with a metal.
 */
export interface DetourRecord {
  readonly id: string;
  readonly analyte: ComponentId;
  readonly kind: "surplus" | "precipitate" | "exchange" | "conversion";
  readonly methodMode: "indirect" | "displacement";
  /** The metal that the titration counts (in a conversion: the metal of the burette). */
  readonly metal: ComponentId;
  /** How many of the analyte one of it stands for. */
  readonly analytePerMetal: number;
  /** What takes the analyte up, or gives the metal: a bottle, and what it brings to the solution per mole. */
  readonly reagent: DetourReagent;
  /** Amount of the reagent over what the analyte needs, usually taken. */
  readonly reagentOverNeed: number;
  /** A metal that precipitates the analyte before the exchange, and how many of the analyte one of it holds. */
  readonly precipitant: (DetourReagent & { readonly analytePerMetal: number; readonly overNeed: number }) | null;
  /** Further bottles, with what they are for. */
  readonly further: readonly { readonly id: string; readonly purpose: string; readonly molPerL: number }[];
  /** Where the precipitate forms; null where nothing precipitates. `with`: what else is in that solution, mol/L. */
  readonly precipitation: {
    readonly pH: number;
    readonly with: Readonly<Record<ComponentId, number>>;
    readonly words: string;
  } | null;
  /** Solids of the model that hold the analyte; empty where the model has none (then `basis` is "composition"). */
  readonly solids: readonly string[];
  readonly filtered: boolean;
  /** "equilibrium": loss and company are calculated; "composition": the precipitate is taken as complete and of this composition. */
  readonly rests: "equilibrium" | "composition";
  /** Standard uncertainty of that composition, relative; an assumption where no source gives one. 0 with "equilibrium". */
  readonly compositionUncertainty: number;
  /** How the metal is titrated in the end: at once, or with titrant in excess and a back titrant. */
  readonly finish: {
    readonly mode: "direct" | "back";
    readonly pH: readonly [number, number];
    readonly backTitrants: readonly ComponentId[];
    /** Dyes that the record of the way names. */
    readonly dyes: readonly ComponentId[];
  };
  /** Agents of the titration vessel that belong to the way (carbonate that holds uranium). */
  readonly auxiliary: readonly { readonly id: string; readonly purpose: string }[];
  readonly preparation: readonly string[];
  readonly note: string;
  readonly provenance: Provenance;
  readonly otherSources: readonly Provenance[];
}

export interface DetourReagent {
  readonly id: string;
  /** Other ids of the same bottle. */
  readonly alsoCalled: readonly string[];
  /** Ids that bar it when a laboratory avoids them (a cyanide complex where cyanide is avoided). */
  readonly barredWith: readonly string[];
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly special: boolean;
}

/** Hydrolysis and redox facts of a metal ion that equilibrium data do not hold. */
export interface IonFact {
  readonly ion: ComponentId;
  readonly fact: string;
  readonly kind: "oxidation-state" | "hydrolysis" | "hazard" | "not-by-this-technique";
  readonly provenance: Provenance;
}

/** A way of taking ions out of a solution before a titration. */
export interface SeparationRecord {
  readonly id: string;
  readonly removes: readonly ComponentId[];
  /** Ions that go the same way in whole or in part: the step does not part the first from these. */
  readonly takesAlong: readonly ComponentId[];
  readonly kind: "extraction" | "ion exchange" | "precipitation" | "electrolysis" | "volatilisation" | "destruction";
  readonly step: string;
  /** Reagents or products of the step whose cautions must be shown with it, by reagent id. */
  readonly hazards: readonly string[];
  readonly provenance: Provenance;
}

/** A published method of one ion. Found after the ranking, to stand beside a recommended method; it never steers it. */
export interface PrecedentRecord {
  readonly ion: ComponentId;
  readonly mode: "direct" | "back" | "displacement" | "indirect" | "successive" | "difference";
  readonly titrant: string;
  readonly backTitrant: ComponentId | null;
  readonly pH: readonly [number, number]; // at the end point
  readonly pHBasis: "read" | "memory"; // a read source may give the scheme while its pH is recalled
  readonly indicators: readonly string[];
  readonly buffers: readonly string[];
  readonly preparation: readonly string[];
  readonly auxiliary: readonly string[];
  readonly stoichiometry: string | null;
  readonly scope: string | null;
  readonly provenance: Provenance;
  readonly otherSources: readonly Provenance[];
}

/** Everything the program knows. Immutable after loading. */
export interface Knowledge {
  readonly version: string;
  readonly hash: string; // sha256 of the canonical content of all data files and rules read, first 16 hex digits shown
  readonly sources: ReadonlyMap<SourceId, SourceRecord>;
  readonly components: ReadonlyMap<ComponentId, ComponentRecord>;
  readonly reactions: ReadonlyMap<ReactionId, Reaction>;
  readonly species: readonly SpeciesDefinition[];
  readonly solids: readonly SolidDefinition[];
  readonly titrants: ReadonlyMap<string, TitrantRecord>;
  readonly metalTitrants: ReadonlyMap<ComponentId, MetalTitrantRecord>;
  readonly indicators: ReadonlyMap<string, IndicatorRecord>;
  readonly buffers: ReadonlyMap<string, BufferRecord>;
  readonly agents: ReadonlyMap<string, AgentRecord>;
  readonly masking: readonly MaskingRecord[];
  readonly kinetics: readonly KineticRecord[];
  readonly releases: readonly ReleaseRecord[];
  readonly electrodes: readonly ElectrodeRecord[];
  readonly photometric: readonly PhotometricRecord[];
  readonly reagents: ReadonlyMap<string, ReagentRecord>;
  readonly cautions: readonly CautionRecord[];
  readonly glassware: readonly GlasswareRecord[];
  readonly standards: readonly PrimaryStandardRecord[];
  readonly ionFacts: readonly IonFact[];
  readonly precedents: readonly PrecedentRecord[];
  readonly detours: ReadonlyMap<string, DetourRecord>;
  readonly separations: readonly SeparationRecord[];
  readonly remarks: readonly DataRemark[];
  /** Atomic weights, g/mol, by element symbol. */
  readonly atomicWeights: ReadonlyMap<string, number>;
}
