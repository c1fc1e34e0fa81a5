import type { ComponentId, Provenance } from "./equilibria-types.ts";

// Buffers, agents, and rates of metals, as types. Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.

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

/** Hydrolysis and redox facts of a metal ion that equilibrium data do not hold. */
export interface IonFact {
  readonly ion: ComponentId;
  readonly fact: string;
  readonly kind: "oxidation-state" | "hydrolysis" | "hazard" | "not-by-this-technique";
  readonly provenance: Provenance;
}
