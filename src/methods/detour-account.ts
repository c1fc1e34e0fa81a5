import { closed, type LedgerLine, type StageAccount } from "./account.ts";
import type { ComponentId } from "../constants/knowledge.ts";
import { vesselSample } from "./solution.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import type { Task } from "./types.ts";
import { companyOf, partnerOf, type WayRound } from "./way-round.ts";

/** Name of the ledger line for analyte that the way round leaves behind. */
export const LEFT_BEHIND = "analyte not taken up";
/** How the ledger line of a deposit begins that counts as analyte and is none. */
export const ALSO_PRECIPITATED = "also precipitated";

/**
 * What the titre of a way round comes to, in analyte: (metal put in − metal found) × ratio for a surplus, metal found × ratio
 * else. Every line is a part of the result relative to the amount present; the end point is what the others leave.
 */
export function detourAccount(
  task: Task,
  model: StageModel,
  way: WayRound,
  end: VesselState,
  volumeL: number,
  presentMol: number,
): StageAccount {
  const { plan } = model;
  const detour = plan.detour!;
  const { metal, analytePerMetal } = detour;
  const surplus = way.record.kind === "surplus";
  const sign = surplus ? -1 : 1;
  const vessel = model.volumeL + volumeL;
  const metalFoundMol = metalFound(model, way, volumeL);
  const reagentMol = surplus ? detour.reagent.molPerL * model.volumeL * (way.record.reagent.components[metal] ?? 1) : 0;
  const foundMol = (surplus ? reagentMol - metalFoundMol : metalFoundMol) * analytePerMetal;
  const part = (mol: number): number => (analytePerMetal * mol) / presentMol;
  const ledger: LedgerLine[] = [];
  const titrated = new Map<ComponentId, number>();
  const biasOf = new Map<ComponentId, number>();
  for (const { component, inVesselMolPerL } of vesselSample(task, plan)) {
    if (!model.metals.includes(component) || plan.removed.includes(component) || component === way.record.analyte)
      continue;
    // The counted metal of the sample itself counts whole in a surplus; elsewhere the deposit has decided.
    if (component === metal && !surplus) continue;
    const inVessel = component === metal ? inVesselMolPerL : (model.solution.fromSample.get(component) ?? 0);
    const mol = inVessel * model.volumeL;
    if (!(mol > 0)) continue;
    const alsoAdded = [metal, model.burette.component, plan.chelate?.metal].includes(component);
    const counted = alsoAdded ? mol : end.boundToTitrant(component) * vessel;
    titrated.set(component, counted / mol);
    biasOf.set(component, sign * part(counted));
    ledger.push({ source: component, fraction: sign * part(counted) });
  }
  const company = deposits(model, way, presentMol);
  ledger.push(...company);
  // What an exchange or a conversion gives counts the company too; what a deposit holds of the metal does not.
  const included = way.record.kind === "exchange" || way.record.kind === "conversion";
  const withTaken = included ? company.reduce((sum, line) => sum + line.fraction, 0) : 0;
  ledger.push({ source: LEFT_BEHIND, fraction: part(takenUp(model, way, end, vessel)) - 1 - withTaken });
  const bias = (foundMol - presentMol) / presentMol;
  const endPoint = bias - ledger.reduce((sum, line) => sum + line.fraction, 0);
  ledger.unshift({ source: "end-point", fraction: endPoint });
  return closed(presentMol, {
    foundMol,
    ledger,
    titrated,
    biasOf,
    backTitrantStealsFraction:
      plan.backTitrant && way.record.kind !== "conversion" ? part(end.unbound(metal) * vessel) : 0,
  });
}

/** The counted metal that the analyst finds, mol: from the burette, or as the difference of a back titration. */
function metalFound(model: StageModel, way: WayRound, volumeL: number): number {
  const { plan } = model;
  const fromBurette = model.burette.molPerL * volumeL;
  if (way.record.kind === "conversion" || plan.backTitrant === null) return fromBurette;
  return plan.excessTitrantMolPerL * model.volumeL - fromBurette;
}

