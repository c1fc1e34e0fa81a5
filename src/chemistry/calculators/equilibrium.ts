import type { ComponentId, Knowledge } from "../../constants/knowledge.ts";
import type { EquilibriumState } from "../equilibrate.ts";
import { equilibrate } from "../equilibrate.ts";
import { formsInTitration } from "../forming-solids.ts";
import { prepareSystem } from "../prepare-system.ts";
import { solveEquilibrium } from "../solve-equilibrium.ts";
import { conditionalConstantAt, log10SideReaction } from "../speciation.ts";
import type { PreparedSystem, SolveResult, SolveStatus } from "../types.ts";
import { givenLog10H, givenSystem, sourceOf } from "./given-system.ts";
import type {
  EquilibriumAnswer,
  EquilibriumComponent,
  EquilibriumConditional,
  EquilibriumRequest,
  EquilibriumSolid,
} from "./types.ts";

/** Free concentration (mol/L) that stands for a component asked about but not present: binds nothing. */
const TRACE_MOL_PER_L = 1e-150;

interface Solved {
  readonly status: SolveStatus;
  readonly system: PreparedSystem;
  readonly result: SolveResult;
  readonly ionicStrengthMolPerL: number;
  readonly log10H: number;
  readonly notes: readonly string[];
}

/**
 * Answers a validated question to the equilibrium calculator: all concentrations (mol/L), side-reaction coefficients and conditional
 * constants (log10) of one solution at fixed acidity. With constants in the question these are used as they are. Components with a total of
 * zero are answered in the limit of traces. Throws AppError "unknown-component" for names that the knowledge does not hold.
 */
export function calculateEquilibrium(request: EquilibriumRequest, knowledge: Knowledge): EquilibriumAnswer {
  const titrant = request.titrant ?? complexonePresent(request, knowledge);
  const asked = [
    ...new Set([
      ...Object.keys(request.totals),
      ...Object.keys(request.free ?? {}),
      ...(titrant === null ? [] : [titrant]),
    ]),
  ].filter((id) => id !== "H+");
  const isHeld = (id: ComponentId) => (request.free?.[id] ?? 0) > 0;
  const absent = asked.filter((id) => !isHeld(id) && !((request.totals[id] ?? 0) > 0));
  const free = { ...request.free, ...Object.fromEntries(absent.map((id) => [id, TRACE_MOL_PER_L])) };
  const solved =
    request.constants === undefined
      ? solveKnown(request, free, knowledge)
      : solveGiven(request, free, asked, knowledge);
  const { system, result } = solved;
  const shown = (id: ComponentId): string => request.names?.[id] ?? id;
  const amountsIn = (
    rows: readonly { readonly components: Readonly<Record<ComponentId, number>> }[],
    c: Float64Array,
    id: ComponentId,
  ) => rows.reduce((sum, row, i) => sum + Math.max(row.components[id] ?? 0, 0) * c[i]!, 0);

  const components = asked.map((id): EquilibriumComponent => {
    if (absent.includes(id))
      return {
        id: shown(id),
        totalMolPerL: 0,
        freeMolPerL: 0,
        dissolvedMolPerL: 0,
        sideReaction: { log10Alpha: log10SideReaction(system, result.lnFree, id) },
      };
    const freeMolPerL = Math.exp(result.lnFree[system.index.get(id)!]!);
    const dissolved = amountsIn(system.species, result.speciesMolPerL, id);
    const total = isHeld(id) ? dissolved : request.totals[id]!;
    const lnFree = result.lnFree[system.index.get(id)!]!;
    return {
      id: shown(id),
      totalMolPerL: total,
      freeMolPerL,
      dissolvedMolPerL: dissolved,
      sideReaction: { log10Alpha: (Math.log(total) - lnFree) / Math.LN10 },
    };
  });
  return {
    status: solved.status,
    residual: result.residual,
    iterations: result.iterations,
    ionicStrengthMolPerL: solved.ionicStrengthMolPerL,
    log10H: solved.log10H,
    species: system.species.map((s, i) => ({
      components: Object.fromEntries(Object.entries(s.components).map(([id, n]) => [shown(id), n])),
      molPerL: Object.keys(s.components).some((id) => absent.includes(id)) ? 0 : result.speciesMolPerL[i]!,
      log10Beta: s.log10Beta,
      source: sourceOf(s, request.constants !== undefined),
    })),
    components,
    conditional:
      titrant === null
        ? []
        : conditionalOf(system, result, titrant, asked, knowledge).map((c) => ({
            ...c,
            metal: shown(c.metal),
            ligand: shown(c.ligand),
          })),
    solids: solidsOf(request, solved, knowledge),
    notes: solved.notes,
  };
}

