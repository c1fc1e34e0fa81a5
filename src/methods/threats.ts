import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { EVERY_LEVEL_OF_DYE } from "./blocking.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { lyingAsHydroxideMolPerL } from "./hydroxide-lying.ts";
import { vesselSample } from "./solution.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import { countedIn, type StagePlan, type Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";

/** A component of the sample that the titration cannot leave alone. */
export interface Threat {
  readonly component: ComponentId;
  readonly titrates: boolean;
  readonly blocks: boolean;
  /** A ligand of the sample that takes the analyte away from the titrant. */
  readonly holdsAnalyte: boolean;
  readonly biasFraction: number;
  readonly molPerL: number; // in the vessel
}

/** A bias smaller than this part of the requirement is left alone, */
export const IGNORED_PART_OF_REQUIREMENT = 0.12;
/** and up to this part where the requirement is met with it: no mask without need. */
const BORNE_PART_OF_REQUIREMENT = 0.4;
/** log alpha of the analyte from one ligand of the sample beyond which a titration suffers noticeably, */
const HELD_LOG10_ALPHA = 3;
/** unless the titrant takes it all the same: a constant, with that ligand counted in, at which a hundredth of a mole a litre is bound to 1 in 1000. */
const BOUND_ALL_THE_SAME_LOG10_K = 8;

/** What must be masked, removed or freed before this titration can be trusted, judged from its evaluation as it stands. */
export function threatsOf(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): Threat[] {
  const { model } = evaluation;
  const { plan } = model;
  const meets =
    evaluation.status !== "failed" &&
    100 * stageBudget(task, evaluation, knowledge).expanded <= task.requirementPercent;
  const allowed = ((meets ? BORNE_PART_OF_REQUIREMENT : IGNORED_PART_OF_REQUIREMENT) * task.requirementPercent) / 100;
  const equivalence =
    evaluation.status === "failed" && plan.release === null ? atCommonEquivalence(model, evaluation.presentMol) : null;
  const threats: Threat[] = [];
  const determined = new Set(plan.determines);
  const present = evaluation.presentMol / model.volumeL;
  for (const { component, inVesselMolPerL } of vesselSample(task, plan)) {
    // The counted metal in the sample itself is no less a part of the titre.
    if (determined.has(component) || inVesselMolPerL <= 0 || plan.removed.includes(component)) continue;
    if (!model.metals.includes(component)) {
      const held =
        knowledge.components.get(component)?.kind === "ligand" &&
        (turns(plan, component, knowledge) ||
          (holds(evaluation, component, knowledge) &&
            (masks(plan, component, knowledge) || !(meets && boundAllTheSame(evaluation)))));
      if (held)
        threats.push({
          component,
          titrates: false,
          blocks: false,
          holdsAnalyte: true,
          biasFraction: 0,
          molPerL: inVesselMolPerL,
        });
      continue;
    }
    const known = model.system.rows.some(
      (s) => (s.components[component] ?? 0) > 0 && (s.components[plan.titrant.id] ?? 0) > 0,
    );
    // A metal that EDTA binds and for which this titrant has no constant is not thereby harmless: count it whole.
    const share =
      !known && !model.inert.has(component) && bindsEdta(knowledge, component)
        ? 1
        : equivalence
          ? shareOf(equivalence, component)
          : Math.min(1, Math.max(0, evaluation.titrated.get(component) ?? 0));
    const biasFraction = (share * inVesselMolPerL * (plan.detour?.analytePerMetal ?? 1)) / present;
    const titrates = biasFraction > allowed || liesAsFlocs(model, component, inVesselMolPerL, present, knowledge);
    // What the method itself brings of this metal is not the sample's doing.
    const enoughForDye = inVesselMolPerL > EVERY_LEVEL_OF_DYE * (plan.indicator?.molPerL ?? 0);
    const blocks =
      spoilsElectrode(evaluation, component) ||
      (enoughForDye && evaluation.blockedBy.includes(component)) ||
      (enoughForDye &&
        !plan.backTitrant &&
        model.indicator !== null &&
        plan.indicator !== null &&
        heldDye(evaluation, component));
    if (titrates || blocks)
      threats.push({ component, titrates, blocks, holdsAnalyte: false, biasFraction, molPerL: inVesselMolPerL });
  }
  return threats;
}

/** From this ratio to the analyte the flocs of a hydroxide of the matrix take dye and analyte with them. */
const FLOCS_RATIO = 0.02;
/** From here on the alkali is itself the mask, and what it throws down is meant to lie. */
const ALKALI_FROM_PH = 11.5;

/** Whether a metal of the matrix falls out as hydroxide at the pH of a direct titration: filter it off first, or keep it dissolved. */
function liesAsFlocs(
  model: StageModel,
  metal: ComponentId,
  inVesselMolPerL: number,
  analyteMolPerL: number,
  knowledge: Knowledge,
): boolean {
  const { plan } = model;
  if (plan.backTitrant !== null || plan.pH >= ALKALI_FROM_PH || metal === "Mg2+") return false;
  if (!(inVesselMolPerL > FLOCS_RATIO * analyteMolPerL)) return false;
  return lyingAsHydroxideMolPerL(model, model.at(0), metal, knowledge) > 0.5 * inVesselMolPerL;
}

