import type { ComponentId, Provenance } from "./equilibria-types.ts";

// Ways of determining an ion and of parting it from others, as types: releases, ways round, separations, published methods. Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.

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
