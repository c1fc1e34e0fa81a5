import type { ComponentId, Knowledge } from "../../constants/knowledge.ts";
import { AppError } from "../../errors.ts";
import { explicitCurve, whyNotExplicit } from "../curve-explicit.ts";
import { generalCurve } from "../curve-general.ts";
import { equilibrate } from "../equilibrate.ts";
import { formsInTitration } from "../forming-solids.ts";
import type { CurvePoint, Titration } from "../titration.ts";
import type { SolveStatus } from "../types.ts";
import { givenLog10H, givenSystem } from "./given-system.ts";
import type { CurveAnswer, CurveRequest } from "./types.ts";

/**
 * Answers a validated question to the curve calculator: pM of the followed component against volume of titrant (mL), everything diluted by the
 * titrant, pH and the components in `free` held. With constants in the question these are used as they are; otherwise each point has the
 * constants of its own ionic strength. Throws AppError "unknown-component" for names that the knowledge does not hold, "not-in-sample"
 * where what is followed is neither in the sample nor the titrant.
 */
export function calculateCurve(request: CurveRequest, knowledge: Knowledge): CurveAnswer {
  if (!((request.sample.totals[request.follow] ?? 0) > 0) && request.follow !== request.titrant.id)
    throw new AppError("not-in-sample", `${request.follow} is followed but is not in the sample`, {
      component: request.follow,
    });
  const run = request.constants === undefined ? knownCurve(request, knowledge) : givenCurve(request, knowledge);
  const equivalenceML = equivalenceOf(request, run.stoichiometricRatio);
  const points = request.volumesML.map(run.at);
  const atEquivalence = run.at(equivalenceML);
  return {
    status: worst([...points, atEquivalence].map((p) => p.status)),
    residual: Math.max(...points.map((p) => p.residual), atEquivalence.residual),
    ionicStrengthMolPerL: run.ionicStrengthMolPerL(),
    equivalenceML,
    points: points.map(({ volumeML, pM, pMTotal, fractionTitrated }) => ({ volumeML, pM, pMTotal, fractionTitrated })),
    atEquivalence: { pM: atEquivalence.pM },
    notes: run.notes(),
  };
}

interface Run {
  readonly at: (volumeML: number) => CurvePoint;
  readonly ionicStrengthMolPerL: () => number;
  /** Titrant per followed component in their complex. */
  readonly stoichiometricRatio: number;
  readonly notes: () => readonly string[];
}

function givenCurve(request: CurveRequest, knowledge: Knowledge): Run {
  const temperatureC = request.temperatureC ?? 25;
  const ionicStrength = request.ionicStrengthMolPerL ?? "auto";
  const ids = [
    ...new Set([...Object.keys(request.sample.totals), request.titrant.id, ...Object.keys(request.free ?? {})]),
  ];
  const system = givenSystem(request.constants ?? [], ids, knowledge, temperatureC);
  const titration: Titration = {
    system,
    log10H: givenLog10H(request, ionicStrength, temperatureC),
    sampleVolumeML: request.sample.volumeML,
    sampleMolPerL: request.sample.totals,
    titrant: { component: request.titrant.id, molPerL: request.titrant.molPerL },
    freeMolPerL: request.free ?? {},
    follow: request.follow,
  };
  const reason = whyNotExplicit(titration);
  const curve = reason === null ? explicitCurve(titration) : generalCurve(titration);
  return {
    at: (volumeML) => curve.at(volumeML),
    ionicStrengthMolPerL: () => (ionicStrength === "auto" ? 0 : ionicStrength),
    stoichiometricRatio: ratioIn(system.species, request.follow, request.titrant.id),
    notes: () => ["The constants given were used as they are."],
  };
}

