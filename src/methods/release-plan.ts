import type { AgentRecord, BufferRecord, ComponentId, Knowledge, ReleaseRecord } from "../constants/knowledge.ts";
import { boundAtBackEndPoint } from "./excess.ts";
import { benchAmount } from "./masks.ts";
import { evaluateRelease } from "./release.ts";
import { beforeRelease, boundByRecord, releaseRecordOf } from "./release-vessels.ts";
import type { Shelf } from "./shelf.ts";
import { basePlan, forbidden, type Make, type Skeleton } from "./skeletons.ts";
import { benchPH } from "./dye-uses.ts";
import { bufferAmount, buffersFor, strengthFor } from "./buffers.ts";
import { vesselSample } from "./solution.ts";
import { stageModel } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";

/** How the purpose of an agent begins that goes in only then. */
export const AFTER_FIRST_END_POINT = "after the first end point";

/** Releases that free all of these ions, as the records have them: titrant in excess, first end point, agent, second end point. */
export function releaseSkeletons(make: Make): Skeleton[] {
  const { knowledge, shelf, determines, field } = make;
  if (field.analogous) return [];
  const out: Skeleton[] = [];
  for (const record of knowledge.releases) {
    const frees = determines.every((ion) => record.ions.some((i) => i.ion === ion && i.freed));
    if (!frees || ![record.agent, ...record.beside].every(shelf)) continue;
    for (const titrant of record.titrants.filter((t) => field.titrants.includes(t) && shelf(t)))
      for (const back of record.backTitrants.filter((b) => shelf(b) && !determines.includes(b)))
        for (const dye of record.indicators.filter((d) => shelf(d) && (field.dyes?.has(d) ?? true))) {
          const plan = releasePlan(make, record, titrant, back, dye);
          if (plan !== null && !forbidden(make.task, plan.preparation))
            out.push({
              plan,
              use: "published",
              useBasis: record.provenance.basis === "read" ? "read" : "memory",
              window: record.pH,
            });
        }
  }
  return out;
}

function releasePlan(
  make: Make,
  record: ReleaseRecord,
  titrant: string,
  back: ComponentId,
  dye: string,
): StagePlan | null {
  const { task, knowledge, shelf, determines } = make;
  const indicator = knowledge.indicators.get(dye);
  const buffer = bufferOf(record, knowledge, shelf);
  if (!indicator || !buffer) return null;
  const pH = benchPH([Math.max(record.pH[0], buffer.workingPH[0]), Math.min(record.pH[1], buffer.workingPH[1])]);
  const base = basePlan(make, titrant, indicator, pH, buffer, null);
  const amountMol = vesselSample(task)
    .filter((c) => determines.includes(c.component))
    .reduce((s, c) => s + (c.inVesselMolPerL * task.portion.titrationVolumeML) / 1000, 0);
  const strengths = knowledge.metalTitrants.get(back)?.usualMolPerL ?? [0.01];
  const agents = [record.agent, ...record.beside];
  return {
    ...base,
    mode: "displacement",
    buffer: { id: buffer.id, molPerL: bufferAmount(buffer, pH) },
    backTitrant: { id: back, molPerL: strengthFor(amountMol, strengths, task.laboratory.buretteML) },
    auxiliary: agents.map((id) => ({
      id,
      molPerL: knowledge.agents.get(id)?.usualMolPerL ?? 0.05,
      purpose: `${AFTER_FIRST_END_POINT}: sets free the titrant of ${determines.join(", ")}`,
    })),
    preparation: [
      "excess-titrant-first",
      ...record.before,
      ...(record.step === null ? [] : [record.step]),
      ...record.after,
    ],
    release: { agent: record.agent, molPerL: knowledge.agents.get(record.agent)?.usualMolPerL ?? 0.05 },
    chelate: null,
  };
}

/** The first buffer that the record names, is on the shelf and works somewhere in the record's range. */
function bufferOf(record: ReleaseRecord, knowledge: Knowledge, shelf: Shelf): BufferRecord | undefined {
  const middle = (record.pH[0] + record.pH[1]) / 2;
  return buffersFor(middle, knowledge, (id) => shelf(id) && record.buffers.includes(id), new Set())[0];
}

/** Part of everything bound, and of the analyte, by which the titrant of a release exceeds it: the first reading is not used. */
const EXCESS_OVER_ALL = 0.06;
const EXCESS_OVER_ANALYTE = 0.25;

