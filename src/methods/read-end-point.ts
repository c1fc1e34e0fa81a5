import { BLOCKED_BOUND_FRACTION } from "../chemistry/end-point.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { criterionOf, showsColour, type Criterion, type EndPointBasis } from "./criterion.ts";
import { firstCrossing, foretoldCrossing, foretoldEdge, nearCrossing, type Outlook } from "./end-point-search.ts";
import { readWithElectrode, type ElectrodeFault, type ElectrodeReading } from "./read-electrode.ts";
import { readWithPhotometer, type PhotometricFault, type PhotometricReading } from "./read-photometer.ts";
import type { StageModel } from "./stage-model.ts";
import { countedIn } from "./types.ts";

/** Why a titration shows no end point. */
export type EndPointFault = "no-colour" | "no-end-point" | "dye-held" | ElectrodeFault | PhotometricFault;

/** Where a titration ends as it is read: by eye, with a photometer or with an electrode. */
export interface EndPointRead {
  readonly why: EndPointFault | null;
  readonly basis: EndPointBasis;
  readonly volumeL: number;
  readonly bandL: readonly [number, number];
  readonly bandPM: number;
  readonly electrode: ElectrodeReading | null;
  readonly photometric: PhotometricReading | null;
}

/** What is wanted of an end point seen by eye. */
export interface EyeOptions {
  /** Whether the observer's band is wanted (default true). */
  readonly band?: boolean;
}

/**
 * Finds the end of a titration by the detection of its plan.
 * @param equivalenceL where the end is expected, L, > 0
 */
export function readEndPoint(
  model: StageModel,
  determined: ReadonlySet<ComponentId>,
  equivalenceL: number,
  knowledge: Knowledge,
  options: EyeOptions = {},
): EndPointRead {
  const { plan } = model;
  const back = plan.backTitrant !== null;
  if (plan.detection === "electrode" && plan.electrode !== null) {
    const { reading, ...rest } = readWithElectrode(model, back, equivalenceL, knowledge);
    return { ...rest, basis: "electrode", electrode: reading, photometric: null };
  }
  const criterion = criterionOf(model, determined, back);
  if (plan.detection === "photometric") {
    const followed = plan.backTitrant?.id ?? countedIn(plan)[0] ?? "";
    const { reading, ...rest } = readWithPhotometer(model, criterion, back, equivalenceL, followed, knowledge);
    const basis = plan.indicator === null ? "constants" : criterion.basis;
    return { ...rest, basis, electrode: null, photometric: reading };
  }
  return readByEye(model, criterion, back, equivalenceL, options);
}

function readByEye(
  model: StageModel,
  criterion: Criterion,
  back: boolean,
  equivalenceL: number,
  { band = true }: EyeOptions,
): EndPointRead {
  const base = { basis: criterion.basis, bandPM: criterion.bandPM, electrode: null, photometric: null };
  const failed = (why: EndPointFault): EndPointRead => ({ ...base, why, volumeL: 0, bandL: [0, 0] });
  if (criterion.basis !== "empirical") {
    const early = model.at(back ? 0 : 0.5 * equivalenceL);
    if (!back && !showsColour(model, criterion.ratio(early))) return failed("no-colour");
    if (back && criterion.ratio(early) / (1 + criterion.ratio(early)) > BLOCKED_BOUND_FRACTION)
      return failed("dye-held");
  }
  const outlook =
    (by: number) =>
    (volumeL: number): Outlook => {
      const state = model.at(volumeL);
      return { criterion: criterion.of(state) + by, remainingL: criterion.remainingL(state, by) };
    };
  const search =
    foretoldCrossing(outlook(0), (back ? BEFORE_END_BACK : BEFORE_END) * equivalenceL, equivalenceL) ??
    firstCrossing((v) => criterion.of(model.at(v)), equivalenceL);
  if (!search.found) return failed("no-end-point");
  const shifted = (by: number): number =>
    foretoldEdge(outlook(by), search.volumeL, equivalenceL) ??
    nearCrossing((v) => criterion.of(model.at(v)) + by, search.volumeL, by > 0 ? -1 : 1, equivalenceL) ??
    search.volumeL;
  return {
    ...base,
    why: null,
    volumeL: search.volumeL,
    bandL: band ? [shifted(criterion.bandLog10), shifted(-criterion.bandLog10)] : [search.volumeL, search.volumeL],
  };
}

/** Where the search for the end begins, in parts of the expected volume: metal and chelate both there, or nearly all of the excess gone. */
const BEFORE_END = 0.5;
const BEFORE_END_BACK = 0.9;
