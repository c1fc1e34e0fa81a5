import { daviesTerm, log10ActivityCoefficient } from "../chemistry/activity.ts";
import { DRAW_PRECISION } from "../chemistry/solve-eliminated-newton.ts";
import { eliminatedSolver, type EliminatedSolver } from "../chemistry/solve-eliminated.ts";
import { ABSENT_LN_FREE, solveEquilibrium } from "../chemistry/solve-equilibrium.ts";
import type { PreparedSystem } from "../chemistry/types.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { move, movableRows, type MovableRows } from "./movable-rows.ts";
import { contributionsOf, plannedAmounts, withFrozen, type Contribution, type VesselOf } from "./perturbed-amounts.ts";
import { indexOf, type Parameter } from "./robustness-parameters.ts";
import type { StageModel } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";
import { VesselSolution } from "./vessel-solver.ts";
import { SolvedVessel, type Vessel, type VesselState } from "./vessel-state.ts";

const LEAST_IONIC_STRENGTH_MOL_PER_L = 1e-4; // as in the model of a titration
const WORTH_MOVING = 1e-4; // relative change of the ionic strength below which constants stay
/** Shifts up to which what is far from happening as planned stays so: pH units, relative. */
const NEAR = 0.5;
/** log10 of the ion product over that of saturation below which no draw near the plan brings a solid down: ten times the usual uncertainty. */
const FAR_FROM_SATURATION = -3;

/**
 * The vessel of one titration, compiled once: a draw moves its constants, its acidity and its amounts, and the ionic strength with them,
 * without putting the system together again. Holds as long as no solid forms.
 */
export class PerturbedVessel {
  readonly model: StageModel;
  readonly #system: PreparedSystem;
  readonly #rows: MovableRows;
  readonly #solids: MovableRows;
  readonly #contributions: readonly Contribution[];
  /** Totals before anything from the burette with complexes that do not exchange any more put back, then the two sums over inert ions. */
  readonly #unfrozen: Float64Array;
  readonly #amounts: Float64Array;
  readonly #fast: EliminatedSolver | null;
  readonly #fixed: Float64Array;
  readonly #totals: Float64Array;
  readonly #lnBetaOfSolids: Float64Array;
  readonly #nominalStrength: number;
  readonly #temperatureC: number;
  readonly #buretteColumn: number;
  readonly #nearSaturation: readonly number[];
  readonly #everySolid: readonly number[];
  readonly #anchors: { readonly volumeL: number; readonly lnFree: Float64Array }[] = [];
  readonly #pHParameter: number | undefined;
  #vessel: Vessel;
  #last: { volumeL: number; lnFree: Float64Array } | null = null;
  #start: VesselState | null = null;
  #latest: VesselState | null = null;

  constructor(
    model: StageModel,
    own: { readonly task: Task; readonly plan: StagePlan; readonly stage: number; readonly of: VesselOf },
    parameters: readonly Parameter[],
    knowledge: Knowledge,
  ) {
    this.model = model;
    const { problem } = model.system;
    const index = indexOf(parameters);
    this.#system = { ...model.system, problem: { ...problem, lnBeta: problem.lnBeta.slice() } };
    this.#rows = movableRows(model.system.species, problem.lnBeta, own.task.temperatureC, index, knowledge);
    const { solids } = model.forming.problem;
    this.#solids = movableRows(model.forming.solids, solids.lnBeta, own.task.temperatureC, index, knowledge);
    this.#lnBetaOfSolids = solids.lnBeta.slice();
    this.#contributions = contributionsOf(model, own, parameters, knowledge);
    this.#amounts = plannedAmounts(model, own.of(own.task, own.plan).task, knowledge);
    this.#unfrozen = withFrozen(model, this.#amounts);
    this.#temperatureC = own.task.temperatureC;
    this.#pHParameter = index.get(`pH ${own.stage}`);
    this.#buretteColumn = model.system.index.get(model.burette.component)!;
    this.#totals = new Float64Array(problem.nComponents);
    this.#fixed = new Float64Array(problem.nComponents).fill(Number.NaN);
    this.#fixed[0] = this.#lnProton(model.plan.pH, model.ionicStrengthMolPerL);
    const metals = new Set(model.metals);
    const columns = model.system.components.flatMap((c, i) => (metals.has(c) ? [i] : []));
    this.#fast =
      columns.length > 0 ? eliminatedSolver(this.#system.problem, this.#fixed, columns, DRAW_PRECISION) : null;
    this.#vessel = { ...model.vessel, system: this.#system, base: this.#amounts.subarray(0, problem.nComponents) };
    this.#anchor(0);
    this.#nominalStrength = this.#strength(this.at(0));
    this.#everySolid = Array.from({ length: solids.n }, (_, i) => i);
    this.#nearSaturation = this.#everySolid.filter((i) => this.#saturation(i) > FAR_FROM_SATURATION * Math.LN10);
  }

  /** Keeps the answer at this volume of the vessel as planned as a start for draws. */
  anchor(volumeL: number): void {
    this.#anchor(volumeL);
  }

  #anchor(volumeL: number): void {
    const { lnFree } = this.at(volumeL).result;
    this.#anchors.push({ volumeL, lnFree: lnFree.slice() });
  }

