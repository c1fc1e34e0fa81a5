import { formsInTitration } from "../chemistry/forming-solids.ts";
import { ionicStrengthOf } from "../chemistry/ionic-strength.ts";
import { prepareSystem } from "../chemistry/prepare-system.ts";
import type { PreparedSystem } from "../chemistry/types.ts";
import type {
  ComponentId,
  IndicatorRecord,
  Knowledge,
  SolidDefinition,
  SpeciesDefinition,
} from "../constants/knowledge.ts";
import { vesselSolver, type VesselSolution } from "./vessel-solver.ts";
import { SolvedVessel, type Vessel, type VesselState } from "./vessel-state.ts";
import { pickDyeBasis, type DyeBasis } from "./dye-basis.ts";
import { inertIonsOf, saltSteps } from "./inert-ions.ts";
import { keepStart, nearStart, startFrom, type NearStart } from "./near-start.ts";
import { stageSolution, type HeldAmount, type StageSolution } from "./solution.ts";
import { staysBound } from "./saturation.ts";
import { agentComponents, classifyRows } from "./stage-rows.ts";
import { heldByWay, solidsOfDetour } from "./way-round.ts";
import { countedIn, type StagePlan, type Task } from "./types.ts";

export type { VesselState } from "./vessel-state.ts";

/** What the burette delivers, and everything else that stays the same while it runs. */
export interface StageModel {
  readonly plan: StagePlan;
  readonly solution: StageSolution;
  readonly system: PreparedSystem;
  readonly volumeL: number;
  readonly indicator: IndicatorRecord | null;
  readonly dyeBasis: DyeBasis;
  readonly ionicStrengthMolPerL: number;
  readonly held: readonly HeldAmount[];
  /** Solids that stand in equilibrium during the titration. */
  readonly solids: readonly string[];
  /** Burette strength, mol/L, and which component it brings. */
  readonly burette: { readonly component: ComponentId; readonly molPerL: number };
  /** Solves the vessel after `volumeL` from the burette. */
  readonly at: (volumeL: number) => VesselState;
  readonly metals: readonly ComponentId[];
  /** Metals that do not react with the titrant in the time of the titration. */
  readonly inert: ReadonlySet<ComponentId>;
  /** What the states of the vessel share, for who wants to solve it with other constants and amounts. */
  readonly vessel: Vessel;
  /** The same species with every solid that could have formed before the titration. */
  readonly forming: PreparedSystem;
}

const MIN_IONIC_STRENGTH_MOL_PER_L = 1e-4; // pure water never stands in a titration vessel
const IONIC_STRENGTH_AGREES = 0.03; // relative; a shift below this moves no log K by more than 0.005

/** What of a model does not stand in its plan. */
interface ModelOptions {
  /** Metals that do not react with the titrant in the time and at the temperature of the titration. */
  readonly inert?: ReadonlySet<ComponentId>;
  /** Complexes that formed before and do not exchange any more, mol/L of the vessel. */
  readonly frozen?: ReadonlyMap<ComponentId, number>;
}

/** How many states of a vessel are kept for who asks again: the end point, and the way to it. */
const STATES_KEPT = 12;
const models = new WeakMap<Knowledge, WeakMap<Task, Map<string, StageModel>>>();

/**
 * The model of one titration, made once for each plan of a task: the way to an excess, a release and the titration itself come back to
 * the same vessel. Forgotten with the task.
 */
export function stageModel(task: Task, plan: StagePlan, knowledge: Knowledge, options: ModelOptions = {}): StageModel {
  let ofKnowledge = models.get(knowledge);
  if (ofKnowledge === undefined) models.set(knowledge, (ofKnowledge = new WeakMap<Task, Map<string, StageModel>>()));
  let ofTask = ofKnowledge.get(task);
  if (ofTask === undefined) ofKnowledge.set(task, (ofTask = new Map<string, StageModel>()));
  const key = JSON.stringify([plan, [...(options.inert ?? [])].sort(), [...(options.frozen ?? [])]]);
  let model = ofTask.get(key);
  if (model === undefined) ofTask.set(key, (model = builtModel(task, plan, knowledge, options)));
  return model;
}

/**
 * Builds the model of one titration: composition, constants at its own ionic strength, and a solver for any burette volume.
 */
