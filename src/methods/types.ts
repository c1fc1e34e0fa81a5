/**
 * What a titration task and a titration method are. Amounts mol/L and L unless a name says otherwise.
 * recommendation/ reads a brief into a Task; methods/ turns a Task into evaluated methods.
 */
import type { ComponentId } from "../constants/knowledge.ts";

export type Detection = "visual" | "photometric" | "electrode";
export type MethodMode = "direct" | "back" | "displacement" | "indirect" | "successive" | "difference" | "portions";
export type StageMode = "direct" | "back" | "displacement";

export interface TaskComponent {
  readonly component: ComponentId;
  /** The spelling to show: the canonical spelling of the form the brief wrote (HCO3- stays HCO3-). */
  readonly shown: string;
  readonly molPerL: number; // total in the sample solution, as component
  /** Protons the written form brings along, per component (HCO3-: 1). */
  readonly protonsPerComponent: number;
}

export interface TaskAnalyte extends TaskComponent {
  readonly report: "individual" | "sum";
}

/** The normalised brief: one component one row, everything in mol/L. */
export interface Task {
  readonly title: string;
  readonly analytes: readonly TaskAnalyte[];
  readonly matrix: readonly TaskComponent[];
  readonly portion: { readonly volumeML: number; readonly titrationVolumeML: number };
  readonly requirementPercent: number; // relative expanded uncertainty, k = 2
  readonly laboratory: {
    readonly avoid: readonly string[];
    readonly available: readonly string[] | null;
    readonly detection: readonly Detection[];
    readonly heating: boolean;
    readonly buretteML: number;
  };
  readonly temperatureC: number;
  /** Things done to the brief that its writer should see: rows added together, and the like. */
  readonly notes: readonly string[];
}

export interface MaskingStep {
  readonly agent: string;
  readonly masks: readonly ComponentId[];
  readonly via: "complexation" | "precipitation" | "reduction" | "oxidation" | "kinetic";
  readonly molPerL: number;
  /** What the claim rests on: constants of the equilibrium, an empirical record, or stoichiometric conversion. */
  readonly basis: "equilibrium" | "empirical" | "conversion";
}

export interface AddedReagent {
  readonly id: string;
  readonly molPerL: number;
  readonly purpose: string;
}

/** One titration as it is to be carried out. */
export interface StagePlan {
  readonly determines: readonly ComponentId[];
  readonly mode: StageMode;
  readonly titrant: { readonly id: string; readonly molPerL: number };
  readonly backTitrant: { readonly id: ComponentId; readonly molPerL: number } | null;
  readonly pH: number;
  readonly buffer: { readonly id: string; readonly molPerL: number };
  readonly detection: Detection;
  readonly indicator: { readonly id: string; readonly molPerL: number } | null;
  readonly masking: readonly MaskingStep[];
  readonly auxiliary: readonly AddedReagent[];
  readonly added: readonly AddedReagent[];
  readonly preparation: readonly string[];
  /** Ions taken out before the titration by a separation step (named with preparation "separate" or "precipitate-and-filter"). */
  readonly removed: readonly ComponentId[];
  /** A metal-titrant complex added to make the dye respond (Mg-EDTA, Zn-EDTA, Cu-EDTA, Zn-EGTA). */
  readonly chelate: { readonly metal: ComponentId; readonly ligand: string; readonly molPerL: number } | null;
  /** Titrant put in at once, in excess, before the back titration; mol/L in the titrated solution; 0 in a direct titration. */
  readonly excessTitrantMolPerL: number;
  /** Titrant that an earlier titration of the same solution left in it, mol/L of the vessel, and the metals it went to. */
  readonly carried: {
    readonly metals: readonly ComponentId[];
    readonly titrantMolPerL: number;
    /** By how much the earlier titres have filled the vessel, mL. */
    readonly addedML: number;
  } | null;
  /** Electrode of the knowledge base where `detection` is "electrode". */
  readonly electrode: string | null;
  readonly detour: Detour | null;
  readonly release: Release | null;
  readonly demasked: Demasking | null;
}

/**
 * How an ion that the titrant does not bind, or binds too weakly, is determined through a metal that it binds well.
 * The record of the way stands in the knowledge base (`knowledge.detours`); this is what a plan takes from it.
 */
export interface Detour {
  /** Id of the record. */
  readonly id: string;
  /** The metal that the titration in the end counts. */
  readonly metal: ComponentId;
  /** How many of the analyte one metal ion stands for: 4 cyanide a nickel, 2 silver a nickel, 1 sulfate a barium. */
  readonly analytePerMetal: number;
  /** The reagent that goes in: a metal in known excess ("Ba2+"), or "tetracyanonickelate"; mol/L of the vessel. */
  readonly reagent: { readonly id: string; readonly molPerL: number };
  /** What precipitates the analyte before the exchange (silver for halides); mol/L of the vessel. */
  readonly precipitant: { readonly id: string; readonly molPerL: number } | null;
}

/** An agent that sets the titrant of the analyte free after the excess has been titrated back; that first reading is discarded. */
export interface Release {
  readonly agent: string;
  readonly molPerL: number;
}

/** A mask of an earlier titration of the same solution that is taken away again: cyanide by an aldehyde. */
export interface Demasking {
  readonly agent: string; // what was the mask
  readonly by: string; // what takes it away
  readonly frees: readonly ComponentId[];
}

/** The metals whose titre is the result: what is determined, or the metal through which it is. */
export const countedIn = (plan: Pick<StagePlan, "determines" | "detour">): readonly ComponentId[] =>
  plan.detour ? [plan.detour.metal] : plan.determines;

export interface MethodPlan {
  readonly mode: MethodMode;
  readonly stages: readonly StagePlan[];
}