/** Titrant for a release, mol/L: all that binds before the agent, and a small excess that the first reading takes away. */
export function releaseExcess(task: Task, plan: StagePlan, knowledge: Knowledge): number {
  const sample = vesselSample(task, plan).filter(
    (c) => knowledge.components.get(c.component)?.kind === "metal" && !plan.removed.includes(c.component),
  );
  const everything = sample.reduce((s, c) => s + c.inVesselMolPerL, 0);
  const analyte = sample
    .filter((c) => plan.determines.includes(c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  const early = beforeRelease(plan, releaseRecordOf(plan, knowledge));
  const model = stageModel(task, { ...early, excessTitrantMolPerL: 2 * everything }, knowledge);
  const whole = boundByRecord(task, plan, model, knowledge);
  const rest = { ...task, matrix: task.matrix.filter((c) => !whole.has(c.component)) };
  const others = { ...early, determines: early.determines.filter((ion) => !whole.has(ion)) };
  const bound =
    boundAtBackEndPoint(
      { ...rest, analytes: task.analytes.filter((c) => !whole.has(c.component)) },
      others,
      knowledge,
    ) + [...whole.values()].reduce((s, v) => s + v, 0);
  // Titrant that an earlier titration left is bound to its own metals already.
  const there = plan.carried?.titrantMolPerL ?? 0;
  return Number(Math.max(0, bound * (1 + EXCESS_OVER_ALL) + EXCESS_OVER_ANALYTE * analyte - there).toPrecision(3));
}

/** The amount usual for this agent with the ions determined, where their record says so, else the agent's own. */
function usualAmount(plan: StagePlan, agent: AgentRecord, knowledge: Knowledge): number {
  const rows = knowledge.masking.filter(
    (r) => r.agent === agent.id && plan.determines.includes(r.ion) && r.effect === "masks" && r.usualMolPerL !== null,
  );
  return rows.length > 0 ? Math.max(...rows.map((r) => r.usualMolPerL!)) : agent.usualMolPerL;
}

/** The plan with another amount of its release agent. */
function withAgent(plan: StagePlan, molPerL: number): StagePlan {
  const release = plan.release;
  if (release === null) return plan;
  return {
    ...plan,
    release: { ...release, molPerL },
    auxiliary: plan.auxiliary.map((a) => (a.id === release.agent ? { ...a, molPerL } : a)),
  };
}

/** Ligands of an agent that one metal ion takes at the most. */
const LIGANDS_PER_METAL = 6;
/** The exchange is driven by mass action: a bench takes no less than this part of the usual amount (common practice). */
const LEAST_OF_USUAL = 0.25;
const AMOUNTS_TRIED = 6;
/** A bias below this part of the requirement is not worth more of the agent. */
const GOOD_ENOUGH = 0.1;

/**
 * The amount of the release agent: rising from what it needs for all it frees, until it frees the analyte and before it frees the
 * rest (fluoride of 0.4 mol/L takes a fifth of the iron from its chelate); the smallest that is good enough, else the best.
 */
export function withReleaseAmount(task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan {
  const agent = knowledge.agents.get(plan.release?.agent ?? "");
  const record = releaseRecordOf(plan, knowledge);
  if (!agent || !record) return plan;
  const freed = vesselSample(task, plan)
    .filter((c) => record.ions.some((i) => i.freed && i.ion === c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  const usual = usualAmount(plan, agent, knowledge);
  const need = benchAmount(LIGANDS_PER_METAL * freed);
  let best = plan;
  let least = Number.POSITIVE_INFINITY;
  let amount = Math.min(usual, Math.max(need, benchAmount(LEAST_OF_USUAL * usual)));
  for (let i = 0; i < AMOUNTS_TRIED && amount <= agent.usualMaxMolPerL * 1.001; i++) {
    const tried = withAgent(plan, amount);
    const evaluation = evaluateRelease(task, tried, knowledge);
    const expanded =
      evaluation.status === "failed" ? Number.POSITIVE_INFINITY : stageBudget(task, evaluation, knowledge).expanded;
    if (expanded < least) {
      least = expanded;
      best = tried;
    }
    if (
      evaluation.status !== "failed" &&
      100 * Math.abs(evaluation.biasFraction) <= GOOD_ENOUGH * task.requirementPercent
    )
      return tried;
    const next = benchAmount(2 * amount);
    if (amount < agent.usualMaxMolPerL && next > agent.usualMaxMolPerL) amount = agent.usualMaxMolPerL;
    else amount = next;
  }
  return best;
}
