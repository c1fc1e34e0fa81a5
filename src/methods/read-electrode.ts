import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { electrodeOf, poisonsIn, type Electrode } from "./electrode-potential.ts";
import { nearCrossing } from "./end-point-search.ts";
import { steepestOf } from "./inflection.ts";
import type { StageModel, VesselState } from "./stage-model.ts";

/** What an electrode shows of a titration. */
export interface ElectrodeReading {
  readonly id: string;
  readonly name: string;
  readonly slopeMVPerDecade: number;
  readonly readingMV: number;
  readonly pHMargin: number; // distance of the pH to the nearer end of the electrode's range; negative outside
  /** Change of potential from 99 to 101 % of the volume at the end point, mV. */
  readonly jumpMV: number;
  readonly steepestMVPerML: number; // 0 where there is no inflection
  /** The ion in the half-titrated solution, not bound to the titrant, over what the electrode still shows; null where a chelate lends it. */
  readonly detectionLimitRatio: number | null;
  readonly limitMolPerL: number;
  /** What the other ions bring to the potential over what the ion itself brings there. */
  readonly interferenceRatio: number;
  readonly interferingIon: ComponentId | null;
  readonly poisonedBy: readonly ComponentId[];
  readonly disturbedBy: readonly ComponentId[];
  /** Free ion times chloride squared over what the membrane bears; 0 where nothing is on record. */
  readonly chlorideRatio: number;
}

export type ElectrodeFault = "no-inflection" | "jump-small" | "below-limit" | "interferent";

export interface ReadByElectrode {
  readonly reading: ElectrodeReading;
  readonly why: ElectrodeFault | null;
  readonly volumeL: number;
  readonly bandL: readonly [number, number];
  readonly bandPM: number;
}

const ML = 1000;
/** A jump must stand this many times above the scatter of one reading to be found at all (limit of detection: three times the noise). */
export const JUMP_OVER_SCATTER = 3;

/**
 * Reads a titration with the electrode of the plan: the end is where the computed potential is steepest; the band is what the
 * scatter of one reading (mV) makes of it in volume.
 * @param equivalenceL where the end is expected, L
 */
export function readWithElectrode(
  model: StageModel,
  back: boolean,
  equivalenceL: number,
  knowledge: Knowledge,
): ReadByElectrode {
  const electrode = electrodeOf(model, knowledge);
  const { record } = electrode;
  const potential = (volumeL: number): number => {
    const state = model.at(volumeL);
    return state.ok ? electrode.potentialMV(state) : Number.NaN;
  };
  const steepest = steepestOf(potential, equivalenceL);
  const at = steepest.volumeL;
  const jumpMV = steepest.atEdge ? 0 : Math.abs(potential(1.01 * at) - potential(0.99 * at)) || 0;
  const withMetal = model.at(back ? 1.2 * at : 0.5 * at); // where the ion is there, before the end or after it
  const reading: ElectrodeReading = {
    id: record.id,
    name: record.name,
    slopeMVPerDecade: record.slopeMVPerDecade,
    readingMV: record.reading.mV,
    pHMargin: Math.min(model.plan.pH - record.pH[0], record.pH[1] - model.plan.pH),
    jumpMV,
    steepestMVPerML: steepest.atEdge ? 0 : Math.abs(steepest.slopePerL) / ML,
    detectionLimitRatio: limitRatio(electrode, withMetal),
    limitMolPerL: record.detectionLimitMolPerL,
    ...disturbance(electrode, withMetal, model.plan.determines),
    poisonedBy: poisonsIn(electrode, model, model.at(0), "absent").filter((c) => !record.shows.includes(c)),
    disturbedBy: poisonsIn(electrode, model, model.at(0), "disturbs"),
    chlorideRatio: chlorideRatio(electrode, withMetal),
  };
  const bandPM = record.reading.mV / Math.abs(record.slopeMVPerDecade);
  const why = faultOf(reading, steepest.atEdge);
  if (why !== null) return { reading, why, volumeL: 0, bandL: [0, 0], bandPM };
  const end = potential(at);
  const rises = steepest.slopePerL > 0 ? 1 : -1;
  const half = record.reading.mV / Math.abs(steepest.slopePerL);
  const shifted = (byMV: number): number =>
    nearCrossing((v) => rises * (potential(v) - end) - byMV, at, byMV < 0 ? -1 : 1, equivalenceL) ??
    at + Math.sign(byMV) * half;
  return { reading, why, volumeL: at, bandL: [shifted(-record.reading.mV), shifted(record.reading.mV)], bandPM };
}

function faultOf(reading: ElectrodeReading, atEdge: boolean): ElectrodeFault | null {
  if (reading.detectionLimitRatio !== null && reading.detectionLimitRatio < 1) return "below-limit";
  if (reading.interferenceRatio > 1) return "interferent";
  if (atEdge) return "no-inflection";
  return reading.jumpMV < JUMP_OVER_SCATTER * reading.readingMV ? "jump-small" : null;
}

/** Where ligands buffer the ion the electrode follows it further down: what counts is what the titrant has left unbound. */
function limitRatio({ record }: Electrode, state: VesselState): number | null {
  if (record.chelate !== null) return null;
  const shown = new Set([record.ion, ...record.shows]);
  const unbound = [...shown].reduce((sum, ion) => sum + state.unbound(ion), 0);
  return unbound / record.detectionLimitMolPerL;
}

function disturbance(
  electrode: Electrode,
  state: VesselState,
  determines: readonly ComponentId[],
): Pick<ElectrodeReading, "interferenceRatio" | "interferingIon"> {
  // What is determined itself moves the potential at its own end point, by whichever way it reaches the membrane.
  const terms = [...electrode.interference(state)].filter(
    ([ion]) => !electrode.record.shows.includes(ion) && !determines.includes(ion),
  );
  const sum = terms.reduce((s, [, term]) => s + term, 0);
  const own = electrode.record.shows
    .filter((ion) => ion !== electrode.record.ion)
    .reduce((s, ion) => s + (electrode.interference(state).get(ion) ?? 0), electrode.primary(state));
  const worst = [...terms].sort((a, b) => b[1] - a[1])[0];
  if (sum <= 0 || worst === undefined) return { interferenceRatio: 0, interferingIon: null };
  return { interferenceRatio: sum / Math.max(own, 1e-300), interferingIon: worst[0] };
}

function chlorideRatio(electrode: Electrode, state: VesselState): number {
  const limit = electrode.membrane.chloride;
  if (limit === null) return 0;
  return (electrode.primary(state) * state.free("chloride") ** 2) / limit.productMax;
}
