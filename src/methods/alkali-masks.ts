import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { Shelf } from "./shelf.ts";
import type { MaskingStep, StagePlan } from "./types.ts";

/** A titration that has been worked out. */
interface Worked {
  readonly plan: StagePlan;
  readonly evaluation: StageEvaluation;
}

/** Share of a metal that must lie as hydroxide for the alkali to count as its mask. */
const PRECIPITATED_FRACTION = 0.5;
const PH_SLACK = 0.3;
/** From here on what the titrant does not take is the alkali's work, or an agent's. */
const ALKALI_FROM_PH = 11.5;
/** Titrated share below which a metal counts as kept out. */
const QUIET = 0.5;

/** Metals of the matrix that lie as hydroxide while the analyte is titrated, for which the alkali is on record as a mask. */
function heldByAlkali(stage: Worked, knowledge: Knowledge): ComponentId[] {
  const { model } = stage.evaluation;
  const hydroxides = knowledge.solids.filter(
    (s) => (s.components["H+"] ?? 0) < 0 && (model.solids.includes(s.id) || model.held.some((h) => h.by === s.id)),
  );
  const named = new Set(stage.plan.masking.flatMap((m) => m.masks));
  return [...model.solution.fromSample.keys()].filter(
    (ion) =>
      !named.has(ion) &&
      !stage.plan.determines.includes(ion) &&
      hydroxides.some((s) => (s.components[ion] ?? 0) > 0) &&
      knowledge.masking.some((r) => r.agent === "hydroxide" && r.ion === ion && stage.plan.pH >= r.pH[0] - PH_SLACK) &&
      (stage.evaluation.titrated.get(ion) ?? 1) < 1 - PRECIPITATED_FRACTION,
  );
}

/**
 * Says by name what the alkali keeps out, and what an agent that is in the solution anyway holds before the alkali comes
 * (triethanolamine taken for iron holds aluminium too).
 */
export function declared<S extends Worked>(stage: S, knowledge: Knowledge): S {
  const held = heldByAlkali(stage, knowledge);
  const named = new Set(stage.plan.masking.flatMap((m) => m.masks));
  const quiet = [...stage.evaluation.model.solution.fromSample.keys()].filter(
    (ion) =>
      !named.has(ion) && !stage.plan.determines.includes(ion) && (stage.evaluation.titrated.get(ion) ?? 0) < QUIET,
  );
  const alkaline = stage.plan.pH >= ALKALI_FROM_PH;
  const present = stage.plan.masking.filter((m) => m.agent !== "hydroxide" && m.via === "complexation");
  const holderOf = (ion: ComponentId): MaskingStep | undefined =>
    alkaline ? present.find((m) => holds(knowledge, m.agent, ion, stage.plan.pH)) : undefined;
  const masking = stage.plan.masking.map((m) => {
    const more = quiet.filter((ion) => holderOf(ion) === m);
    return more.length > 0 ? { ...m, masks: [...m.masks, ...more] } : m;
  });
  const rest = held.filter((ion) => holderOf(ion) === undefined);
  if (rest.length === 0 && masking.every((m, i) => m === stage.plan.masking[i])) return stage;
  const step: MaskingStep = { agent: "hydroxide", masks: rest, via: "precipitation", molPerL: 0, basis: "equilibrium" };
  return { ...stage, plan: { ...stage.plan, masking: rest.length > 0 ? [...masking, step] : masking } };
}

const holds = (knowledge: Knowledge, agent: string, ion: ComponentId, pH: number): boolean =>
  knowledge.masking.some(
    (r) =>
      r.agent === agent &&
      r.ion === ion &&
      r.effect === "masks" &&
      r.via === "complexation" &&
      pH >= r.pH[0] - PH_SLACK &&
      pH <= r.pH[1] + PH_SLACK,
  );

/**
 * The same titration with an agent that keeps dissolved, as a complex, what would lie as hydroxide flocs and take dye and
 * analyte down (triethanolamine for iron); null where nothing but magnesium lies there or no such agent is at hand.
 */
export function withoutFlocs(stage: Worked, knowledge: Knowledge, shelf: Shelf): StagePlan | null {
  const flocs = heldByAlkali(stage, knowledge).filter((ion) => ion !== "Mg2+");
  if (flocs.length === 0) return null;
  const { plan } = stage;
  const keeps = (id: string): ComponentId[] => flocs.filter((ion) => holds(knowledge, id, ion, plan.pH));
  const [agent] = [...knowledge.agents.values()]
    .filter(
      (a) =>
        shelf(a.id) &&
        !a.special &&
        a.id !== "cyanide" &&
        a.id !== "hydroxide" &&
        !plan.masking.some((m) => m.agent === a.id) &&
        plan.pH >= a.pH[0] &&
        plan.pH <= a.pH[1] &&
        keeps(a.id).length > 0,
    )
    .sort((a, b) => keeps(b.id).length - keeps(a.id).length);
  if (!agent) return null;
  const step: MaskingStep = {
    agent: agent.id,
    masks: keeps(agent.id),
    via: "complexation",
    molPerL: agent.usualMolPerL,
    basis: "empirical",
  };
  return { ...plan, masking: [...plan.masking, step] };
}
