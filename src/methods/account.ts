import type { ComponentId } from "../constants/knowledge.ts";
import { vesselSample } from "./solution.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import type { Task } from "./types.ts";

/** One line of the titre's account: what part of the result, relative to the amount present, comes from where. */
export interface LedgerLine {
  readonly source: string;
  readonly fraction: number;
}

/** What a titre comes to; fractions relative to the amount determined. */
export interface StageAccount {
  readonly foundMol: number;
  readonly biasFraction: number; // after what cancels by standardising alike
  readonly uncancelledBiasFraction: number;
  readonly ledger: readonly LedgerLine[];
  /** Share of each metal of the sample that is counted in the result. */
  readonly titrated: ReadonlyMap<ComponentId, number>;
  /** Part of the bias that each metal of the sample makes. */
  readonly biasOf: ReadonlyMap<ComponentId, number>;
  readonly backTitrantStealsFraction: number;
}

/** The account of a titration that gave nothing. */
export const NO_ACCOUNT: StageAccount = {
  foundMol: 0,
  biasFraction: 0,
  uncancelledBiasFraction: 0,
  ledger: [],
  titrated: new Map(),
  biasOf: new Map(),
  backTitrantStealsFraction: 0,
};

/** Below this part of the result a cause is not worth a line. */
const LEAST_LINE = 1e-7;

/** Closes an account: what was found against what is present, and the lines that say something. */
export const closed = (
  presentMol: number,
  account: Omit<StageAccount, "biasFraction" | "uncancelledBiasFraction">,
): StageAccount => ({
  ...account,
  biasFraction: (account.foundMol - presentMol) / presentMol,
  uncancelledBiasFraction: (account.foundMol - presentMol) / presentMol,
  ledger: account.ledger.filter((line) => Math.abs(line.fraction) > LEAST_LINE),
});

/** Where the titre went: an exact balance of the titrant at the end point, line by line. */
export function accountOf(
  task: Task,
  model: StageModel,
  end: VesselState,
  volumeL: number,
  presentMol: number,
  determined: ReadonlySet<ComponentId>,
): StageAccount {
  const { plan } = model;
  const vessel = model.volumeL + volumeL;
  const frozen = new Map(
    model.held.filter((h) => h.why === "kinetically-inert").map((h) => [h.component, h.molPerL * model.volumeL]),
  );
  const boundMol = (metal: ComponentId): number => end.boundToTitrant(metal) * vessel + (frozen.get(metal) ?? 0);
  const back = plan.backTitrant;
  const foundMol = back
    ? plan.excessTitrantMolPerL * model.volumeL - back.molPerL * volumeL
    : plan.titrant.molPerL * volumeL;
  const titrated = new Map<ComponentId, number>();
  const biasOf = new Map<ComponentId, number>();
  const ledger: LedgerLine[] = [];
  // What an earlier titration brought is not counted again: it went to its own metals.
  const carriedMol = (plan.carried?.titrantMolPerL ?? 0) * model.volumeL;
  const carriedFor = plan.carried?.metals ?? [];
  let endPoint = end.titrantUnbound * vessel;
  if (carriedFor.length === 0) endPoint -= carriedMol;
  let analyteMissing = 0;
  const inSample = new Map(
    vesselSample(task, plan)
      .filter((c) => !plan.removed.includes(c.component))
      .map((c) => [c.component, c.inVesselMolPerL * model.volumeL]),
  );
  for (const { from, to } of model.solution.converted)
    if (to !== null) inSample.set(to, (inSample.get(to) ?? 0) + (inSample.get(from) ?? 0));
  const carriedBound = carriedFor.reduce((s, m) => s + boundMol(m), 0);
  for (const metal of new Set([...model.metals, ...frozen.keys()])) {
    const fromSample = inSample.get(metal) ?? 0;
    const fromChelate = plan.chelate?.metal === metal ? plan.chelate.molPerL * model.volumeL : 0;
    const fromBurette = back?.id === metal ? back.molPerL * volumeL : 0;
    const fromBefore =
      carriedFor.includes(metal) && carriedBound > 0 ? (carriedMol * boundMol(metal)) / carriedBound : 0;
    const counted = boundMol(metal) - fromChelate - fromBurette - fromBefore;
    if (determined.has(metal)) {
      analyteMissing += counted - fromSample;
      if (fromSample > 0) titrated.set(metal, counted / fromSample);
    } else if (fromSample > 0 && fromChelate === 0 && fromBurette === 0) {
      titrated.set(metal, (boundMol(metal) - fromBefore) / fromSample);
      biasOf.set(metal, counted / presentMol);
      ledger.push({ source: metal, fraction: counted / presentMol });
    } else if (fromSample > 0) {
      // A metal that the method adds and the sample also brings: the sample's share counts whole, the rest is end point.
      titrated.set(metal, 1);
      biasOf.set(metal, fromSample / presentMol);
      ledger.push({ source: metal, fraction: fromSample / presentMol });
      endPoint += counted - fromSample;
    } else endPoint += counted;
  }
  for (const held of model.held) {
    if (!determined.has(held.component)) continue;
    if (held.why === "kinetically-inert") continue;
    const lost = (-held.molPerL * model.volumeL) / presentMol;
    analyteMissing -= lost * presentMol;
    const reason = held.why === "precipitated" ? `lost as ${held.by}` : `${held.why}: ${held.component}`;
    ledger.push({ source: reason, fraction: lost });
  }
  endPoint += analyteMissing;
  ledger.unshift({ source: "end-point", fraction: endPoint / presentMol });
  const analyteUnbound = [...determined].reduce((s, m) => s + end.unbound(m), 0) * vessel;
  return closed(presentMol, {
    foundMol,
    ledger,
    titrated,
    biasOf,
    backTitrantStealsFraction: back ? analyteUnbound / presentMol : 0,
  });
}
