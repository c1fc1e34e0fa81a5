import { formsInTitration } from "../chemistry/forming-solids.ts";
import { ionicStrengthOf } from "../chemistry/ionic-strength.ts";
import { prepareSystem } from "../chemistry/prepare-system.ts";
import { solveEquilibrium } from "../chemistry/solve-equilibrium.ts";
import type { ComponentId, DetourRecord, Knowledge, SolidDefinition } from "../constants/knowledge.ts";
import { AppError } from "../errors.ts";
import { inertIonsOf } from "./inert-ions.ts";
import type { Detour, StagePlan } from "./types.ts";
import { protonFixed } from "./vessel-solver.ts";

/** A precipitate of the way round: which, what is in a formula of it, and how much, mol/L of the vessel. */
export interface Deposit {
  readonly solid: string;
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly molPerL: number;
}

/** What a way round makes of the sample before the titration; mol/L of the vessel. */
export interface WayRound {
  readonly record: DetourRecord;
  /** What of the sample, and of a precipitate that was collected, is in the vessel. */
  readonly sample: ReadonlyMap<ComponentId, number>;
  /** What the reagent brings into the vessel, less what lies in deposits that stay out of the game. */
  readonly reagent: ReadonlyMap<ComponentId, number>;
  /** Titrant that the precipitate set free. */
  readonly titrantMolPerL: number;
  /** Deposits that are filtered off or lie in the vessel untouched. */
  readonly left: readonly Deposit[];
  /** Deposits that were collected and brought into the vessel. */
  readonly collected: readonly Deposit[];
  /** Sample components that went away with the filtrate. */
  readonly filteredAway: ReadonlyMap<ComponentId, number>;
  /** The counted metal that the titration should find, mol/L, were the way round perfect. */
  readonly expectedMolPerL: number;
}

/** The record behind a plan's way round. Throws AppError "unknown-detour". */
export function detourRecord(detour: Detour, knowledge: Knowledge): DetourRecord {
  const record = knowledge.detours.get(detour.id);
  if (!record) throw new AppError("unknown-detour", `The knowledge holds no way round "${detour.id}".`);
  return record;
}

/** Solids that a way round brings into the vessel to be dissolved there; none where the precipitate stays out, or dissolves as its record says. */
export function solidsOfDetour(plan: Pick<StagePlan, "detour">, knowledge: Knowledge): ReadonlySet<string> {
  const record = plan.detour ? detourRecord(plan.detour, knowledge) : null;
  return new Set(record && record.kind !== "surplus" && record.rests === "equilibrium" ? record.solids : []);
}

/** What holds the counted metal as long as the way round keeps it from the titrant: the analyte, or the ligand it is exchanged from. */
export function partnerOf(record: DetourRecord): ComponentId | null {
  if (record.kind === "surplus") return record.analyte;
  if (record.kind !== "exchange") return null;
  return Object.keys(record.reagent.components).find((c) => c !== record.metal) ?? null;
}

/** Whether a species is the counted metal as the way round holds it: that is not the titrant's to take. */
export function heldByWay(
  plan: Pick<StagePlan, "detour">,
  knowledge: Knowledge,
): (components: Readonly<Record<ComponentId, number>>) => boolean {
  const { detour } = plan;
  const partner = detour && partnerOf(detourRecord(detour, knowledge));
  if (!detour || !partner) return () => false;
  return (components) => (components[detour.metal] ?? 0) > 0 && (components[partner] ?? 0) > 0;
}

/** Deposits without the analyte that count as analyte all the same, in mol of analyte per litre of the vessel. */
export function companyOf(way: WayRound): { readonly deposit: Deposit; readonly asAnalyteMolPerL: number }[] {
  const { record } = way;
  // An exchange counts the silver of the deposit, a conversion the reagent in it; else it is the counted metal itself.
  const [id, analytePerIt] =
    record.kind === "exchange"
      ? [Object.keys(record.precipitant?.components ?? {})[0], record.precipitant?.analytePerMetal ?? 0]
      : record.kind === "conversion"
        ? [Object.keys(record.reagent.components)[0], 1]
        : [record.metal, record.analytePerMetal];
  return [...way.left, ...way.collected]
    .filter((deposit) => !((deposit.components[record.analyte] ?? 0) > 0))
    .map((deposit) => ({
      deposit,
      asAnalyteMolPerL: analytePerIt * (deposit.components[id ?? ""] ?? 0) * deposit.molPerL,
    }));
}

type Amounts = Map<ComponentId, number>;
const add = (map: Amounts, id: ComponentId, molPerL: number): void => {
  if (molPerL !== 0) map.set(id, (map.get(id) ?? 0) + molPerL);
};