  /**
   * Moves the vessel to a draw.
   * @param shifts per parameter: log10 units, pH, or relative
   * @param more further totals, mol/L by component: titrant carried over, complexes that are frozen (negative)
   * @param dyeBasis of the drawn pH
   * @returns false where a solid would form, or the constants leave the range of the solver: then this vessel does not hold
   */
  set(
    shifts: Float64Array,
    dyeBasis: Vessel["dyeBasis"],
    more: ReadonlyMap<ComponentId, number> | null = null,
  ): boolean {
    this.#put(shifts, more);
    this.#vessel = { ...this.#vessel, dyeBasis };
    const { ionicStrengthMolPerL } = this.model;
    if (!this.#load(shifts, ionicStrengthMolPerL)) return false;
    const strength = (ionicStrengthMolPerL * this.#strength(this.at(0))) / this.#nominalStrength;
    if (Math.abs(strength - ionicStrengthMolPerL) > WORTH_MOVING * ionicStrengthMolPerL)
      if (!this.#load(shifts, strength)) return false;
    const solids = this.isNear(shifts) ? this.#nearSaturation : this.#everySolid;
    return !solids.some((solid) => this.#saturation(solid) > 0);
  }

  /** Whether a draw is near enough to the plan that what is far from happening there is far from happening here. */
  isNear(shifts: Float64Array): boolean {
    if (this.#pHParameter !== undefined && Math.abs(shifts[this.#pHParameter]!) > NEAR) return false;
    return this.#contributions.every(({ parameter }) => Math.abs(shifts[parameter]!) <= NEAR);
  }

  #put(shifts: Float64Array, more: ReadonlyMap<ComponentId, number> | null): void {
    const amounts = this.#amounts;
    amounts.set(this.#unfrozen);
    for (const { parameter, amounts: each } of this.#contributions) {
      const by = shifts[parameter]!;
      if (by !== 0) for (let j = 0; j < amounts.length; j++) amounts[j] = amounts[j]! + by * each[j]!;
    }
    if (more === null) return;
    for (const [component, molPerL] of more) {
      const column = this.#system.index.get(component);
      if (column !== undefined) amounts[column] = Math.max(0, amounts[column]! + molPerL);
    }
  }

  /** The vessel after `volumeL` from the burette. */
  at(volumeL: number): VesselState {
    if (volumeL === 0 && this.#start !== null) return this.#start;
    if (this.#latest?.volumeFromBuretteL === volumeL) return this.#latest;
    const { base, volumeL: own, burette } = this.#vessel;
    const dilution = own / (own + volumeL);
    const totals = this.#totals;
    for (let j = 1; j < totals.length; j++) totals[j] = base[j]! * dilution;
    const b = this.#buretteColumn;
    totals[b] = totals[b]! + (burette.molPerL * volumeL) / (own + volumeL);
    const state = new SolvedVessel(this.#vessel, volumeL, this.#solve(volumeL, totals));
    if (volumeL === 0) this.#start = state;
    this.#latest = state;
    return state;
  }

  #solve(volumeL: number, totals: Float64Array): VesselSolution {
    const { problem } = this.#system;
    const near = this.#near(volumeL);
    if (this.#fast && near) {
      const lnFree = near.slice();
      for (let j = 1; j < lnFree.length; j++)
        if (lnFree[j]! <= ABSENT_LN_FREE && totals[j]! > 0) lnFree[j] = Math.log(totals[j]!) - MOSTLY_BOUND_LN;
      const { status, residual, iterations } = this.#fast.solve(totals, lnFree);
      if (status === "converged") {
        this.#last = { volumeL, lnFree };
        return new VesselSolution(problem, { ok: true, residual, iterations, lnFree, solidsMolPerL: NO_SOLIDS }, null);
      }
    }
    const result = solveEquilibrium(problem, totals, {
      fixedLnFree: this.#fixed,
      solids: "saturation-only",
      ...(near ? { start: near } : {}),
    });
    const ok = result.status === "converged";
    if (ok) this.#last = { volumeL, lnFree: result.lnFree };
    return new VesselSolution(problem, { ...result, ok, solidsMolPerL: NO_SOLIDS }, result.speciesMolPerL);
  }

  /** The known answer next in volume: of this draw, or of the vessel as planned. */
  #near(volumeL: number): Float64Array | null {
    let best = this.#last;
    for (const anchor of this.#anchors)
      if (best === null || Math.abs(anchor.volumeL - volumeL) < Math.abs(best.volumeL - volumeL)) best = anchor;
    return best?.lnFree ?? null;
  }

  #lnProton(pH: number, strength: number): number {
    return Math.LN10 * (-pH - log10ActivityCoefficient(1, strength, this.#temperatureC));
  }

  /** Puts constants and acidity at this ionic strength into the solver. */
  #load(shifts: Float64Array, ionicStrengthMolPerL: number): boolean {
    const strength = Math.max(ionicStrengthMolPerL, LEAST_IONIC_STRENGTH_MOL_PER_L);
    this.#last = null;
    this.#start = null;
    this.#latest = null;
    const pH = this.model.plan.pH + (this.#pHParameter === undefined ? 0 : shifts[this.#pHParameter]!);
    this.#fixed[0] = this.#lnProton(pH, strength);
    const term = daviesTerm(strength) - daviesTerm(this.model.ionicStrengthMolPerL);
    move(this.#rows, shifts, term, this.#system.problem.lnBeta);
    move(this.#solids, shifts, term, this.#lnBetaOfSolids);
    return this.#fast === null || this.#fast.refill(this.#fixed);
  }

  /** Half the sum of c z² of everything, made neutral; mol/L. */
  #strength(state: VesselState): number {
    const { charges, components } = this.#system;
    let sum = this.#amounts[components.length]!;
    let charge = this.#amounts[components.length + 1]!;
    for (let row = 0; row < charges.length; row++) {
      const z = charges[row]!;
      if (z === 0) continue;
      const c = state.result.species(row);
      charge += c * z;
      sum += c * z * z;
    }
    return (sum + Math.abs(charge)) / 2;
  }

  /** ln of the ion product over that of saturation before anything comes from the burette. */
  #saturation(solid: number): number {
    const { stoichiometry } = this.model.forming.problem.solids;
    const { lnFree } = this.at(0).result;
    let ln = this.#lnBetaOfSolids[solid]!;
    for (let j = 0; j < lnFree.length; j++) {
      const count = stoichiometry[solid * lnFree.length + j]!;
      if (count !== 0) ln += count * lnFree[j]!;
    }
    return ln;
  }
}

const NO_SOLIDS = new Float64Array(0);
/** Where a component that was not there before begins: nearly all of it bound, as of titrant. */
const MOSTLY_BOUND_LN = 20;