function complexonePresent(request: EquilibriumRequest, knowledge: Knowledge): ComponentId | null {
  const ids = [...Object.keys(request.totals), ...Object.keys(request.free ?? {})];
  return ids.find((id) => knowledge.titrants.has(id)) ?? null;
}

function solveKnown(
  request: EquilibriumRequest,
  free: Readonly<Record<ComponentId, number>>,
  knowledge: Knowledge,
): Solved {
  const state: EquilibriumState = equilibrate(knowledge, {
    totals: request.totals,
    free,
    pH: request.pH ?? 0,
    ...(request.log10H === undefined ? {} : { log10H: request.log10H }),
    temperatureC: request.temperatureC ?? 25,
    ionicStrength: request.ionicStrengthMolPerL ?? "auto",
    solids: request.solids === false ? "saturation-only" : "equilibrium",
    options: { solids: (s) => formsInTitration(s, "minutes") },
  });
  return {
    ...state,
    notes: [
      ...(state.system.outOfModelRange
        ? ["The ionic strength is beyond 0.5 mol/L: the Davies equation was used with its value at 0.5."]
        : []),
      ...(state.counterCationMolPerL > 0
        ? [`${state.counterCationMolPerL.toPrecision(3)} mol/L of singly charged inert cation balances the charge.`]
        : []),
      ...(state.counterAnionMolPerL > 0
        ? [`${state.counterAnionMolPerL.toPrecision(3)} mol/L of singly charged inert anion balances the charge.`]
        : []),
    ],
  };
}

function solveGiven(
  request: EquilibriumRequest,
  free: Readonly<Record<ComponentId, number>>,
  asked: readonly ComponentId[],
  knowledge: Knowledge,
): Solved {
  const temperatureC = request.temperatureC ?? 25;
  const ionicStrength = request.ionicStrengthMolPerL ?? "auto";
  const system = givenSystem(request.constants ?? [], asked, knowledge, temperatureC);
  const log10H = givenLog10H(request, ionicStrength, temperatureC);
  const fixedLnFree = Float64Array.from(system.components, (id) =>
    id === "H+" ? log10H * Math.LN10 : free[id] === undefined ? Number.NaN : Math.log(free[id]),
  );
  const totals = Float64Array.from(system.components, (id) => (id === "H+" ? 0 : (request.totals[id] ?? 0)));
  const result = solveEquilibrium(system.problem, totals, { fixedLnFree });
  return {
    status: result.status,
    system,
    result,
    log10H,
    ionicStrengthMolPerL: ionicStrength === "auto" ? 0 : ionicStrength,
    notes: [
      ionicStrength === "auto" || request.log10H !== undefined
        ? "The constants given were used as they are; no activity correction was made."
        : "The constants given were used as they are; the pH was turned into a concentration at the ionic strength given.",
    ],
  };
}

/** For every metal x titrant: a metal by the knowledge, or any component that forms a plain 1:1 complex where the names are free. */
function conditionalOf(
  system: PreparedSystem,
  result: SolveResult,
  titrant: ComponentId,
  asked: readonly ComponentId[],
  knowledge: Knowledge,
): EquilibriumConditional[] {
  const list: EquilibriumConditional[] = [];
  for (const metal of asked) {
    const kind = knowledge.components.get(metal)?.kind;
    if (metal === titrant || (kind !== undefined && kind !== "metal")) continue;
    const found = conditionalConstantAt(system, result.lnFree, metal, titrant);
    if (found === null) continue;
    const { log10AlphaMetal, log10AlphaLigand, log10ConditionalK } = found;
    list.push({ metal, ligand: titrant, log10AlphaMetal, log10AlphaLigand, log10ConditionalK });
  }
  return list;
}

/** Every solid of the components: amounts of those that may form, saturation of all, at the free concentrations of the solution. */
function solidsOf(request: EquilibriumRequest, solved: Solved, knowledge: Knowledge): EquilibriumSolid[] {
  if (request.constants !== undefined) return [];
  const { system, result } = solved;
  const all = prepareSystem(knowledge, system.components.slice(1), system.conditions);
  const inSystem = new Map(system.solids.map((s, i) => [s.id, i]));
  return all.solids.map((solid): EquilibriumSolid => {
    let log10 = solid.log10Beta;
    for (const [id, n] of Object.entries(solid.components))
      log10 += (n * result.lnFree[system.index.get(id)!]!) / Math.LN10;
    const at = inSystem.get(solid.id);
    const molPerL = at === undefined ? 0 : result.solidsMolPerL[at]!;
    return {
      id: solid.id,
      saturationIndex: molPerL > 0 ? 0 : log10,
      molPerL,
      mayForm: at !== undefined && request.solids !== false,
    };
  });
}