function knownCurve(request: CurveRequest, knowledge: Knowledge): Run {
  const free = request.free ?? {};
  let start: ReadonlyMap<ComponentId, number> | undefined;
  let first: number | null = null;
  const formed = new Map<string, number>(); // solid to the last volume at which it is there
  const at = (volumeML: number): CurvePoint => {
    const dilution = request.sample.volumeML / (request.sample.volumeML + volumeML);
    const totals: Record<ComponentId, number> = {};
    for (const [id, molPerL] of Object.entries(request.sample.totals)) totals[id] = molPerL * dilution;
    const titrant = request.titrant.id;
    totals[titrant] = (totals[titrant] ?? 0) + request.titrant.molPerL * (1 - dilution);
    const state = equilibrate(knowledge, {
      totals,
      free,
      pH: request.pH ?? 0,
      ...(request.log10H === undefined ? {} : { log10H: request.log10H }),
      temperatureC: request.temperatureC ?? 25,
      ionicStrength: request.ionicStrengthMolPerL ?? "auto",
      solids: request.solids === false ? "saturation-only" : "equilibrium",
      options: { solids: (s) => formsInTitration(s, "at-once") },
      ...(start === undefined ? {} : { startLnFree: start }),
    });
    const { system, result } = state;
    if (result.status === "converged") start = new Map(system.components.map((id, c) => [id, result.lnFree[c]!]));
    first ??= state.ionicStrengthMolPerL;
    let notBound = 0;
    let bound = 0;
    system.species.forEach((species, row) => {
      const atoms = Math.max(species.components[request.follow] ?? 0, 0) * result.speciesMolPerL[row]!;
      if (species.components[titrant] === undefined || request.follow === titrant) notBound += atoms;
      else bound += atoms;
    });
    system.solids.forEach((row, i) => {
      if (result.solidsMolPerL[i]! > 0) formed.set(row.id, Math.max(formed.get(row.id) ?? 0, volumeML));
    });
    const solid = system.solids.reduce(
      (s, row, i) => s + (row.components[request.follow] ?? 0) * result.solidsMolPerL[i]!,
      0,
    );
    return {
      volumeML,
      pM: -result.lnFree[system.index.get(request.follow)!]! / Math.LN10,
      pMTotal: -Math.log10(notBound + solid),
      fractionTitrated: bound / (bound + notBound + solid),
      status: state.status,
      residual: result.residual,
    };
  };
  return {
    at,
    ionicStrengthMolPerL: () => first ?? 0,
    stoichiometricRatio: ratioIn(knowledge.species, request.follow, request.titrant.id),
    notes: () =>
      [...formed].map(
        ([id, volumeML]) => `${id} precipitates; of the points asked for it is last there at ${volumeML} mL.`,
      ),
  };
}

/** Titrant per followed component: 1 where a 1:1 complex exists, else that of the simplest complex of the two alone. */
function ratioIn(
  species: readonly { readonly components: Readonly<Record<ComponentId, number>> }[],
  follow: ComponentId,
  titrant: ComponentId,
): number {
  let best: number | null = null;
  for (const { components } of species) {
    const others = Object.keys(components).filter((id) => id !== "H+" && id !== follow && id !== titrant);
    const ofFollow = components[follow] ?? 0;
    const ofTitrant = components[titrant] ?? 0;
    if (others.length > 0 || ofFollow <= 0 || ofTitrant <= 0) continue;
    const ratio = ofTitrant / ofFollow;
    if (best === null || Math.abs(Math.log(ratio)) < Math.abs(Math.log(best))) best = ratio;
  }
  return best ?? 1;
}

function equivalenceOf(request: CurveRequest, ratio: number): number {
  const wanted = (request.sample.totals[request.follow] ?? 0) * ratio;
  const already = request.follow === request.titrant.id ? 0 : (request.sample.totals[request.titrant.id] ?? 0);
  return (Math.max(wanted - already, 0) * request.sample.volumeML) / request.titrant.molPerL;
}

function worst(statuses: readonly SolveStatus[]): SolveStatus {
  for (const status of ["nonFinite", "maxIterations", "outOfModelRange"] as const)
    if (statuses.includes(status)) return status;
  return "converged";
}
