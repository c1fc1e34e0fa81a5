import type { ComponentId, Knowledge, ReleaseRecord } from "../constants/knowledge.ts";
import { frozenComplexes } from "./frozen.ts";
import { inertMetals, metalKinetics } from "./kinetics.ts";
import { pairHasConstants, rowsFor } from "./masks.ts";
import { vesselSample } from "./solution.ts";
import { stageModel, type StageModel, type VesselState } from "./stage-model.ts";
import type { MaskingStep, StagePlan, Task } from "./types.ts";

/** The two vessels of a release: with the titrant in excess, and after the agent. */
export interface ReleaseVessels {
  readonly before: StageModel;
  /** Built at the first end point, whose slow complexes it may still hold. */
  readonly after: (firstEndPoint: VesselState) => StageModel;
  readonly presentMol: number;
  readonly determines: readonly ComponentId[];
  /** Of each metal, mol in the vessel as the sample brought it. */
  readonly sampleMol: ReadonlyMap<ComponentId, number>;
}

const PH_SLACK = 0.5; // the record's range is a round figure
const isHot = (steps: readonly string[]): boolean => steps.includes("boil") || steps.includes("heat");

/** The record that a release plan follows; undefined where the knowledge base has none. */
export function releaseRecordOf(plan: StagePlan, knowledge: Knowledge): ReleaseRecord | undefined {
  const agent = plan.release?.agent;
  return knowledge.releases
    .filter(
      (r) =>
        r.agent === agent &&
        plan.determines.every((ion) => r.ions.some((i) => i.ion === ion && i.freed)) &&
        r.beside.every((id) => plan.auxiliary.some((a) => a.id === id)) &&
        plan.pH >= r.pH[0] - PH_SLACK &&
        plan.pH <= r.pH[1] + PH_SLACK,
    )
    .sort(
      (a, b) =>
        Number(b.backTitrants.includes(plan.backTitrant?.id ?? "")) -
        Number(a.backTitrants.includes(plan.backTitrant?.id ?? "")),
    )[0];
}

/** The plan up to the first end point: a back titration, the agent not yet in. */
export function beforeRelease(plan: StagePlan, record: ReleaseRecord | undefined): StagePlan {
  const later = new Set([plan.release?.agent, ...(record?.beside ?? [])]);
  return {
    ...plan,
    mode: "back",
    release: null,
    auxiliary: plan.auxiliary.filter((a) => !later.has(a.id)),
    preparation: ["excess-titrant-first", ...(record?.before ?? [])],
  };
}

/**
 * Metals that are freed although the model cannot follow it: those the record says so of, and those it does not name but the
 * agent is known to mask at this pH, where no constant says how far: a gap is not an absence.
 */
function freedWithoutConstants(
  plan: StagePlan,
  record: ReleaseRecord | undefined,
  metals: Iterable<ComponentId>,
  knowledge: Knowledge,
): ComponentId[] {
  const agent = knowledge.agents.get(plan.release?.agent ?? "");
  return [...metals].filter((ion) => {
    const named = record?.ions.find((i) => i.ion === ion);
    if (named) return named.freed && named.judgedBy === "record";
    if (!agent || ion === plan.backTitrant?.id) return false;
    return rowsFor(knowledge, agent.id, ion, plan.pH).some(
      (r) => (r.effect === "masks" || r.effect === "partial") && !pairHasConstants(knowledge, agent, ion, r.via),
    );
  });
}
const leftByRecord = (record: ReleaseRecord | undefined): ComponentId[] =>
  (record?.ions ?? []).filter((i) => !i.freed && i.judgedBy === "record").map((i) => i.ion);

/** Whether the model has a complex of this metal with the titrant. */
const titrantBinds = (model: StageModel, metal: ComponentId): boolean =>
  model.system.rows.some((s) => (s.components[metal] ?? 0) > 0 && (s.components[model.plan.titrant.id] ?? 0) > 0);

/**
 * Metals of the sample that the record says are bound whole: those for which the model has no constant with the titrant, and slow
 * ones whose complex is formed hot in acid before the pH is raised, where the record itself judges them. mol/L.
 */
