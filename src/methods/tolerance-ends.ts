import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { blockingLevel } from "./blocking.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { lyingAsHydroxideMolPerL } from "./hydroxide-lying.ts";
import { maskAccounts } from "./mask-account.ts";
import { pairHasComplex } from "./masks.ts";
import { conversionProduct } from "./solution.ts";
import type { MaskingStep, StagePlan, Task } from "./types.ts";

/** What ends the room that a method leaves a component; "none": nothing does up to the highest level looked at. */
export type LimitEnd =
  | "requirement"
  | "blocking"
  | "masking-used-up"
  | "empirical-record"
  | "precipitation"
  | "fails"
  | "none";

/** Up to where masks hold by what is on record and by their amount, mol/L in the sample, and which of the two comes first. */
export interface MaskCeiling {
  readonly molPerL: number; // Infinity where the equilibrium decides
  readonly endsBy: LimitEnd;
}

/** Ligands that a masked metal ion takes at the least, and reductant that an ion takes to be converted. */
const LIGANDS_PER_ION = 2;
const REDUCTANT_PER_ION = 1;

/** How much of an agent one ion takes where no equilibrium says it; a reductant that then holds the product takes part twice. */
function agentPerIon(step: MaskingStep, component: ComponentId, knowledge: Knowledge): number {
  if (step.basis === "empirical") return LIGANDS_PER_ION;
  const product = conversionProduct(knowledge, step.agent, component);
  const ligand = knowledge.agents.get(step.agent)?.component ?? null;
  const holds = product !== null && ligand !== null && pairHasComplex(knowledge, product, ligand);
  return REDUCTANT_PER_ION + (holds ? LIGANDS_PER_ION : 0);
}

/**
 * The level at which a mask that no equilibrium judges is used up, or any mask leaves a record that counts. It does where no constants stand for
 * the mask, and where constants cannot tell: how fast and how dark a precipitate forms, and what keeps a mask from being a whole one.
 * @param presentMolPerL a sample beyond the record already has no limit by it, unless nothing but the record stands for the mask
 */
export function maskCeiling(
  task: Task,
  plans: readonly StagePlan[],
  component: ComponentId,
  presentMolPerL: number,
  knowledge: Knowledge,
): MaskCeiling {
  const perSample = task.portion.titrationVolumeML / task.portion.volumeML;
  let ceiling: MaskCeiling = { molPerL: Number.POSITIVE_INFINITY, endsBy: "none" };
  const lower = (inVesselMolPerL: number, endsBy: LimitEnd): void => {
    const molPerL = inVesselMolPerL * perSample;
    if (molPerL < ceiling.molPerL) ceiling = { molPerL, endsBy };
  };
  for (const plan of plans)
    for (const step of plan.masking) {
      const { agent, masks, basis, via, molPerL } = step;
      if (agent === "hydroxide" || !masks.includes(component)) continue;
      if (basis !== "equilibrium") lower(molPerL / agentPerIon(step, component, knowledge), "masking-used-up");
      for (const record of knowledge.masking) {
        if (record.agent !== agent || record.ion !== component || record.upToMolPerL === null) continue;
        const counts = basis !== "equilibrium" || via === "precipitation" || record.effect === "partial";
        const left = basis !== "empirical" && presentMolPerL > record.upToMolPerL * perSample;
        if (counts && !left) lower(record.upToMolPerL, "empirical-record");
      }
    }
  return ceiling;
}

/** The same for masks that rest on a record alone: what the ranking asks of a richer sample. */
export function empiricalCeiling(
  task: Task,
  plans: readonly StagePlan[],
  component: ComponentId,
  knowledge: Knowledge,
): number {
  const onRecord = plans.map((p) => ({ ...p, masking: p.masking.filter((m) => m.basis === "empirical") }));
  return maskCeiling(task, onRecord, component, 0, knowledge).molPerL;
}

/** Share of an agent that metals hold beyond which it counts as used up: the rest no longer holds what comes. */
const USED_UP_FRACTION = 0.8;

/** From this ratio to the analyte the flocs of a hydroxide take dye and analyte with them (as when a method is searched for). */
const FLOCS_RATIO = 0.02;
/** From here on the alkali is itself the mask, and what it throws down is meant to lie. */
const ALKALI_FROM_PH = 11.5;

