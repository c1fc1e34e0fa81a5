import type { ComponentId, ConstantRecord, ReactionId, SpeciesId } from "../constants/knowledge.ts";

export type SolveStatus = "converged" | "maxIterations" | "nonFinite" | "outOfModelRange";

/**
 * The dense mass-balance problem the general solver takes: no chemistry, only integers and logs.
 * Row i of `stoichiometry` (length nComponents, integers, may be negative) belongs to species i; every species
 * is listed, the free components too (unit rows, lnBeta 0). Concentration scale mol/L, natural logs.
 */
export interface MassBalanceProblem {
  readonly nComponents: number;
  readonly nSpecies: number;
  readonly stoichiometry: Int8Array; // nSpecies x nComponents, row-major
  readonly lnBeta: Float64Array; // nSpecies
  readonly solids: { readonly stoichiometry: Int8Array; readonly lnBeta: Float64Array; readonly n: number }; // n x nComponents; lnBeta of formation
}

/** What a solve returns: always its evidence. */
export interface SolveResult {
  readonly status: "converged" | "maxIterations" | "nonFinite";
  readonly residual: number; // worst relative mass-balance residual (1 = as large as the total)
  readonly iterations: number;
  readonly worstComponent: number; // index, -1 when there is none
  readonly lnFree: Float64Array; // nComponents, ln of free concentration (mol/L)
  readonly speciesMolPerL: Float64Array; // nSpecies
  readonly solidsMolPerL: Float64Array; // solids.n, >= 0
  readonly saturationIndex: Float64Array; // solids.n, log10(IAP/Ksp); 0 where present
}

/** What a species or solid of a system is made of. */
export interface SpeciesRow {
  readonly id: SpeciesId;
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly charge: number;
}

/** One species of a prepared system, with the evidence for its constant. */
export interface PreparedSpecies {
  readonly id: SpeciesId;
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly charge: number;
  readonly log10Beta: number; // concentration constant at the system's ionic strength and temperature
  readonly uncertainty: number; // standard uncertainty of log10Beta
  readonly evidence: readonly ConstantUse[];
}

/** How one reaction's value was obtained for these conditions. */
export interface ConstantUse {
  readonly reaction: ReactionId;
  readonly factor: number;
  readonly record: ConstantRecord; // the record started from
  readonly passedOver: number; // how many other records of the reaction were not used
  readonly log10KUsed: number; // after the move to the working ionic strength and temperature
  readonly ionicStrengthShift: number;
  readonly temperatureShift: number;
  readonly uncertainty: number;
}

/** Conditions under which constants are taken. */
export interface Conditions {
  readonly ionicStrengthMolPerL: number;
  readonly temperatureC: number;
}

/** A set of components ready to solve at one ionic strength and temperature. H+ is always component 0. */
export interface PreparedSystem {
  readonly conditions: Conditions;
  readonly outOfModelRange: boolean; // ionic strength beyond the Davies range (solved at its edge)
  readonly components: readonly ComponentId[]; // order of the problem's columns; components[0] === "H+"
  readonly index: ReadonlyMap<ComponentId, number>;
  readonly species: readonly PreparedSpecies[]; // order of the problem's rows
  /** What the species are made of, without their constants: shared by every system of the composition, and so free to look at. */
  readonly rows: readonly SpeciesRow[];
  readonly solidRows: readonly SpeciesRow[];
  readonly solids: readonly PreparedSpecies[];
  readonly charges: Float64Array; // per species
  readonly problem: MassBalanceProblem;
  readonly log10GammaH: number; // log10 activity coefficient of a singly charged ion: log10[H+] = -pH - log10GammaH
  readonly log10Kw: number; // concentration product at these conditions
}
