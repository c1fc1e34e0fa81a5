import type { ComponentId, Provenance } from "./equilibria-types.ts";

// What shows an end point, as types: dyes, electrodes, wavelengths. Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.

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