/** Metals with which EDTA has a constant: what another titrant lacks a constant for among them is a gap, not an absence. */
const edtaMetals = new WeakMap<Knowledge, ReadonlySet<ComponentId>>();

function bindsEdta(knowledge: Knowledge, metal: ComponentId): boolean {
  let metals = edtaMetals.get(knowledge);
  if (!metals) {
    metals = new Set(
      knowledge.species.filter((s) => (s.components["EDTA"] ?? 0) > 0).flatMap((s) => Object.keys(s.components)),
    );
    edtaMetals.set(knowledge, metals);
  }
  return knowledge.components.get(metal)?.charge !== 1 && metals.has(metal);
}

const shareOf = (state: VesselState, metal: ComponentId): number =>
  Math.min(1, Math.max(0, state.boundToTitrant(metal) / Math.max(state.total(metal), Number.MIN_VALUE)));

/** Bound share of the analyte at which its titration counts as over. */
const OVER_SHARE = 0.999;
const HALVINGS = 9;

/**
 * The vessel when the analyte is bound, whatever has to be bound with it: the least titrant, between the analyte alone and every
 * metal together, at which one thousandth of the analyte is left. Tells what each metal takes where no end point was found.
 */
export function atCommonEquivalence(model: StageModel, presentMol: number): VesselState {
  const { plan } = model;
  if (plan.backTitrant !== null) return model.at(0);
  const ownMol = model.solution.way ? model.solution.way.expectedMolPerL * model.volumeL : presentMol;
  const counted = countedIn(plan);
  const others = model.metals
    .filter((m) => !counted.includes(m) && m !== plan.chelate?.metal)
    .reduce((sum, m) => sum + (model.solution.fromSample.get(m) ?? 0) * model.volumeL, 0);
  const isOver = (state: VesselState): boolean => counted.every((metal) => shareOf(state, metal) >= OVER_SHARE);
  let low = ownMol;
  let high = 1.01 * (ownMol + others);
  let state = model.at(high / model.burette.molPerL);
  if (!isOver(state)) return model.at((ownMol + others) / model.burette.molPerL);
  for (let step = 0; step < HALVINGS; step++) {
    const middle = (low + high) / 2;
    const there = model.at(middle / model.burette.molPerL);
    if (isOver(there)) {
      high = middle;
      state = there;
    } else low = middle;
  }
  return state;
}

/** Whether this ion sets the potential instead of the one that is followed, or must not meet the membrane at all. */
const spoilsElectrode = ({ electrode, why }: StageEvaluation, ion: ComponentId): boolean =>
  electrode !== null &&
  (electrode.poisonedBy.includes(ion) || (why === "interferent" && electrode.interferingIon === ion));

/** Whether the equilibrium alone lets this metal keep a tenth of the dye 5 % past equivalence. */
function heldDye(evaluation: StageEvaluation, metal: ComponentId): boolean {
  if (evaluation.status !== "failed" || evaluation.why !== "no-end-point") return false;
  const state = evaluation.model.at((1.05 * evaluation.equivalenceML) / 1000);
  const ratio = state.dyeRatioOf(metal);
  return ratio / (1 + ratio) >= 0.1;
}

/** Whether a ligand of the sample has made another ion of what is determined, which no mask undoes (cyanide and copper). */
export const turns = (plan: StagePlan, ligand: ComponentId, knowledge: Knowledge): boolean =>
  [...knowledge.agents.values()].some(
    (agent) =>
      agent.component === ligand && agent.converts.some((c) => c.unaided === true && plan.determines.includes(c.from)),
  );

/** Whether practice uses the ligand to keep what is determined from the titrant. */
const masks = (plan: StagePlan, ligand: ComponentId, knowledge: Knowledge): boolean =>
  knowledge.masking.some(
    (r) =>
      r.effect === "masks" &&
      plan.determines.includes(r.ion) &&
      plan.pH >= r.pH[0] &&
      plan.pH <= r.pH[1] &&
      knowledge.agents.get(r.agent)?.component === ligand,
  );

const boundAllTheSame = ({ model, log10ConditionalK }: StageEvaluation): boolean =>
  countedIn(model.plan).every((metal) => (log10ConditionalK.get(metal) ?? 0) >= BOUND_ALL_THE_SAME_LOG10_K);

function holds(evaluation: StageEvaluation, ligand: ComponentId, knowledge: Knowledge): boolean {
  const { model } = evaluation;
  const metal = countedIn(model.plan)[0];
  if (metal === undefined || !knowledge.components.has(ligand)) return false;
  const start = model.at(0);
  const held = model.system.rows.reduce((sum, s, row) => {
    const takes = (s.components[metal] ?? 0) > 0 && (s.components[ligand] ?? 0) > 0;
    return takes ? sum + start.result.species(row) : sum;
  }, 0);
  return Math.log10(1 + held / start.free(metal)) > HELD_LOG10_ALPHA;
}
