import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { mindedMetals } from "./blocking.ts";
import { pickDyeBasis, type DyeBasis } from "./dye-basis.ts";
import { evaluate } from "./evaluate.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { backEndPointL } from "./excess.ts";
import { frozenComplexes } from "./frozen.ts";
import { inertMetals, metalKinetics } from "./kinetics.ts";
import type { VesselOf } from "./perturbed-amounts.ts";
import { PerturbedVessel } from "./perturbed-vessel.ts";
import { readEndPoint, type EndPointRead } from "./read-end-point.ts";
import { Shifts, shiftedPlan, type Parameter } from "./robustness-parameters.ts";
import { stageModel, type StageModel, type VesselState } from "./stage-model.ts";
import { cancels, standardisedBias, standardOf, standardTitration } from "./standardise.ts";
import { countedIn, type StagePlan, type Task } from "./types.ts";

/** Why a titration has to be evaluated as a whole in every draw. */
export type NotCompiled = "release" | "way round" | "solid" | "no end point";

/** One titration as planned: its vessels and what they give. */
export interface PlannedTitration {
  readonly task: Task;
  readonly plan: StagePlan;
  readonly stage: number;
  readonly evaluation: StageEvaluation;
  /** The vessel in which complexes formed that do not exchange any more; null where none did. */
  readonly formed: StageModel | null;
  readonly standard: StageEvaluation | null;
  readonly why: NotCompiled | null;
}

/** Evaluates a planned titration and the vessels beside it. */
export function plannedTitration(task: Task, plan: StagePlan, stage: number, knowledge: Knowledge): PlannedTitration {
  const evaluation = evaluate(task, plan, knowledge);
  const frozen = plan.release ? undefined : frozenComplexes(task, plan, knowledge);
  const formed = frozen && frozen.size > 0 ? stageModel(task, plan, knowledge) : null;
  const own = plan.release ? null : standardOf(task, plan, evaluation.basis, knowledge);
  const standard = own && evaluation.status !== "failed" ? evaluateStage(own.task, own.plan, knowledge) : null;
  const solid = [evaluation.model, formed, standard?.model].some((m) => m && !isClear(m));
  const why = plan.release
    ? "release"
    : plan.detour
      ? "way round"
      : evaluation.status === "failed"
        ? "no end point"
        : solid
          ? "solid"
          : null;
  return { task, plan, stage, evaluation, formed, standard, why };
}

const isClear = (model: StageModel): boolean =>
  model.system.solids.length === 0 && model.held.every((h) => h.why !== "precipitated");

const itself: VesselOf = (task, plan) => ({ task, plan });

/** What a draw makes of a titration: its evaluation as far as result and budget go, and whether the dye is spoilt that was not. */
export interface DrawnTitration {
  readonly evaluation: StageEvaluation;
  readonly blocked: boolean;
}

/** A vessel with what finding its end point takes. */
interface Readable {
  readonly vessel: PerturbedVessel;
  readonly determined: ReadonlySet<ComponentId>;
  readonly presentMol: number;
  readonly band: boolean; // whether the observer's band is wanted
}

/** A titration of which every draw moves only constants, acidity and amounts. */
export class PerturbedTitration {
  readonly planned: PlannedTitration;
  readonly #knowledge: Knowledge;
  readonly #parameters: readonly Parameter[];
  readonly #own: Readable;
  readonly #formed: PerturbedVessel | null;
  readonly #standard: Readable | null;
  readonly #slow: boolean;
  readonly #minded: ReadonlySet<ComponentId>;
  readonly #nearBlocking: boolean;

