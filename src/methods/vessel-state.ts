import type { PreparedSystem } from "../chemistry/types.ts";
import type { ComponentId } from "../constants/knowledge.ts";
import type { DyeBasis } from "./dye-basis.ts";
import type { RowSum, Rows } from "./stage-rows.ts";
import type { VesselSolution } from "./vessel-solver.ts";

/** The vessel at one burette volume, amounts in mol per litre of the vessel as it then is. */
export interface VesselState {
  readonly volumeFromBuretteL: number;
  readonly dilution: number; // V0 / (V0 + V)
  readonly ok: boolean;
  readonly residual: number;
  readonly result: VesselSolution;
  boundToTitrant(metal: ComponentId): number;
  unbound(metal: ComponentId): number; // summed over species without titrant, so exact also when tiny
  onDye(metal: ComponentId): number; // held by the indicator
  readonly titrantUnbound: number; // not bound to any metal of the sample, the burette or the chelate
  readonly titrantTotal: number;
  free(component: ComponentId): number;
  total(component: ComponentId): number;
  /** Bound over free dye summed over the metals; NaN-free, 0 where nothing binds. */
  readonly dyeRatio: number;
  dyeRatioOf(metal: ComponentId): number;
}

/** What the states of one vessel share: everything that stays the same while the burette runs. */
export interface Vessel {
  readonly system: PreparedSystem;
  readonly rows: Rows;
  readonly volumeL: number;
  /** Totals before anything comes from the burette, mol/L per column of the system. */
  readonly base: Float64Array;
  readonly titrant: ComponentId;
  readonly burette: { readonly component: ComponentId; readonly molPerL: number };
  readonly metals: readonly ComponentId[];
  readonly dyeBasis: DyeBasis;
}

/** A search meets millions of states: their questions are answered by methods of a class, which cost nothing until asked. */
export class SolvedVessel implements VesselState {
  readonly volumeFromBuretteL: number;
  readonly dilution: number;
  readonly result: VesselSolution;
  readonly #vessel: Vessel;

  constructor(vessel: Vessel, volumeFromBuretteL: number, result: VesselSolution) {
    this.#vessel = vessel;
    this.volumeFromBuretteL = volumeFromBuretteL;
    this.dilution = vessel.volumeL / (vessel.volumeL + volumeFromBuretteL);
    this.result = result;
  }

  get ok(): boolean {
    return this.result.ok;
  }

  get residual(): number {
    return this.result.residual;
  }

  boundToTitrant(metal: ComponentId): number {
    return this.#sum(this.#vessel.rows.titrantByMetal.get(metal));
  }

  unbound(metal: ComponentId): number {
    return this.#sum(this.#vessel.rows.unboundByMetal.get(metal));
  }

  onDye(metal: ComponentId): number {
    return this.#sum(this.#vessel.rows.metalOnDye.get(metal));
  }

  get titrantUnbound(): number {
    return this.#sum(this.#vessel.rows.titrantFree);
  }

  get titrantTotal(): number {
    return this.total(this.#vessel.titrant);
  }

  free(component: ComponentId): number {
    const column = this.#vessel.system.index.get(component);
    return column === undefined ? 0 : Math.exp(this.result.lnFree[column]!);
  }

  total(component: ComponentId): number {
    const { system, base, burette, volumeL } = this.#vessel;
    const column = system.index.get(component);
    if (column === undefined) return 0;
    const volume = this.volumeFromBuretteL;
    const fromBurette = component === burette.component ? (burette.molPerL * volume) / (volumeL + volume) : 0;
    return base[column]! * this.dilution + fromBurette;
  }

  dyeRatioOf(metal: ComponentId): number {
    return this.#dyeRatioOf(metal, Number.NaN);
  }

  get dyeRatio(): number {
    const { metals, rows } = this.#vessel;
    const freeDye = this.#sum(rows.dyeFree);
    let ratio = 0;
    for (const metal of metals) ratio += this.#dyeRatioOf(metal, freeDye);
    return ratio;
  }

  /** @param freeDye dye on no metal, mol/L; NaN where it has not been summed yet */
  #dyeRatioOf(metal: ComponentId, freeDye: number): number {
    const { dyeBasis, rows } = this.#vessel;
    const half = dyeBasis.byTable.get(metal);
    if (half !== undefined) {
      // A table that counts all that the titrant leaves knows nothing of masks: what an agent holds the dye does not see.
      const concentration = half.counts === "free-ion" ? this.free(metal) : this.#sum(rows.unheldByMetal.get(metal));
      return (concentration * 10 ** half.pM) ** half.metalsPerDye;
    }
    const bound = rows.dyeByMetal.get(metal);
    if (bound === undefined) return 0;
    return this.#sum(bound) / (Number.isNaN(freeDye) ? this.#sum(rows.dyeFree) : freeDye);
  }

  #sum(list: RowSum | undefined): number {
    if (list === undefined) return 0;
    const { rows, counts } = list;
    let total = 0;
    for (let i = 0; i < rows.length; i++) total += counts[i]! * this.result.species(rows[i]!);
    return total;
  }
}