export function boundByRecord(
  task: Task,
  plan: StagePlan,
  model: StageModel,
  knowledge: Knowledge,
): ReadonlyMap<ComponentId, number> {
  const record = releaseRecordOf(plan, knowledge);
  const named = new Map(record?.ions.map((i) => [i.ion, i.judgedBy]));
  const formedHot = (metal: ComponentId): boolean =>
    isHot(record?.before ?? []) &&
    named.get(metal) === "record" &&
    metalKinetics(knowledge, metal, plan.titrant.id).class !== "fast";
  const kept = new Set(model.solution.fromSample.keys());
  return new Map(
    vesselSample(task, plan)
      .filter(
        (c) =>
          named.has(c.component) &&
          kept.has(c.component) &&
          (formedHot(c.component) || !titrantBinds(model, c.component)),
      )
      .map((c) => [c.component, c.inVesselMolPerL]),
  );
}

/** Builds both vessels of a release from its plan. */
export function releaseVessels(task: Task, plan: StagePlan, knowledge: Knowledge): ReleaseVessels {
  const record = releaseRecordOf(plan, knowledge);
  const early = beforeRelease(plan, record);
  const sample = vesselSample(task, plan);
  const components = sample.map((c) => c.component);
  const inertIn = (hot: boolean): Set<ComponentId> => inertMetals(knowledge, components, plan.titrant.id, plan.pH, hot);
  const hotBefore = isHot(early.preparation);
  const bare = stageModel(task, early, knowledge);
  const whole = boundByRecord(task, plan, bare, knowledge);
  const frozen = new Map([...(frozenComplexes(task, early, knowledge) ?? []), ...whole]);
  const before = stageModel(task, early, knowledge, { inert: inertIn(hotBefore), frozen });
  const volumeL = before.volumeL;
  const sampleMol = new Map<ComponentId, number>();
  for (const c of sample)
    if (!plan.removed.includes(c.component) && knowledge.components.get(c.component)?.kind === "metal")
      sampleMol.set(c.component, c.inVesselMolPerL * volumeL);
  for (const { from, to } of before.solution.converted) {
    if (to !== null) sampleMol.set(to, (sampleMol.get(to) ?? 0) + (sampleMol.get(from) ?? 0));
    sampleMol.delete(from);
  }
  const after = (first: VesselState): StageModel => {
    const back = plan.backTitrant?.id;
    const masked = new Set(plan.masking.flatMap((m) => m.masks));
    const freed = freedWithoutConstants(plan, record, sampleMol.keys(), knowledge).filter((ion) => !masked.has(ion));
    const hotAfter = isHot(record?.after ?? []);
    const stays = new Map<ComponentId, number>();
    for (const [ion, molPerL] of frozen)
      if (!hotAfter || metalKinetics(knowledge, ion, plan.titrant.id).class === "inert" || whole.has(ion))
        stays.set(ion, molPerL);
    for (const ion of leftByRecord(record))
      if (ion !== back && !stays.has(ion) && sampleMol.has(ion))
        stays.set(ion, (frozen.get(ion) ?? 0) + first.boundToTitrant(ion) / first.dilution);
    for (const ion of freed) stays.delete(ion);
    return stageModel(task, { ...plan, masking: [...plan.masking, ...freeing(plan, freed)] }, knowledge, {
      inert: inertIn(hotBefore || hotAfter),
      frozen: stays,
    });
  };
  const presentMol = plan.determines.reduce((s, ion) => s + (sampleMol.get(ion) ?? 0), 0);
  return { before, after, presentMol, determines: plan.determines, sampleMol };
}

/** What the agent takes by its record leaves the equilibrium with it, and leaves its titrant behind. */
function freeing(plan: StagePlan, freed: readonly ComponentId[]): MaskingStep[] {
  if (freed.length === 0 || plan.release === null) return [];
  const { agent, molPerL } = plan.release;
  return [{ agent, masks: freed, via: "complexation", molPerL, basis: "empirical" }];
}