/** Counted metal that the analyte has taken up, set free or brought along, mol. */
function takenUp(model: StageModel, way: WayRound, end: VesselState, vesselL: number): number {
  const { metal } = model.plan.detour!;
  const { analyte, kind } = way.record;
  const inDeposits = (list: WayRound["left"]): number =>
    list
      .filter((d) => (d.components[analyte] ?? 0) > 0)
      .reduce((sum, d) => sum + (d.components[metal] ?? 0) * d.molPerL, 0) * model.volumeL;
  const inSpecies = (partner: ComponentId): number =>
    model.system.species.reduce((sum, species, row) => {
      const held = (species.components[partner] ?? 0) > 0 ? (species.components[metal] ?? 0) : 0;
      return held > 0 ? sum + held * end.result.speciesMolPerL[row]! : sum;
    }, 0) * vesselL;
  if (kind === "surplus") return inDeposits(way.left) + inSpecies(analyte) + inLateSolids(model, way, end, vesselL);
  if (kind === "precipitate") return inDeposits(way.collected) - undissolved(model, end, vesselL, metal);
  if (kind === "conversion") return way.titrantMolPerL * model.volumeL;
  const partner = partnerOf(way.record);
  return end.total(metal) * vesselL - (partner ? inSpecies(partner) : 0);
}

/** Counted metal in deposits with the analyte that formed or dissolve only in the titration vessel, mol. */
function inLateSolids(model: StageModel, way: WayRound, end: VesselState, vesselL: number): number {
  const { metal } = model.plan.detour!;
  const { analyte } = way.record;
  const standing = model.system.solids.reduce(
    (sum, solid, i) =>
      (solid.components[analyte] ?? 0) > 0
        ? sum + (solid.components[metal] ?? 0) * (end.result.solidsMolPerL[i] ?? 0)
        : sum,
    0,
  );
  return standing * vesselL + lateHeld(model, way, (solid) => solidHolds(solid, way, analyte)) * model.volumeL;
}

const solidHolds = (solid: string, way: WayRound, analyte: ComponentId): boolean =>
  way.record.solids.includes(solid) || way.left.some((d) => d.solid === solid && (d.components[analyte] ?? 0) > 0);

/** Counted metal held by deposits that the titration vessel itself made, mol/L. */
function lateHeld(model: StageModel, way: WayRound, which: (solid: string) => boolean): number {
  const { metal } = model.plan.detour!;
  const early = way.left.reduce((sum, d) => sum + (which(d.solid) ? (d.components[metal] ?? 0) * d.molPerL : 0), 0);
  const all = model.held
    .filter((h) => h.why === "precipitated" && h.component === metal && which(h.by))
    .reduce((sum, h) => sum + h.molPerL, 0);
  return Math.max(0, all - early);
}

/** Counted metal of the collected precipitate that the titrant has not dissolved at the end point, mol. */
function undissolved(model: StageModel, end: VesselState, vesselL: number, metal: ComponentId): number {
  return (
    model.system.solids.reduce(
      (sum, solid, i) => sum + (solid.components[metal] ?? 0) * (end.result.solidsMolPerL[i] ?? 0),
      0,
    ) * vesselL
  );
}

/** Deposits without the analyte that count as analyte: carbonate or phosphate that fell with the reagent, another halide. */
function deposits(model: StageModel, way: WayRound, presentMol: number): LedgerLine[] {
  const { metal, analytePerMetal } = model.plan.detour!;
  const { analyte, kind } = way.record;
  const lines = new Map<string, number>();
  for (const { deposit, asAnalyteMolPerL } of companyOf(way))
    if (asAnalyteMolPerL > 0) lines.set(deposit.solid, asAnalyteMolPerL);
  if (kind === "surplus")
    for (const h of model.held) {
      if (h.why !== "precipitated" || h.component !== metal || solidHolds(h.by, way, analyte) || lines.has(h.by))
        continue;
      lines.set(h.by, analytePerMetal * lateHeld(model, way, (solid) => solid === h.by));
    }
  return [...lines].map(([solid, molPerL]) => ({
    source: `${ALSO_PRECIPITATED}: ${solid}`,
    fraction: (molPerL * model.volumeL) / presentMol,
  }));
}
