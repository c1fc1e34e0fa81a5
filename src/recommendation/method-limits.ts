import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { type Fault, InputError } from "../errors.ts";
import { alsoMasked } from "../methods/also-masked.ts";
import { toleranceLimits, type LimitedMethod, type ToleranceLimit } from "../methods/tolerance.ts";
import type { Task } from "../methods/types.ts";
import { readBrief, readComponent } from "./brief.ts";
import { planOf } from "./calculate-series.ts";
import type { MethodLimits, Recommendation, RecommendedMethod } from "./contract.ts";
import { limitRow } from "./document.ts";
import { shownIon } from "./spelling.ts";

/** What usually comes along with metals in water, alloys and salts: what one asks about when the brief does not name it (common practice). */
export const USUAL_COMPANIONS = [
  "Al3+",
  "Ca2+",
  "Cd2+",
  "Co2+",
  "Cu2+",
  "Fe3+",
  "Mg2+",
  "Mn2+",
  "Ni2+",
  "Pb2+",
  "Zn2+",
  "F-",
  "PO4^3-",
  "SO4^2-",
] as const;

/** Everything that limits are worked out from; can be sent to another thread. */
export interface LimitsWork {
  readonly task: Task;
  readonly method: LimitedMethod;
  readonly components: readonly ComponentId[]; // of the matrix
  readonly also: readonly ComponentId[];
}

/**
 * Finds in an answer what limits are asked for: the method with its titrations as they are planned, and the components, those of the brief first.
 * Throws InputError where no method has the id, or an ion is not known.
 */
export function limitsWork(
  document: Recommendation,
  methodId: string | undefined,
  also: readonly string[],
  knowledge: Knowledge,
): { readonly work: LimitsWork; readonly method: RecommendedMethod } {
  const faults: Fault[] = [];
  const method = methodId === undefined ? document.methods[0] : document.methods.find((m) => m.id === methodId);
  if (!method)
    faults.push({
      path: "$.method",
      expected: document.methods.length === 0 ? "a brief with a method" : "the id of a method of this answer",
      found: methodId === undefined ? "none" : JSON.stringify(methodId),
    });
  const task = readBrief(document.brief, knowledge);
  const asked = also.flatMap((text, i) => {
    const read = readComponent(text, ["also", i], knowledge, faults);
    return read === null ? [] : [read.component.id];
  });
  if (faults.length > 0 || !method) throw new InputError(faults);
  const named = new Set([...task.analytes, ...task.matrix].map((c) => c.component));
  return {
    work: {
      task,
      method: { mode: method.mode, stages: method.stages.map((s) => ({ plan: planOf(method, s, knowledge) })) },
      components: task.matrix.map((c) => c.component),
      also: [...new Set(asked)].filter((id) => !named.has(id)),
    },
    method,
  };
}

/** Works the limits out. What the brief does not name is looked at one by one, as if the sample also held it. */
export function workOutLimits({ task, method, components, also }: LimitsWork, knowledge: Knowledge): ToleranceLimit[] {
  return [
    ...toleranceLimits(task, method, knowledge, components),
    ...also.flatMap((component) => {
      const stages = method.stages.map(({ plan }) => ({ plan: alsoMasked(plan, component, knowledge) }));
      return toleranceLimits(task, { ...method, stages }, knowledge, [component]);
    }),
  ];
}

/** Limits as the contract writes them. */
export function limitsDocument(
  { work, method }: ReturnType<typeof limitsWork>,
  limits: readonly ToleranceLimit[],
  knowledge: Knowledge,
): MethodLimits {
  const found = new Set(limits.map((l) => l.component));
  return {
    contract: 1,
    knowledge: { version: knowledge.version, hash: knowledge.hash },
    method: { id: method.id, summary: method.summary },
    limits: limits.map((limit) => limitRow(work.task, limit, knowledge)),
    without: [...work.components, ...work.also]
      .filter((id) => !found.has(id))
      .map((id) => shownIon(work.task, id, knowledge)),
  };
}
