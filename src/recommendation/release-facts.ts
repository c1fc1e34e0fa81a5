import type { Knowledge } from "../constants/knowledge.ts";
import type { FactValue } from "../inference/types.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { releaseRecordOf } from "../methods/release-vessels.ts";
import { vesselSample } from "../methods/solution.ts";
import type { Task } from "../methods/types.ts";

/** Share of a bystander's titrant that counts as freed, and level against the analyte from which a bystander is worth counting. */
const FREED_FRACTION = 0.02;
const NOTICEABLE_RATIO = 0.05;
/** From this log K' on a metal beside the analyte would be counted whole by a plain back titration. */
const TITRATES_FROM_LOG10_K = 6;

/** What the rules see of a release: its agent, what it rests on, what else it frees and what it leaves bound. */
export function releaseFacts(
  task: Task,
  { plan, evaluation }: DevelopedStage,
  knowledge: Knowledge,
): Record<string, FactValue | null> {
  const { release } = plan;
  const none = {
    releaseAgent: "none",
    releaseBasis: "none",
    releaseMolPerL: 0,
    alsoReleased: [],
    leftBound: [],
    leftBoundCount: 0,
    ratioToReleaseLimit: 0,
  };
  if (release === null) return none;
  const record = releaseRecordOf(plan, knowledge);
  const analyteMolPerL = evaluation.presentMol / evaluation.model.volumeL;
  const beside = vesselSample(task, plan).filter(
    (c) =>
      !plan.determines.includes(c.component) &&
      !plan.removed.includes(c.component) &&
      c.inVesselMolPerL > NOTICEABLE_RATIO * analyteMolPerL &&
      evaluation.titrated.has(c.component),
  );
  const share = (ion: string): number => Math.abs(evaluation.titrated.get(ion) ?? 0);
  const binds = (ion: string): boolean =>
    ion === plan.backTitrant?.id || (evaluation.log10ConditionalK.get(ion) ?? 0) >= TITRATES_FROM_LOG10_K;
  const leftBound = beside
    .filter((c) => share(c.component) <= FREED_FRACTION && binds(c.component))
    .map((c) => c.component);
  const byRecord = plan.determines.some((ion) =>
    record?.ions.some((i) => i.ion === ion && i.freed && i.judgedBy === "record"),
  );
  return {
    releaseAgent: release.agent,
    releaseBasis: byRecord ? "record" : "equilibrium",
    releaseMolPerL: release.molPerL,
    alsoReleased: beside.filter((c) => share(c.component) > FREED_FRACTION).map((c) => c.component),
    leftBound,
    leftBoundCount: leftBound.length,
    ratioToReleaseLimit: record?.upTo ? analyteMolPerL / record.upTo.molPerL : 0,
  };
}
