import type { Knowledge, MaskingRecord } from "../constants/knowledge.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { Shelf } from "./shelf.ts";
import { withAuxiliary } from "./skeletons.ts";
import { withoutLittleDye } from "./little-dye.ts";
import { stageModel, type StageModel } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/** Share of the analyte that may lie as a redissolving deposit when the titration starts. */
const DEPOSIT_BORNE_FRACTION = 0.3;

/** The vessel before the titrant: the same for every back titrant, reading and dye of one pH. */
const beforeTitrant = (task: Task, plan: StagePlan): StagePlan => ({
  ...withoutLittleDye(task, plan),
  mode: "direct",
  titrant: { ...plan.titrant, molPerL: 1 },
  backTitrant: null,
  excessTitrantMolPerL: 0,
  release: null,
});

const auxiliaries = new WeakMap<Knowledge, readonly MaskingRecord[]>();

/** Rows of agents that keep an ion dissolved as a complex. */
function auxiliaryRows(knowledge: Knowledge): readonly MaskingRecord[] {
  let rows = auxiliaries.get(knowledge);
  if (rows === undefined) {
    rows = knowledge.masking.filter((r) => r.effect === "auxiliary" && r.via === "complexation");
    auxiliaries.set(knowledge, rows);
  }
  return rows;
}

/** Whether the analyte lies as a precipitate before the titrant comes. A deposit that redissolves as the titrant takes the rest is no loss while it is the smaller part. */
export function analyteLost(model: StageModel): boolean {
  const { determines } = model.plan;
  const start = model.at(0);
  const deposited = model.system.solidRows.reduce((sum, solid, i) => {
    const ions = determines.reduce((n, ion) => n + (solid.components[ion] ?? 0), 0);
    return sum + ions * (start.result.solidsMolPerL[i] ?? 0);
  }, 0);
  const gone = model.held
    .filter((h) => h.why === "precipitated" && determines.includes(h.component))
    .reduce((s, h) => s + h.molPerL, 0);
  const present = determines.reduce((s, ion) => s + (model.solution.fromSample.get(ion) ?? 0), 0);
  return gone > 1e-3 * present || deposited > DEPOSIT_BORNE_FRACTION * present;
}

/** Adds what keeps the analyte dissolved where it would precipitate before the titrant reaches it. */
export function soluble(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  shelf: Shelf,
): { plan: StagePlan; bare: StageEvaluation; precipitates: boolean } {
  const bare = evaluate(task, plan, knowledge);
  // Whether the metal of a way round stays dissolved, the way itself has settled.
  if (plan.detour) return { plan, bare, precipitates: false };
  // In a back titration the titrant goes in first; what would precipitate without it does not.
  if (plan.backTitrant !== null)
    return { plan, bare, precipitates: analyteLost(stageModel(task, beforeTitrant(task, plan), knowledge)) };
  if (!analyteLost(bare.model)) return { plan, bare, precipitates: false };
  for (const agent of knowledge.agents.values()) {
    if (!shelf(agent.id)) continue;
    const keeps = auxiliaryRows(knowledge).some(
      (r) =>
        r.agent === agent.id && plan.determines.includes(r.ion) && plan.pH >= r.pH[0] - 0.3 && plan.pH <= r.pH[1] + 0.3,
    );
    if (!keeps) continue;
    const kept = withAuxiliary(plan, knowledge, agent.id, `keeps ${plan.determines.join(", ")} dissolved`);
    const evaluation = evaluate(task, kept, knowledge);
    if (!analyteLost(evaluation.model)) return { plan: kept, bare: evaluation, precipitates: true };
  }
  return { plan, bare, precipitates: true };
}