  constructor(planned: PlannedTitration, parameters: readonly Parameter[], knowledge: Knowledge) {
    const { task, plan, stage, evaluation, formed, standard } = planned;
    this.planned = planned;
    this.#knowledge = knowledge;
    this.#parameters = parameters;
    const own = { task, plan, stage };
    this.#own = readable(evaluation, true, { ...own, of: itself }, parameters, knowledge);
    this.#formed = formed && new PerturbedVessel(formed, { ...own, of: itself }, parameters, knowledge);
    this.#standard = standard && readable(standard, false, { ...own, of: standardTitration }, parameters, knowledge);
    const hot = plan.preparation.includes("boil") || plan.preparation.includes("heat");
    this.#slow =
      !hot && evaluation.model.metals.some((m) => metalKinetics(knowledge, m, plan.titrant.id).class === "slow");
    this.#minded = new Set(evaluation.blockedBy);
    const { model } = evaluation;
    this.#nearBlocking = [-NEAR_PH, 0, NEAR_PH].some((shift) =>
      mindedMetals({ ...model, plan: { ...plan, pH: plan.pH + shift } }).some(
        ({ metal, level }) => unheld(model, metal) > level / FAR,
      ),
    );
  }

  /**
   * The titration at a draw; null where the vessel as compiled does not hold (a solid would form, the dye or a slow metal would be
   * another matter) and the titration has to be evaluated as a whole.
   * @param carriedMolPerL titrant that earlier titrations of the vessel left in it beyond the plan
   */
  at(shifts: Float64Array, carriedMolPerL: number): DrawnTitration | null {
    const { plan, stage, evaluation } = this.planned;
    const drawn = shiftedPlan(plan, stage, new Shifts(this.#parameters, shifts));
    if (this.#slow && this.#otherInert(drawn)) return null;
    const more = new Map<ComponentId, number>(carriedMolPerL === 0 ? [] : [[plan.titrant.id, carriedMolPerL]]);
    if (this.#formed && !this.#freeze(this.#formed, shifts, more)) return null;
    const near = this.#own.vessel.isNear(shifts);
    const read = this.#read(this.#own, drawn, shifts, more);
    if (read === null) return null;
    const biasAlone = this.#standard ? this.#biasOfStandard(this.#standard, drawn, shifts) : Number.NaN;
    if (biasAlone === null) return null;
    const blocked = this.#spoilt(read.model, near);
    const model = { ...evaluation.model, plan: drawn };
    if (read.read.why !== null)
      return { evaluation: { ...evaluation, model, status: "failed", why: read.read.why }, blocked };
    const uncancelled = biasOf(drawn, model.volumeL, read.read.volumeL, evaluation.presentMol);
    const [low, high] = read.read.bandL;
    return {
      evaluation: {
        ...evaluation,
        model,
        endPointML: read.read.volumeL * ML,
        bandML: [low * ML, high * ML],
        biasFraction: Number.isFinite(biasAlone) ? standardisedBias(uncancelled, biasAlone) : uncancelled,
        uncancelledBiasFraction: uncancelled,
      },
      blocked,
    };
  }

  #otherInert(drawn: StagePlan): boolean {
    const { inert, metals } = this.planned.evaluation.model;
    const now = inertMetals(this.#knowledge, [...metals, ...countedIn(drawn)], drawn.titrant.id, drawn.pH, false);
    return [...metals].some((metal) => now.has(metal) !== inert.has(metal));
  }

  /** What has formed hot and stays as it is leaves the equilibrium with its titrant. */
  #freeze(formed: PerturbedVessel, shifts: Float64Array, more: Map<ComponentId, number>): boolean {
    const { model } = formed;
    if (!formed.set(shifts, model.dyeBasis)) return false;
    const start = formed.at(0);
    if (!start.ok) return false;
    const titrant = this.planned.plan.titrant.id;
    for (const held of this.planned.evaluation.model.held) {
      if (held.why !== "kinetically-inert") continue;
      const amount = Math.min(start.boundToTitrant(held.component), start.total(held.component));
      more.set(held.component, -amount);
      more.set(titrant, (more.get(titrant) ?? 0) - amount);
    }
    return true;
  }

  #read(
    { vessel, determined, presentMol, band }: Readable,
    drawn: StagePlan,
    shifts: Float64Array,
    more: ReadonlyMap<ComponentId, number> | null,
  ): { readonly read: EndPointRead; readonly model: StageModel } | null {
    const nominal = vessel.model;
    const dyeBasis = this.#dyeBasis(nominal, drawn.pH);
    if (dyeBasis === null || !vessel.set(shifts, dyeBasis, more)) return null;
    const at = (volumeL: number): VesselState => vessel.at(volumeL);
    const model: StageModel = { ...nominal, plan: { ...nominal.plan, ...conditionsOf(drawn) }, dyeBasis, at };
    if (model.plan.backTitrant === null) {
      const equivalenceL = presentMol / model.burette.molPerL;
      return { read: readEndPoint(model, determined, equivalenceL, this.#knowledge, { band }), model };
    }
    const expectedMol = Math.max(at(0).titrantUnbound * model.volumeL, 1e-9);
    let read = readEndPoint(model, determined, expectedMol / model.burette.molPerL, this.#knowledge, { band });
    if (read.why === "no-end-point" && at(0).ok)
      read = readEndPoint(model, determined, backEndPointL(model), this.#knowledge, { band });
    return { read, model };
  }

  /** Bias of the standard titration; NaN where it is not one to standardise with, null where its vessel does not hold. */
  #biasOfStandard(standard: Readable, drawn: StagePlan, shifts: Float64Array): number | null {
    const read = this.#read(standard, drawn, shifts, null);
    if (read === null) return null;
    if (read.read.why !== null) return Number.NaN;
    const { plan, volumeL } = standard.vessel.model;
    const bias = biasOf(plan, volumeL, read.read.volumeL, standard.presentMol);
    return cancels(bias) ? bias : Number.NaN;
  }

  /** The dye at another pH; null where it would rest on something else there. */
  #dyeBasis({ indicator, dyeBasis, metals }: StageModel, pH: number): DyeBasis | null {
    if (!indicator || indicator.transitions.length === 0) return dyeBasis;
    const now = pickDyeBasis(this.#knowledge, indicator, pH, new Set(metals));
    const same =
      now.dye === dyeBasis.dye &&
      now.byTable.size === dyeBasis.byTable.size &&
      [...dyeBasis.byTable.keys()].every((metal) => now.byTable.has(metal));
    return same ? now : null;
  }

  #spoilt(model: StageModel, near: boolean): boolean {
    if (near && !this.#nearBlocking) return false;
    return mindedMetals(model).some(({ metal, level }) => !this.#minded.has(metal) && unheld(model, metal) > level);
  }
}

/** What no agent holds of a metal before anything comes from the burette, mol/L. */
function unheld(model: StageModel, metal: ComponentId): number {
  const list = model.vessel.rows.unheldByMetal.get(metal);
  if (list === undefined) return 0;
  const { result } = model.at(0);
  return list.rows.reduce((sum, row, i) => sum + list.counts[i]! * result.species(row), 0);
}

/** What is this many times away from happening as planned does not happen in a draw near the plan: several times the usual uncertainty. */
const FAR = 30;
/** Shift of the pH within which a draw counts as near. */
const NEAR_PH = 0.5;

const ML = 1000;

/** What of a drawn plan also holds for its standard titration. */
const conditionsOf = ({ pH, buffer, indicator }: StagePlan): Pick<StagePlan, "pH" | "buffer" | "indicator"> => ({
  pH,
  buffer,
  indicator,
});

/** Found against present, relative: what the formula of the method makes of a volume. */
function biasOf(plan: StagePlan, vesselL: number, volumeL: number, presentMol: number): number {
  const foundMol = plan.backTitrant
    ? plan.excessTitrantMolPerL * vesselL - plan.backTitrant.molPerL * volumeL
    : plan.titrant.molPerL * volumeL;
  return (foundMol - presentMol) / presentMol;
}

function readable(
  evaluation: StageEvaluation,
  band: boolean,
  own: { readonly task: Task; readonly plan: StagePlan; readonly stage: number; readonly of: VesselOf },
  parameters: readonly Parameter[],
  knowledge: Knowledge,
): Readable {
  const { model, presentMol, endPointML } = evaluation;
  const vessel = new PerturbedVessel(model, own, parameters, knowledge);
  const endL = endPointML / ML;
  vessel.anchor(0.5 * endL);
  vessel.anchor(endL);
  return { vessel, determined: new Set(countedIn(model.plan)), presentMol, band };
}
