import type { ComponentId, ElectrodeRecord, Knowledge } from "../constants/knowledge.ts";
import type { StageModel, VesselState } from "./stage-model.ts";

/** Potential of an electrode in the vessel, mV, against an unknown constant: only differences mean something. */
export interface Electrode {
  readonly record: ElectrodeRecord;
  readonly potentialMV: (state: VesselState) => number;
  /** What the ion itself and each interfering ion bring to the argument of the logarithm, mol/L. */
  readonly primary: (state: VesselState) => number;
  readonly interference: (state: VesselState) => ReadonlyMap<ComponentId, number>;
  readonly membrane: ElectrodeRecord;
}

const BASIS_ORDER = ["read", "computed", "memory"] as const;

/** One coefficient an ion: a read one before a computed one before a recalled one. */
function coefficients(record: ElectrodeRecord): ReadonlyMap<ComponentId, number> {
  const out = new Map<ComponentId, number>();
  for (const basis of BASIS_ORDER)
    for (const row of record.interferingIons)
      if (row.provenance.basis === basis && row.log10Selectivity !== null && !out.has(row.ion))
        out.set(row.ion, row.log10Selectivity);
  return out;
}

/**
 * E = S log10(a + sum K a_j^(z/z_j) + limit): Nernst with selectivity (Nikolsky and Eisenman) and detection limit; for a redox
 * couple E = S log10(a_ox / a_red). Concentrations of the free ions stand for activities: in one vessel their ratio hardly moves.
 * The limit is that of a buffered solution where the record has one: past the end the titrant buffers the ion.
 * Throws where the electrode is not on record.
 */
export function electrodeOf(model: StageModel, knowledge: Knowledge): Electrode {
  const record = knowledge.electrodes.find((e) => e.id === model.plan.electrode);
  if (!record) throw new Error(`no electrode "${model.plan.electrode}" on record`);
  const membrane = knowledge.electrodes.find((e) => e.id === record.membraneOf) ?? record;
  const charge = (ion: ComponentId): number => knowledge.components.get(ion)?.charge ?? 1;
  const selectivity = [...coefficients(membrane)].filter(([ion]) => model.metals.includes(ion) && ion !== record.ion);
  const limit = record.bufferedLimit?.molPerL ?? record.detectionLimitMolPerL;
  const primary = (state: VesselState): number => state.free(record.ion);
  const interference = (state: VesselState): ReadonlyMap<ComponentId, number> =>
    new Map(
      selectivity.map(([ion, log10K]) => [
        ion,
        10 ** log10K * Math.max(state.free(ion), 0) ** (charge(record.ion) / charge(ion)),
      ]),
    );
  const argument = (state: VesselState): number => {
    if (record.couple !== null)
      return Math.max(primary(state), Number.MIN_VALUE) / Math.max(state.free(record.couple), Number.MIN_VALUE);
    let sum = primary(state) + limit;
    for (const term of interference(state).values()) sum += term;
    return sum;
  };
  return {
    record,
    membrane,
    primary,
    interference,
    potentialMV: (state) => record.slopeMVPerDecade * Math.log10(argument(state)),
  };
}

/** Below this a ligand of the solution is a trace that no membrane notices, mol/L; a metal is judged by its free ion. */
const TRACE_LIGAND_MOL_PER_L = 1e-6;
const TRACE_METAL_MOL_PER_L = 1e-9;

/** Components of the vessel that spoil the membrane (`absent`) or shift its potential (`disturbs`). */
export function poisonsIn(
  electrode: Electrode,
  model: StageModel,
  start: VesselState,
  effect: "absent" | "disturbs",
): ComponentId[] {
  const poisons = [...electrode.record.poisons, ...electrode.membrane.poisons].filter((p) => p.effect === effect);
  return [...new Set(poisons.map((p) => p.component))].filter((c) =>
    model.metals.includes(c)
      ? start.free(c) > TRACE_METAL_MOL_PER_L
      : (model.solution.totals.get(c) ?? 0) > TRACE_LIGAND_MOL_PER_L,
  );
}
