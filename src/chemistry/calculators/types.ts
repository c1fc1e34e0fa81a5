import type { ComponentId } from "../../constants/knowledge.ts";
import type { SolveStatus } from "../types.ts";

/** One species of a set of constants given with the question: composition over any component names ("H+" for protons) and log10 beta. */
export interface GivenConstant {
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly log10Beta: number;
}

/** How acid the solution is: pH is an activity, log10H a concentration (mol/L); exactly one of the two is given. */
export interface AcidityRequest {
  readonly pH?: number | undefined;
  readonly log10H?: number | undefined;
}

/** A question to the equilibrium calculator, already validated; amounts mol/L, all finite and 0 or more. */
export interface EquilibriumRequest extends AcidityRequest {
  readonly titrant?: ComponentId | undefined; // default: the complexone present
  readonly temperatureC?: number | undefined; // default 25
  readonly ionicStrengthMolPerL?: "auto" | number | undefined; // default "auto"
  readonly totals: Readonly<Record<ComponentId, number>>;
  readonly free?: Readonly<Record<ComponentId, number>> | undefined; // held at this free concentration
  readonly solids?: boolean | undefined; // default true: let them form
  readonly constants?: readonly GivenConstant[] | undefined;
  /** How the answer shall write a component: its id to the spelling the question used. Default: the id. */
  readonly names?: Readonly<Record<ComponentId, string>> | undefined;
}

export interface EquilibriumSpecies {
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly molPerL: number;
  readonly log10Beta: number;
  readonly source: string;
}

export interface EquilibriumComponent {
  readonly id: ComponentId;
  readonly totalMolPerL: number; // with what is in solids
  readonly freeMolPerL: number;
  readonly dissolvedMolPerL: number;
  readonly sideReaction: { readonly log10Alpha: number }; // total over free
}

export interface EquilibriumConditional {
  readonly metal: ComponentId;
  readonly ligand: ComponentId;
  readonly log10AlphaMetal: number;
  readonly log10AlphaLigand: number;
  readonly log10ConditionalK: number;
}

export interface EquilibriumSolid {
  readonly id: string;
  readonly saturationIndex: number;
  readonly molPerL: number;
  readonly mayForm: boolean; // false: only its saturation is reported (too slow, or solids were switched off)
}

/** The answer of the equilibrium calculator. */
export interface EquilibriumAnswer {
  readonly status: SolveStatus;
  readonly residual: number;
  readonly iterations: number;
  readonly ionicStrengthMolPerL: number;
  readonly log10H: number;
  readonly species: readonly EquilibriumSpecies[];
  readonly components: readonly EquilibriumComponent[];
  readonly conditional: readonly EquilibriumConditional[];
  readonly solids: readonly EquilibriumSolid[];
  readonly notes: readonly string[];
}

/** A question to the curve calculator, already validated. Volumes mL, amounts mol/L. */
export interface CurveRequest extends AcidityRequest {
  readonly sample: { readonly volumeML: number; readonly totals: Readonly<Record<ComponentId, number>> };
  readonly titrant: { readonly id: ComponentId; readonly molPerL: number };
  readonly free?: Readonly<Record<ComponentId, number>> | undefined;
  readonly follow: ComponentId;
  readonly volumesML: readonly number[];
  readonly constants?: readonly GivenConstant[] | undefined;
  readonly temperatureC?: number | undefined; // default 25
  readonly ionicStrengthMolPerL?: "auto" | number | undefined; // default "auto", at every point
  readonly solids?: boolean | undefined; // default true: those that form at once
}

export interface CurveAnswerPoint {
  readonly volumeML: number;
  readonly pM: number; // minus log10 of the free ion's concentration
  readonly pMTotal: number; // of all that is not bound to the titrant
  readonly fractionTitrated: number; // share of what is titrated that is bound to the titrant, 0 to 1
}

/** The answer of the curve calculator. */
export interface CurveAnswer {
  readonly status: SolveStatus; // the worst of the points
  readonly residual: number; // the worst of the points
  readonly ionicStrengthMolPerL: number; // at the first point
  readonly equivalenceML: number;
  readonly points: readonly CurveAnswerPoint[];
  readonly atEquivalence: { readonly pM: number };
  readonly notes: readonly string[];
}
