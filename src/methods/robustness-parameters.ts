import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { seededRandom } from "../numerics/seeded-random.ts";
import type { StagePlan, Task } from "./types.ts";

/** What a draw moves: a constant of a reaction, the pH of a titration, the amount of a reagent, the level of a component of the matrix. */
export type ParameterKind = "constant" | "pH" | "reagent" | "matrix";

/** One thing that is not known exactly, with its standard uncertainty: log10 K, pH units, or relative to the amount. */
export interface Parameter {
  readonly kind: ParameterKind;
  /** Reaction, number of the titration, reagent or component. */
  readonly id: string;
  readonly standardUncertainty: number;
}

/** Standard uncertainties of what the bench does, relative except the pH. */
export interface Spreads {
  readonly pH: number;
  readonly reagent: number;
  readonly dye: number;
  readonly matrix: number;
}

/**
 * Common practice: a pH set with a buffer from the shelf and checked is within 0.1 to 0.2; solutions of buffers and masks are measured with a cylinder
 * (5 %), a dye by drops or the tip of a spatula (10 %), and a sample differs from its brief by a tenth.
 */
export const USUAL_SPREADS: Spreads = { pH: 0.1, reagent: 0.05, dye: 0.1, matrix: 0.1 };

/** Amounts stay positive however wide they are drawn. */
const LEAST_RELATIVE = -0.9;

/** The shift of every parameter by id within its kind; absent means none. */
export class Shifts {
  readonly #index: ReadonlyMap<string, number>;
  readonly values: Float64Array;

  constructor(parameters: readonly Parameter[], values: Float64Array) {
    this.#index = indexOf(parameters);
    this.values = values;
  }

  of(kind: ParameterKind, id: string): number {
    const at = this.#index.get(`${kind} ${id}`);
    return at === undefined ? 0 : this.values[at]!;
  }
}

const indices = new WeakMap<readonly Parameter[], ReadonlyMap<string, number>>();

/** Place of each parameter, by kind and id. */
export function indexOf(parameters: readonly Parameter[]): ReadonlyMap<string, number> {
  let index = indices.get(parameters);
  if (index === undefined) {
    index = new Map(parameters.map(({ kind, id }, i) => [`${kind} ${id}`, i]));
    indices.set(parameters, index);
  }
  return index;
}

/**
 * Writes draw `k` of `seed` into `shifts`, one normal deviate a parameter in their order: it depends on nothing else. Constants in log10 units,
 * pH in its own, amounts relative (never below a tenth of the amount).
 */
export function drawShifts(parameters: readonly Parameter[], seed: number, k: number, shifts: Float64Array): void {
  const random = seededRandom(seed, k);
  for (let i = 0; i < parameters.length; i++) {
    const { kind, standardUncertainty } = parameters[i]!;
    const shift = standardUncertainty * random.normal();
    shifts[i] = kind === "constant" || kind === "pH" ? shift : Math.max(LEAST_RELATIVE, shift);
  }
}

/** The parameters of the bench and the sample: pH of each titration, every reagent but the standard solutions, every component of the matrix. */
export function benchParameters(task: Task, plans: readonly StagePlan[], spreads: Spreads): Parameter[] {
  const reagents = new Map<string, number>();
  for (const plan of plans) {
    const standard = new Set([plan.titrant.id, plan.backTitrant?.id]);
    const weighed = [
      ...(plan.buffer.molPerL > 0 ? [plan.buffer.id] : []),
      ...[...plan.masking.map((m) => m.agent), ...plan.auxiliary.map((a) => a.id), ...plan.added.map((a) => a.id)],
      ...(plan.release ? [plan.release.agent] : []),
      ...(plan.chelate ? [chelateId(plan.chelate)] : []),
    ];
    for (const id of weighed) if (!standard.has(id)) reagents.set(id, spreads.reagent);
    if (plan.indicator) reagents.set(plan.indicator.id, spreads.dye);
  }
  return [
    ...plans.map((_, stage) => ({ kind: "pH" as const, id: String(stage), standardUncertainty: spreads.pH })),
    ...[...reagents].map(([id, standardUncertainty]) => ({ kind: "reagent" as const, id, standardUncertainty })),
    ...task.matrix.map((c) => ({ kind: "matrix" as const, id: c.component, standardUncertainty: spreads.matrix })),
  ];
}

const chelateId = ({ metal, ligand }: { readonly metal: ComponentId; readonly ligand: string }): string =>
  `${metal} ${ligand}`;

/** The task with its matrix at the levels of a draw. */
export function shiftedTask(task: Task, shifts: Shifts): Task {
  const matrix = task.matrix.map((c) => ({ ...c, molPerL: c.molPerL * (1 + shifts.of("matrix", c.component)) }));
  return { ...task, matrix };
}

/** The plan of titration number `stage` with the pH and the amounts of a draw; standard solutions and the excess stay as measured. */
export function shiftedPlan(plan: StagePlan, stage: number, shifts: Shifts): StagePlan {
  const amount = <T extends { readonly molPerL: number }>(id: string, reagent: T): T => ({
    ...reagent,
    molPerL: reagent.molPerL * (1 + shifts.of("reagent", id)),
  });
  return {
    ...plan,
    pH: plan.pH + shifts.of("pH", String(stage)),
    buffer: amount(plan.buffer.id, plan.buffer),
    indicator: plan.indicator && amount(plan.indicator.id, plan.indicator),
    masking: plan.masking.map((m) => amount(m.agent, m)),
    auxiliary: plan.auxiliary.map((a) => amount(a.id, a)),
    added: plan.added.map((a) => amount(a.id, a)),
    chelate: plan.chelate && amount(chelateId(plan.chelate), plan.chelate),
    release: plan.release && amount(plan.release.agent, plan.release),
  };
}

/** The knowledge with the constants of a draw: every record of a reaction moved alike, so that all species built on it move together. */
export function shiftedKnowledge(knowledge: Knowledge, parameters: readonly Parameter[], shifts: Shifts): Knowledge {
  const reactions = new Map(knowledge.reactions);
  for (const { kind, id } of parameters) {
    const reaction = kind === "constant" ? reactions.get(id) : undefined;
    if (reaction === undefined) continue;
    const by = shifts.of("constant", id);
    reactions.set(id, { ...reaction, records: reaction.records.map((r) => ({ ...r, log10K: r.log10K + by })) });
  }
  return { ...knowledge, reactions };
}