/**
 * The way round up to the titration: the precipitation solved at its own pH, what is filtered off and what is collected.
 * @param sample components of the sample in the vessel that reach the precipitation, mol/L
 * @param conditions.volumeRatio volume in which the precipitate forms over that of the titration vessel
 */
export function wayRound(
  detour: Detour,
  sample: ReadonlyMap<ComponentId, number>,
  conditions: { readonly temperatureC: number; readonly volumeRatio: number },
  knowledge: Knowledge,
): WayRound {
  const record = detourRecord(detour, knowledge);
  const analyte = sample.get(record.analyte) ?? 0;
  const ideal = analyte / detour.analytePerMetal;
  const reagent = amountsOf(record.reagent.components, detour.reagent.molPerL);
  const base = {
    record,
    titrantMolPerL: 0,
    left: [],
    collected: [],
    filteredAway: new Map<ComponentId, number>(),
    expectedMolPerL: record.kind === "surplus" ? (reagent.get(detour.metal) ?? 0) - ideal : ideal,
  };
  if (record.precipitation === null)
    return record.kind === "exchange" && record.rests === "composition"
      ? { ...base, ...exchanged(record, detour, sample, analyte, reagent) }
      : { ...base, sample, reagent };
  const precipitating = record.precipitant
    ? amountsOf(record.precipitant.components, detour.precipitant?.molPerL ?? 0)
    : reagent;
  const { dissolved, deposits } =
    record.solids.length > 0
      ? precipitation(record, sample, precipitating, conditions, knowledge)
      : byComposition(record, sample, precipitating, detour.analytePerMetal);
  if (record.kind === "surplus") return { ...base, ...surplus(record, sample, dissolved, deposits, knowledge) };
  // The precipitate alone goes on: what is dissolved goes away with the filtrate.
  const inDeposits: Amounts = new Map();
  for (const deposit of deposits)
    for (const [id, n] of Object.entries(deposit.components)) if (n > 0) add(inDeposits, id, n * deposit.molPerL);
  if (record.kind === "conversion") {
    const held = inDeposits.get(record.analyte) ?? 0;
    const partner = Object.keys(record.reagent.components)[0]!;
    return {
      ...base,
      sample: new Map([[record.analyte, held]]),
      reagent: new Map(),
      titrantMolPerL: (inDeposits.get(partner) ?? held) / detour.analytePerMetal,
      collected: deposits,
      filteredAway: dissolved,
    };
  }
  const held = { collected: deposits, filteredAway: dissolved };
  if (record.kind === "exchange" && record.rests === "composition") {
    const asAnalyte = companyOf({ ...base, ...held, sample, reagent }).reduce((sum, c) => sum + c.asAnalyteMolPerL, 0);
    const brought = (inDeposits.get(record.analyte) ?? 0) + asAnalyte;
    return { ...base, ...held, ...exchanged(record, detour, new Map(), brought, reagent) };
  }
  return { ...base, ...held, sample: inDeposits, reagent: record.kind === "exchange" ? reagent : new Map() };
}

/** An exchange that is complete as its record says: what took the ligand is gone with it, the metal is free. */
function exchanged(
  record: DetourRecord,
  detour: Detour,
  sample: ReadonlyMap<ComponentId, number>,
  analyteMolPerL: number,
  reagent: ReadonlyMap<ComponentId, number>,
): Pick<WayRound, "sample" | "reagent"> {
  const left: Amounts = new Map(reagent);
  const freed = analyteMolPerL / detour.analytePerMetal;
  for (const [id, n] of Object.entries(record.reagent.components))
    if (id !== detour.metal) left.set(id, Math.max(0, (left.get(id) ?? 0) - n * freed));
  const others: Amounts = new Map(sample);
  others.delete(record.analyte);
  return { sample: others, reagent: left };
}

function amountsOf(components: Readonly<Record<ComponentId, number>>, molPerL: number): Amounts {
  return new Map(Object.entries(components).map(([id, n]) => [id, n * molPerL]));
}

/** Surplus: what stays dissolved, and unless filtered the deposits that dissolve again as the metal is taken up. */
function surplus(
  record: DetourRecord,
  sample: ReadonlyMap<ComponentId, number>,
  dissolved: ReadonlyMap<ComponentId, number>,
  deposits: readonly Deposit[],
  knowledge: Knowledge,
): Pick<WayRound, "sample" | "reagent" | "left"> {
  const left = deposits.filter((d) => record.filtered || !redissolves(d.solid, knowledge));
  const vessel: Amounts = new Map(dissolved);
  for (const deposit of deposits)
    if (!left.includes(deposit))
      for (const [id, n] of Object.entries(deposit.components)) if (n > 0) add(vessel, id, n * deposit.molPerL);
  const fromSample: Amounts = new Map();
  const reagent: Amounts = new Map();
  for (const [id, molPerL] of vessel) {
    const own = id in record.reagent.components ? 0 : Math.min(molPerL, sample.get(id) ?? 0);
    if (own > 0) fromSample.set(id, own);
    if (molPerL - own > 0) reagent.set(id, molPerL - own);
  }
  return { sample: fromSample, reagent, left };
}