function builtModel(task: Task, plan: StagePlan, knowledge: Knowledge, options: ModelOptions): StageModel {
  const solution = stageSolution(task, plan, knowledge);
  const inert = options.inert ?? new Set<ComponentId>();
  const frozen = options.frozen ?? new Map<ComponentId, number>();
  const indicator = plan.indicator ? (knowledge.indicators.get(plan.indicator.id) ?? null) : null;
  const totals = new Map(solution.totals);
  const burette = plan.backTitrant
    ? { component: plan.backTitrant.id, molPerL: plan.backTitrant.molPerL }
    : { component: plan.titrant.id, molPerL: plan.titrant.molPerL };
  if (!totals.has(plan.titrant.id)) totals.set(plan.titrant.id, 0);
  totals.set(
    plan.titrant.id,
    totals.get(plan.titrant.id)! +
      (solution.way?.titrantMolPerL ?? 0) +
      plan.excessTitrantMolPerL +
      (plan.carried?.titrantMolPerL ?? 0),
  );
  if (!totals.has(burette.component)) totals.set(burette.component, 0);
  const held: HeldAmount[] = [...solution.held];
  // Complexes that formed before and do not exchange any more leave the equilibrium together with their titrant.
  for (const [metal, molPerL] of frozen) {
    const amount = Math.min(molPerL, totals.get(metal) ?? 0);
    totals.set(metal, (totals.get(metal) ?? 0) - amount);
    totals.set(plan.titrant.id, Math.max(0, totals.get(plan.titrant.id)! - amount));
    held.push({ component: metal, molPerL: amount, why: "kinetically-inert", by: plan.titrant.id });
  }
  const metals = new Set([...totals.keys()].filter((c) => knowledge.components.get(c)?.kind === "metal"));
  const dyeBasis: DyeBasis =
    indicator && plan.indicator
      ? pickDyeBasis(knowledge, indicator, plan.pH, metals)
      : { byConstants: new Set(), byTable: new Map(), dye: null };
  const dye = dyeBasis.dye;
  if (dye && plan.indicator) totals.set(dye, (totals.get(dye) ?? 0) + plan.indicator.molPerL);

  const components = [...totals.keys()].filter((c) => {
    const kind = knowledge.components.get(c)?.kind;
    return kind !== undefined && kind !== "inert" && kind !== "proton";
  });
  const titrant = plan.titrant.id;
  // A doubtful constant may serve for the metal the dye is used for, but does not prove that a bystander holds the dye.
  const watched = new Set([
    ...countedIn(plan),
    ...(plan.backTitrant ? [plan.backTitrant.id] : []),
    ...(plan.chelate ? [plan.chelate.metal] : []),
  ]);
  const exclude = (species: SpeciesDefinition): boolean => {
    const names = Object.keys(species.components);
    if ((species.components[titrant] ?? 0) > 0 && names.some((c) => inert.has(c))) return true;
    if (dye !== null && (species.components[dye] ?? 0) > 0)
      return names.some(
        (c) => metals.has(c) && (!dyeBasis.byConstants.has(c) || (!watched.has(c) && isDoubtful(knowledge, species))),
      );
    return false;
  };
  const maskedSolids = new Set(plan.masking.filter((m) => m.via === "precipitation").flatMap((m) => m.masks));
  const ofDetour = solidsOfDetour(plan, knowledge);
  const wantsSolid = (solid: SolidDefinition): boolean =>
    (formsInTitration(solid, "at-once") && !staysBound(solid, plan)) ||
    ofDetour.has(solid.id) ||
    Object.keys(solid.components).some((c) => maskedSolids.has(c));

  const speciesKey = [titrant, [...inert].sort(), dye ?? "", [...dyeBasis.byConstants].sort(), [...watched].sort()];
  const prepare = (
    ionicStrengthMolPerL: number,
    solids: (s: SolidDefinition) => boolean,
    solidsKey: readonly unknown[],
  ): PreparedSystem =>
    prepareSystem(
      knowledge,
      components,
      { ionicStrengthMolPerL, temperatureC: task.temperatureC },
      { solids, exclude, key: [...speciesKey, ...solidsKey].join(" ") },
    );
  const wantedKey = ["wanted", [...maskedSolids].sort(), plan.detour?.id ?? "", plan.carried?.metals ?? ""];
  const volumeL = solution.volumeL;
  const columns = (system: PreparedSystem): Float64Array => {
    const t = new Float64Array(system.components.length);
    system.components.forEach((c, i) => (t[i] = c === "H+" ? 0 : (totals.get(c) ?? 0)));
    return t;
  };
  const atStart = (system: PreparedSystem, near: NearStart | null): VesselSolution =>
    vesselSolver(system, plan.pH, metals, near ?? nearStart(task, system))(columns(system));

  // Ionic strength of the vessel itself, half way: start from 0.1 mol/L and correct until it agrees.
  let ionicStrengthMolPerL = 0.1;
  let system = prepare(ionicStrengthMolPerL, wantsSolid, wantedKey);
  let first = atStart(system, null);
  const inertIons = inertIonsOf(totals, knowledge);
  const salt = saltSteps(task, knowledge);
  const dilution = task.portion.volumeML / 1000 / volumeL;
  const cz2 = inertIons.cz2 + dilution * salt.cz2;
  const cz = inertIons.cz + dilution * salt.cz;
  for (let round = 0; round < 4; round++) {
    const found = Math.max(MIN_IONIC_STRENGTH_MOL_PER_L, ionicStrengthOf(system, first, cz2, cz).molPerL);
    const agrees = Math.abs(found - ionicStrengthMolPerL) <= IONIC_STRENGTH_AGREES * ionicStrengthMolPerL;
    // The last finding counts also where it agrees: else a hair more salt could shift the constants by the whole allowance.
    ionicStrengthMolPerL = found;
    if (agrees) break;
    system = prepare(ionicStrengthMolPerL, wantsSolid, wantedKey);
    first = atStart(system, first.ok ? startFrom(system, first, columns(system)) : null);
  }
  if (first.ok) keepStart(task, system, startFrom(system, first, columns(system)));
  // Solids that formed and do not redissolve in time are out of the game; those that do stay in equilibrium.
  const stays = new Set<string>();
  system.solidRows.forEach((solid, i) => {
    const amount = first.solidsMolPerL[i] ?? 0;
    if (amount <= 0) return;
    // A precipitate that was collected to be dissolved goes on dissolving while its metal is taken up.
    if (ofDetour.has(solid.id) || knowledge.solids.find((s) => s.id === solid.id)?.redissolvesWhileTitrated) {
      stays.add(solid.id);
      return;
    }
    for (const [component, count] of Object.entries(solid.components)) {
      if (component === "H+" || count <= 0) continue;
      const lost = Math.min(count * amount, totals.get(component) ?? 0);
      totals.set(component, (totals.get(component) ?? 0) - lost);
      if (metals.has(component)) held.push({ component, molPerL: lost, why: "precipitated", by: solid.id });
    }
  });
  const lying = system.solidRows.flatMap((solid, i) =>
    stays.has(solid.id) && first.solidsMolPerL[i]! > 0 ? [solid.id] : [],
  );
  const forming = system;
  if (forming.problem.solids.n > 0 || forming.conditions.ionicStrengthMolPerL !== ionicStrengthMolPerL)
    system = prepare(ionicStrengthMolPerL, (s) => stays.has(s.id), ["staying", [...stays].sort()]);
  const base = columns(system);
  const kinds = { titrant, dye, metals, way: heldByWay(plan, knowledge), agents: agentComponents(plan, knowledge) };
  const vessel = {
    system,
    rows: classifyRows(system, kinds, plan.detour ? `${plan.detour.id} ${plan.detour.metal}` : ""),
    volumeL,
    base,
    titrant,
    burette,
    metals: [...metals],
    dyeBasis,
  };
  const solve = vesselSolver(system, plan.pH, metals, first.ok ? { lnFree: first.lnFree, solids: lying } : null);
  const buretteColumn = system.index.get(burette.component)!;
  let start: VesselState | null = null;
  const recent: VesselState[] = [];
  const at = (fromBuretteL: number): VesselState => {
    if (fromBuretteL === 0 && start !== null) return start;
    for (const known of recent) if (known.volumeFromBuretteL === fromBuretteL) return known;
    const dilution = volumeL / (volumeL + fromBuretteL);
    const t = base.map((v) => v * dilution);
    t[buretteColumn] = t[buretteColumn]! + (burette.molPerL * fromBuretteL) / (volumeL + fromBuretteL);
    const state = new SolvedVessel(vessel, fromBuretteL, solve(t));
    if (fromBuretteL === 0) start = state;
    else if (recent.push(state) > STATES_KEPT) recent.shift();
    return state;
  };
  return {
    plan,
    solution,
    system,
    volumeL,
    indicator,
    dyeBasis,
    ionicStrengthMolPerL,
    held,
    solids: [...stays],
    burette,
    at,
    metals: [...metals],
    inert,
    vessel,
    forming,
  };
}

/** Whether every record of some step of the species' chain is doubtful. */
function isDoubtful(knowledge: Knowledge, species: SpeciesDefinition): boolean {
  return species.chain.some(
    ({ reaction }) => knowledge.reactions.get(reaction)?.records.every((r) => r.doubtful) ?? false,
  );
}