/** Whether the component lies as flocs of its hydroxide in a direct titration. */
export function liesAsFlocs(evaluation: StageEvaluation, component: ComponentId, knowledge: Knowledge): boolean {
  const { model, presentMol } = evaluation;
  const { plan } = model;
  if (plan.backTitrant !== null || plan.pH >= ALKALI_FROM_PH || component === "Mg2+") return false;
  const present = model.solution.fromSample.get(component) ?? 0;
  if (!(present > (FLOCS_RATIO * presentMol) / model.volumeL)) return false;
  return lyingAsHydroxideMolPerL(model, model.at(0), component, knowledge) > 0.5 * present;
}

/** Part of what is determined that may lie in a solid with the component before the solid is what breaks the method. */
const LOST_FRACTION = 1e-3;

/** Whether the component throws down what is determined. */
function throwsDown({ model, presentMol }: StageEvaluation, component: ComponentId, knowledge: Knowledge): boolean {
  const start = model.at(0);
  const counted = model.plan.determines;
  const within = (solid: string): boolean =>
    (knowledge.solids.find((s) => s.id === solid)?.components[component] ?? 0) > 0;
  const gone = model.held
    .filter((h) => h.why === "precipitated" && counted.includes(h.component) && within(h.by))
    .reduce((sum, h) => sum + h.molPerL, 0);
  const lying = model.system.solids.reduce((sum, solid, i) => {
    const ions = counted.reduce((n, ion) => n + (solid.components[ion] ?? 0), 0);
    return within(solid.id) ? sum + ions * (start.result.solidsMolPerL[i] ?? 0) : sum;
  }, gone);
  return lying * model.volumeL > LOST_FRACTION * presentMol;
}

/** Says, from the evaluations at a level that is just too high, what breaks there. */
export function whatBreaks(
  evaluations: readonly StageEvaluation[],
  component: ComponentId,
  knowledge: Knowledge,
): LimitEnd {
  const usedUp = evaluations.some((e) =>
    maskAccounts(
      e,
      e.model.plan.masking.filter((m) => m.masks.includes(component)),
      knowledge,
    ).some((a) => (a.usedFraction ?? 0) > USED_UP_FRACTION),
  );
  if (usedUp) return "masking-used-up";
  if (evaluations.some((e) => e.blockedBy.includes(component) || holdsDye(e, component))) return "blocking";
  if (evaluations.some((e) => throwsDown(e, component, knowledge) || liesAsFlocs(e, component, knowledge)))
    return "precipitation";
  if (evaluations.some((e) => e.blockedBy.length > 0)) return "blocking";
  return evaluations.some((e) => e.status === "failed") ? "fails" : "requirement";
}

/**
 * Whether the component keeps the dye: a tenth of it 5 % past equivalence where no end point is found, or more of it at the end point
 * than everything else together.
 */
function holdsDye({ status, model, equivalenceML, endPointML }: StageEvaluation, component: ComponentId): boolean {
  if (model.indicator === null || component === model.burette.component) return false;
  const failed = status === "failed";
  const state = model.at((failed ? 1.05 * equivalenceML : endPointML) / 1000);
  const own = state.dyeRatioOf(component);
  return failed ? own / (1 + own) >= 0.1 : own > state.dyeRatio / 2;
}

/** Levels at which a component may be expected to spoil the dye by what is on record, or to count as flocs, mol/L in the sample. */
export function likelyJumps(
  task: Task,
  evaluations: readonly StageEvaluation[],
  component: ComponentId,
  knowledge: Knowledge,
): number[] {
  const perSample = task.portion.titrationVolumeML / task.portion.volumeML;
  return evaluations.flatMap(({ model, presentMol }) => {
    const { indicator, pH } = model.plan;
    const record = indicator && knowledge.indicators.get(indicator.id);
    const blocking = record && blockingLevel(record, component, pH, indicator.molPerL);
    const flocs = (FLOCS_RATIO * presentMol) / model.volumeL;
    const metal = knowledge.components.get(component)?.kind === "metal";
    return [...(blocking ? [blocking * perSample] : []), ...(metal ? [flocs * perSample] : [])];
  });
}