const redissolves = (id: string, knowledge: Knowledge): boolean =>
  knowledge.solids.find((s) => s.id === id)?.redissolvesWhileTitrated ?? false;

/** A precipitate without constants in the model: complete, and of the composition that the record gives. */
function byComposition(
  record: DetourRecord,
  sample: ReadonlyMap<ComponentId, number>,
  reagent: ReadonlyMap<ComponentId, number>,
  analytePerMetal: number,
): { dissolved: Amounts; deposits: Deposit[] } {
  const analyte = sample.get(record.analyte) ?? 0;
  const dissolved: Amounts = new Map(sample);
  dissolved.delete(record.analyte);
  for (const [id, molPerL] of reagent) add(dissolved, id, molPerL);
  const metal = analyte / analytePerMetal;
  if (dissolved.has(record.metal)) dissolved.set(record.metal, Math.max(0, dissolved.get(record.metal)! - metal));
  const components = { [record.metal]: 1 / analytePerMetal, [record.analyte]: 1 };
  return { dissolved, deposits: [{ solid: COMPOSITION, components, molPerL: analyte }] };
}

/** Name of a precipitate that the model has no solid for. */
export const COMPOSITION = "the precipitate";

const ROUNDS = 6;
const IONIC_STRENGTH_AGREES = 0.005;

/** The precipitation vessel at equilibrium: solids of the record, and whatever else of the sample falls with the reagent in that time. */
function precipitation(
  record: DetourRecord,
  sample: ReadonlyMap<ComponentId, number>,
  reagent: ReadonlyMap<ComponentId, number>,
  { temperatureC, volumeRatio }: { readonly temperatureC: number; readonly volumeRatio: number },
  knowledge: Knowledge,
): { dissolved: Amounts; deposits: Deposit[] } {
  const step = record.precipitation!;
  const totals: Amounts = new Map(sample);
  for (const [id, molPerL] of [...reagent, ...Object.entries(step.with)]) add(totals, id, molPerL);
  const components = [...totals.keys()].filter((c) => {
    const kind = knowledge.components.get(c)?.kind;
    return kind !== undefined && kind !== "inert" && kind !== "proton";
  });
  const own = new Set(record.solids);
  // Standing gives time: what takes minutes comes down too.
  const solids = (s: SolidDefinition): boolean => own.has(s.id) || formsInTitration(s, "minutes");
  const inert = inertIonsOf(totals, knowledge);
  const there = (molPerL: number): number => molPerL / volumeRatio;
  const solveAt = (ionicStrengthMolPerL: number) => {
    const system = prepareSystem(knowledge, components, { ionicStrengthMolPerL, temperatureC }, { solids });
    const t = Float64Array.from(system.components, (c) => (c === "H+" ? 0 : there(totals.get(c) ?? 0)));
    return { system, result: solveEquilibrium(system.problem, t, { fixedLnFree: protonFixed(system, step.pH) }) };
  };
  let ionicStrength = 0.1;
  let solved = solveAt(ionicStrength);
  for (let round = 0; round < ROUNDS; round++) {
    const found = ionicStrengthOf(solved.system, solved.result, there(inert.cz2), there(inert.cz)).molPerL;
    if (Math.abs(found - ionicStrength) <= IONIC_STRENGTH_AGREES * ionicStrength) break;
    ionicStrength = found;
    solved = solveAt(ionicStrength);
  }
  const { system, result } = solved;
  const deposits = system.solids.flatMap((solid, i) => {
    const molPerL = (result.solidsMolPerL[i] ?? 0) * volumeRatio;
    return molPerL > 0 ? [{ solid: solid.id, components: solid.components, molPerL }] : [];
  });
  const dissolved: Amounts = new Map(totals);
  for (const id of Object.keys(step.with)) dissolved.set(id, sample.get(id) ?? 0);
  for (const deposit of deposits)
    for (const [id, n] of Object.entries(deposit.components))
      if (n > 0 && dissolved.has(id)) dissolved.set(id, Math.max(0, dissolved.get(id)! - n * deposit.molPerL));
  for (const [id, molPerL] of dissolved) if (molPerL <= 0) dissolved.delete(id);
  return { dissolved, deposits };
}
