import type { ComponentId, Provenance } from "./equilibria-types.ts";

// What stands on the shelf, as types: reagents and their hazards, glassware, standards, titrants. Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.

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
