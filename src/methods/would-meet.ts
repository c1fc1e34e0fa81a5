import type { Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { EvaluatedMethod } from "./methods.ts";
import { withExcess } from "./plan-excess.ts";
import type { StagePlan, Task } from "./types.ts";
import { combineDifference, largestOf, stageBudget, type Budget } from "./uncertainty.ts";

/** Burettes, pipettes and strengths of titrant that a laboratory has or makes up (common practice). */
const BURETTES_ML = [10, 25, 50];
const PORTIONS_ML = [5, 10, 20, 25, 50, 100];
const STRENGTHS_MOL_PER_L = [0.002, 0.005, 0.01, 0.02, 0.05, 0.1];
/** A titre is to be more than this part of the burette, and no more than the burette, or it is read poorly or refilled. */
const LEAST_OF_BURETTE = 0.3;
const MOST_OF_BURETTE = 0.98;

interface Ware {
  readonly portionML: number;
  readonly titrantMolPerL: number;
  readonly buretteML: number;
}

const WARE: readonly Ware[] = PORTIONS_ML.flatMap((portionML) =>
  STRENGTHS_MOL_PER_L.flatMap((titrantMolPerL) =>
    BURETTES_ML.map((buretteML) => ({ portionML, titrantMolPerL, buretteML })),
  ),
);
const FOR_TRACES: Ware = {
  portionML: Math.max(...PORTIONS_ML),
  titrantMolPerL: Math.min(...STRENGTHS_MOL_PER_L),
  buretteML: Math.min(...BURETTES_ML),
};

/** Other ware and strength for the same method, and what the same evaluation says of it. */
export interface OtherWare {
  readonly meets: boolean;
  readonly buretteML: number;
  readonly portionML: number;
  readonly titrantMolPerL: number;
  readonly titreML: number;
  readonly expanded: number; // of the worst result, relative, k = 2
  /** The largest part of it: "bias" or a term of the budget; relative. */
  readonly largest: { readonly source: string; readonly relative: number };
}

/**
 * What burette, portion and strength of titrant would let a method that misses the requirement meet it: of those that do, the one that
 * changes least; where none does, the one that comes nearest. Null for a method whose titrations follow one another in one vessel,
 * and where the titration fails with all of it.
 */
export function wouldMeet(task: Task, method: EvaluatedMethod, knowledge: Knowledge): OtherWare | null {
  if (method.mode === "successive") return null;
  const present: Ware = {
    portionML: task.portion.volumeML,
    titrantMolPerL: method.stages[0]!.plan.titrant.molPerL,
    buretteML: task.laboratory.buretteML,
  };
  const changes = (ware: Ware): number =>
    (["portionML", "titrantMolPerL", "buretteML"] as const).filter((key) => ware[key] !== present[key]).length;
  const ofPortion = new Map(PORTIONS_ML.map((portionML) => [portionML, withPortion(task, portionML)]));
  const tried: OtherWare[] = [];
  for (const ware of fitting(task, method).sort((a, b) => changes(a) - changes(b))) {
    const found = evaluated(ofPortion.get(ware.portionML)!, task, method, ware, knowledge);
    if (found) tried.push(found);
    // The rest changes more.
    if (tried.some((t) => t.meets && changes(t) < changes(ware))) break;
  }
  const [best] = tried.sort(
    (a, b) => Number(b.meets) - Number(a.meets) || (a.meets ? changes(a) - changes(b) : 0) || a.expanded - b.expanded,
  );
  return best ?? null;
}

/** Portions, strengths and burettes with which every titre of the method is read well; where none is, what gives a trace its largest titre. */
function fitting(task: Task, method: EvaluatedMethod): Ware[] {
  const within = (ware: Ware, least: number): boolean =>
    method.stages.every((s) => {
      const titre = titreAt(task, s.evaluation, ware.portionML, ware.titrantMolPerL);
      return titre >= least * ware.buretteML && titre <= MOST_OF_BURETTE * ware.buretteML;
    });
  const well = WARE.filter((ware) => within(ware, LEAST_OF_BURETTE));
  return well.length > 0 ? well : [FOR_TRACES].filter((ware) => within(ware, 0));
}

/** The titre that another portion and strength would give, mL: it goes with the amount over the strength. */
const titreAt = (task: Task, { endPointML, model }: StageEvaluation, portionML: number, molPerL: number): number =>
  (endPointML * portionML * model.plan.titrant.molPerL) / (task.portion.volumeML * molPerL);

const withPortion = (task: Task, volumeML: number): Task => ({
  ...task,
  portion: { volumeML, titrationVolumeML: Math.max(task.portion.titrationVolumeML, volumeML) },
});

/** @param other the task with the portion of the ware; @param task as it was asked */
function evaluated(
  other: Task,
  task: Task,
  method: EvaluatedMethod,
  ware: Ware,
  knowledge: Knowledge,
): OtherWare | null {
  const evaluations = method.stages.map((s) =>
    evaluate(other, planWith(other, task, s.plan, ware.titrantMolPerL, knowledge), knowledge),
  );
  if (evaluations.some((e) => e.status === "failed" || e.blockedBy.length > 0)) return null;
  // What is read from it is all that the burette changes.
  const read: Task = { ...other, laboratory: { ...other.laboratory, buretteML: ware.buretteML } };
  const [first, second] = evaluations;
  const results: { readonly biasFraction: number; readonly budget: Budget }[] = evaluations.map((e) => ({
    biasFraction: e.biasFraction,
    budget: stageBudget(read, e, knowledge),
  }));
  // The sum of a difference is no result of its own.
  if (method.mode === "difference" && first && second)
    results.splice(0, method.results.length === 1 ? 2 : 1, combineDifference(read, first, second, knowledge));
  const worst = results.sort((a, b) => b.budget.expanded - a.budget.expanded)[0]!;
  return {
    ...ware,
    meets: 100 * worst.budget.expanded <= task.requirementPercent,
    titreML: first!.endPointML,
    expanded: worst.budget.expanded,
    largest: largestOf(worst),
  };
}

/** The same plan with another strength; what goes with the analyte's amount (chelate in bulk, reagent, excess) in proportion. */
function planWith(other: Task, task: Task, plan: StagePlan, molPerL: number, knowledge: Knowledge): StagePlan {
  const level = ({ portion }: Task): number => portion.volumeML / portion.titrationVolumeML;
  const times = level(other) / level(task);
  const more = <T extends { readonly molPerL: number }>(reagent: T): T => ({
    ...reagent,
    molPerL: reagent.molPerL * times,
  });
  const { backTitrant, chelate, detour } = plan;
  return withExcess(
    other,
    {
      ...plan,
      titrant: { ...plan.titrant, molPerL },
      backTitrant: backTitrant && { ...backTitrant, molPerL },
      chelate: chelate && plan.mode === "displacement" ? more(chelate) : chelate,
      detour: detour && {
        ...detour,
        reagent: more(detour.reagent),
        precipitant: detour.precipitant && more(detour.precipitant),
      },
    },
    knowledge,
  );
}
