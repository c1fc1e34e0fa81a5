import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { AppError } from "../errors.ts";
import { ionicStrengthOf } from "./ionic-strength.ts";
import type { PrepareOptions } from "./prepare-system.ts";
import { prepareSystem } from "./prepare-system.ts";
import { solveEquilibrium } from "./solve-equilibrium.ts";
import type { PreparedSystem, SolveResult, SolveStatus } from "./types.ts";

/** A solution to bring to equilibrium; amounts mol/L. */
export interface EquilibrateRequest {
  readonly totals: Readonly<Record<ComponentId, number>>; // of components; "H+" is ignored, zero totals are left out
  readonly pH: number; // activity scale
  readonly log10H?: number; // concentration instead of the pH, where it is known
  readonly temperatureC: number;
  /** Ions that take no part: spelling ending in the charge ("Na+", "NO3-", "Ba2+"), or an inert component of the knowledge. */
  readonly inert?: Readonly<Record<string, number>>;
  readonly ionicStrength: "auto" | number;
  readonly solids?: "equilibrium" | "saturation-only"; // default "equilibrium"
  readonly free?: Readonly<Record<ComponentId, number>>; // held at these free concentrations
  readonly options?: PrepareOptions;
  /** Free concentrations to start from (ln, mol/L), e.g. of a neighbouring solution. */
  readonly startLnFree?: ReadonlyMap<ComponentId, number>;
}

/** The solved solution, with the system it was solved in and the evidence. */
export interface EquilibriumState {
  readonly status: SolveStatus; // outOfModelRange: converged beyond the Davies range
  readonly system: PreparedSystem;
  readonly result: SolveResult;
  readonly log10H: number; // concentration
  readonly ionicStrengthMolPerL: number;
  readonly ionicStrengthIterations: number;
  readonly counterCationMolPerL: number; // added for neutrality
  readonly counterAnionMolPerL: number;
  freeMolPerL(component: ComponentId): number; // 0 for a component that is not in
}

/** Relative change at which the ionic strength counts as settled: 1e-4 moves log10 K of |sum nu z^2| = 20 by less than 1e-3. */
const IONIC_STRENGTH_TOLERANCE = 1e-4;
const IONIC_STRENGTH_ITERATIONS = 40;

/**
 * Brings a solution of fixed pH to equilibrium, the ionic strength computed from its own composition ("auto", by secant steps
 * to 1e-4) or given (mol/L). Charge that the totals leave over is balanced by singly charged inert ions.
 * A solve that does not converge, or an ionic strength that does not settle, is a status. Throws AppError "unknown-component" for
 * a component or inert ion that cannot be read, "bad-amount" for a negative or non-finite amount.
 */
export function equilibrate(knowledge: Knowledge, request: EquilibrateRequest): EquilibriumState {
  const free = request.free ?? {};
  const present = Object.entries(request.totals).filter(([id]) => id !== "H+" && !(id in free));
  for (const [id, amount] of [...present, ...Object.entries(free)]) {
    if (!Number.isFinite(amount) || amount < 0)
      throw new AppError("bad-amount", `amount of ${id} must be 0 or more mol/L, got ${amount}`, { component: id });
  }
  const ids = [...present, ...Object.entries(free)].filter(([, amount]) => amount > 0).map(([id]) => id);
  const inert = inertOf(knowledge, request.inert ?? {});
  const amounts = { ...request.totals, ...free };
  let ionicStrength =
    request.ionicStrength === "auto" ? firstGuess(knowledge, ids, amounts, inert) : request.ionicStrength;
  let start = request.startLnFree;
  const search: IonicStrengthSearch = { low: 0, high: Number.POSITIVE_INFINITY, last: null };
  for (let iteration = 1; ; iteration++) {
    const solved = solveAt(knowledge, request, ids, ionicStrength, start);
    const { system, result } = solved;
    const found = ionicStrengthOf(system, result, inert.sumCz2, inert.sumCz);
    const change = found.molPerL - ionicStrength;
    const settled = request.ionicStrength !== "auto" || hasSettled(search, ionicStrength, change);
    if (settled || iteration === IONIC_STRENGTH_ITERATIONS || result.status !== "converged") {
      const status: SolveStatus =
        result.status !== "converged"
          ? result.status
          : !settled
            ? "maxIterations"
            : system.outOfModelRange
              ? "outOfModelRange"
              : "converged";
      return {
        status,
        system,
        result,
        log10H: solved.log10H,
        ionicStrengthMolPerL: ionicStrength,
        ionicStrengthIterations: iteration,
        counterCationMolPerL: found.counterCationMolPerL,
        counterAnionMolPerL: found.counterAnionMolPerL,
        freeMolPerL: (id) => {
          const column = system.index.get(id);
          return column === undefined ? 0 : Math.exp(result.lnFree[column]!);
        },
      };
    }
    ionicStrength = nextGuess(search, ionicStrength, change, iteration);
    start = new Map(system.components.map((id, column) => [id, result.lnFree[column]!]));
  }
}

