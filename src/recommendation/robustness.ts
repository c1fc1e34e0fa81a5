import { createHash } from "node:crypto";
import type { Knowledge } from "../constants/knowledge.ts";
import { InputError } from "../errors.ts";
import { perturbedMethod, type PerturbedMethod, type PlannedMethod } from "../methods/perturbed-method.ts";
import type { NotCompiled } from "../methods/perturbed-titration.ts";
import { drawMethod, mapAxes, mapRow, type Draws, type MapAxes } from "../methods/robustness.ts";
import { USUAL_SPREADS, type Parameter, type Spreads } from "../methods/robustness-parameters.ts";
import type { Task } from "../methods/types.ts";
import { readBrief } from "./brief.ts";
import { planOf } from "./calculate-series.ts";
import { DRAWS, type Recommendation, type RecommendedMethod } from "./contract.ts";

/** Everything that draws are made from; can be sent to another thread. */
export interface RobustnessWork {
  readonly key: string; // the same work has the same key
  readonly task: Task;
  readonly method: PlannedMethod;
  readonly spreads: Spreads;
  readonly seed: number;
  readonly draws: number;
}

/** Which draws of a method are asked for. */
export interface DrawsAsked {
  readonly work: RobustnessWork;
  readonly from: number;
  readonly count: number;
}

/** Draws, and what is the same for all of them. */
export interface DrawsAnswer {
  readonly parameters: readonly Parameter[];
  readonly notCompiled: readonly (NotCompiled | null)[];
  readonly results: number;
  readonly draws: Draws;
}

/** One row of the map of a method; axes null where there is nothing to map. */
export interface MapRowAnswer {
  readonly axes: MapAxes | null;
  readonly row: readonly (number | null)[];
}

/** What is asked of a method beside which. */
export interface RobustnessOptions {
  readonly draws?: number | undefined;
  readonly seed?: number | undefined;
}

const USUAL_SEED = 1;

/**
 * Finds in an answer the method whose robustness is asked for, with its titrations as they are planned.
 * @param which id of a method, or its rank from 1; the first where nothing is said
 * Throws InputError where the answer has no such method or a number is out of its range.
 */
export function robustnessWork(
  document: Recommendation,
  which: string | undefined,
  options: RobustnessOptions,
  knowledge: Knowledge,
): { readonly work: RobustnessWork; readonly method: RecommendedMethod } {
  const method =
    which === undefined
      ? document.methods[0]
      : document.methods.find((m) => m.id === which || String(m.rank) === which);
  const { draws = DRAWS.usual, seed = USUAL_SEED } = options;
  const faults = [
    ...(method
      ? []
      : [
          {
            path: "$.method",
            expected:
              document.methods.length === 0 ? "a brief with a method" : "the id or the rank of a method of this answer",
            found: which === undefined ? "none" : JSON.stringify(which),
          },
        ]),
    ...(Number.isInteger(draws) && draws >= DRAWS.least && draws <= DRAWS.most
      ? []
      : [{ path: "$.draws", expected: `a whole number from ${DRAWS.least} to ${DRAWS.most}`, found: String(draws) }]),
    ...(Number.isSafeInteger(seed) && seed >= 0
      ? []
      : [{ path: "$.seed", expected: "a whole number, 0 or more", found: String(seed) }]),
  ];
  if (!method || faults.length > 0) throw new InputError(faults);
  const parts = {
    task: readBrief(document.brief, knowledge),
    method: { mode: method.mode, plans: method.stages.map((stage) => planOf(method, stage, knowledge)) },
    spreads: USUAL_SPREADS,
    seed,
    draws,
  };
  const key = createHash("sha256").update(JSON.stringify(parts)).digest("hex").slice(0, 16);
  return { work: { key, ...parts }, method };
}

interface Compiled {
  readonly method: PerturbedMethod;
  axes: MapAxes | null | undefined;
}

/** Methods are compiled once for all chunks of their draws; the oldest goes first. */
const KEPT = 4;
const compiled = new WeakMap<Knowledge, Map<string, Compiled>>();

function compiledOf({ key, task, method, spreads }: RobustnessWork, knowledge: Knowledge): Compiled {
  const kept = compiled.get(knowledge) ?? new Map<string, Compiled>();
  compiled.set(knowledge, kept);
  let found = kept.get(key);
  if (found === undefined) {
    found = { method: perturbedMethod(task, method, spreads, knowledge), axes: undefined };
    kept.set(key, found);
    if (kept.size > KEPT) kept.delete(kept.keys().next().value!);
  }
  return found;
}

/** Makes some of the draws of a method. */
export function workOutDraws({ work, from, count }: DrawsAsked, knowledge: Knowledge): DrawsAnswer {
  const { method } = compiledOf(work, knowledge);
  const { parameters, notCompiled, results } = method;
  return { parameters, notCompiled, results, draws: drawMethod(method, work.seed, from, count) };
}

/** Works out one row of the map of a method. */
export function workOutMapRow(
  { work, row }: { readonly work: RobustnessWork; readonly row: number },
  knowledge: Knowledge,
): MapRowAnswer {
  const found = compiledOf(work, knowledge);
  const { plans } = work.method;
  if (found.axes === undefined) found.axes = mapAxes(found.method, plans);
  const { axes } = found;
  return { axes, row: axes === null ? [] : mapRow(found.method, plans, axes, row) };
}
