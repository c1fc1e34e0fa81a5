// Components, reactions and species of the equilibrium model, and where a value comes from, as types. Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.

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

/** Something about the data that a reader must know: a gap, a value that looks wrong beside its neighbours, a record passed over. */
export interface DataRemark {
  readonly kind: "gap" | "suspect" | "passed-over" | "disagreement" | "unusable";
  readonly about: string; // component, reaction or record ids
  readonly text: string;
}