/** The search for the ionic strength that the composition confirms: below `low` it asks for more, above `high` for less. */
interface IonicStrengthSearch {
  low: number;
  high: number;
  last: { readonly at: number; readonly change: number } | null;
}

/** Secant steps do it in three or four; after this many the bracket is halved instead. */
const SECANT_STEPS = 8;

/**
 * Settled: the composition confirms the ionic strength, or the bracket has closed on a jump (another record is nearest, a solid
 * appears), where neither side confirms itself.
 */
function hasSettled(search: IonicStrengthSearch, at: number, change: number): boolean {
  const tolerance = IONIC_STRENGTH_TOLERANCE * Math.max(at + change, 1e-7);
  return Math.abs(change) <= tolerance || search.high - search.low <= tolerance;
}

function nextGuess(search: IonicStrengthSearch, at: number, change: number, iteration: number): number {
  if (change > 0) search.low = Math.max(search.low, at);
  else search.high = Math.min(search.high, at);
  const { last, low, high } = search;
  search.last = { at, change };
  const slope = last === null ? -1 : (change - last.change) / (at - last.at);
  const proposed = slope < 0 ? at - change / slope : Number.NaN;
  if (iteration <= SECANT_STEPS && proposed > low && proposed < high) return proposed;
  return high === Number.POSITIVE_INFINITY ? Math.max(at + change, 2 * low) : (low + high) / 2;
}

function solveAt(
  knowledge: Knowledge,
  request: EquilibrateRequest,
  ids: readonly ComponentId[],
  ionicStrengthMolPerL: number,
  start: ReadonlyMap<ComponentId, number> | undefined,
): { system: PreparedSystem; result: SolveResult; log10H: number } {
  const conditions = { ionicStrengthMolPerL, temperatureC: request.temperatureC };
  const system = prepareSystem(knowledge, ids, conditions, request.options);
  const log10H = request.log10H ?? -request.pH - system.log10GammaH;
  const fixedLnFree = Float64Array.from(system.components, (id) => {
    const held = request.free?.[id];
    return id === "H+" ? log10H * Math.LN10 : held === undefined ? Number.NaN : Math.log(held);
  });
  const totals = Float64Array.from(system.components, (id) => (id === "H+" ? 0 : (request.totals[id] ?? 0)));
  const startFrom =
    start === undefined
      ? undefined
      : system.components.map((id, column) => start.get(id) ?? Math.log(Math.max(totals[column]!, 1e-12)));
  const result = solveEquilibrium(system.problem, totals, {
    fixedLnFree,
    solids: request.solids ?? "equilibrium",
    ...(startFrom === undefined ? {} : { start: startFrom }),
  });
  return { system, result, log10H };
}

function inertOf(knowledge: Knowledge, inert: Readonly<Record<string, number>>): { sumCz: number; sumCz2: number } {
  let sumCz = 0;
  let sumCz2 = 0;
  for (const [ion, molPerL] of Object.entries(inert)) {
    const charge = knowledge.components.get(ion)?.charge ?? chargeInSpelling(ion);
    sumCz += charge * molPerL;
    sumCz2 += charge * charge * molPerL;
  }
  return { sumCz, sumCz2 };
}

/** Charge of an inert ion from its spelling: "SO4^2-" after the caret, "Ba2+" after a bare element symbol, else one. */
function chargeInSpelling(ion: string): number {
  const match = /\^(\d*)([+-])$/.exec(ion) ?? /^[A-Z][a-z]?(\d*)([+-])$/.exec(ion) ?? /^\w.*?()([+-])$/.exec(ion);
  if (match === null)
    throw new AppError("unknown-component", `${ion} is neither a component nor a spelling with its charge`, {
      component: ion,
    });
  return (match[2] === "+" ? 1 : -1) * Number(match[1] === "" ? 1 : match[1]);
}

/** Half the sum of c z^2 of the totals as if nothing reacted, capped where the Davies equation ends: only a place to start. */
function firstGuess(
  knowledge: Knowledge,
  ids: readonly ComponentId[],
  amounts: Readonly<Record<ComponentId, number>>,
  inert: { readonly sumCz2: number },
): number {
  const sum = ids.reduce(
    (s, id) => s + (amounts[id] ?? 0) * Math.min((knowledge.components.get(id)?.charge ?? 0) ** 2, 4),
    0,
  );
  return Math.min((sum + inert.sumCz2) / 2, 0.5);
}
