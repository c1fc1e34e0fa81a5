import type { Knowledge } from "../constants/knowledge.ts";
import { bareStage, develop } from "./develop.ts";
import { promising, singleMethod, type EvaluatedMethod } from "./methods.ts";
import { releaseSkeletons } from "./release-plan.ts";
import { searchMethods, type MethodSearch } from "./search.ts";
import { backSkeletons } from "./back-skeletons.ts";
import {
  directSkeletons,
  LAST_TITRANTS,
  OTHER_TITRANTS,
  USUAL_FIELD,
  type Field,
  type Make,
  type Skeleton,
} from "./skeletons.ts";
import type { Task } from "./types.ts";

/**
 * Every titration of a task with one analyte that can be thought of: what the search for a recommendation works out, and
 * what it leaves out once it has enough: all titrants, all dyes, back titrations by analogy, and releases with nothing beside.
 */
export function everyWay(task: Task, knowledge: Knowledge): MethodSearch {
  const search = searchMethods(task, knowledge);
  const analyte = task.analytes[0]!.component;
  if (task.analytes.length !== 1 || knowledge.components.get(analyte)?.kind !== "metal") return search;
  const known = new Map<string, EvaluatedMethod>(search.methods.map((m) => [m.id, m]));
  const titrants = [...OTHER_TITRANTS, ...LAST_TITRANTS].filter((id) => search.shelf(id));
  const fields: readonly Field[] = [
    { ...USUAL_FIELD, analogous: true },
    { titrants, dyes: null, analogous: false },
  ];
  const makeOf = (field: Field): Make => ({ task, knowledge, shelf: search.shelf, determines: [analyte], field });
  const skeletons: Skeleton[] = [
    ...releaseSkeletons(makeOf(USUAL_FIELD)),
    ...fields.map(makeOf).flatMap((make) => [...directSkeletons(make), ...backSkeletons(make)]),
  ];
  const bare = skeletons.map((skeleton) => bareStage(task, skeleton, knowledge, search.shelf));
  for (const stage of promising(task, bare, knowledge).flatMap((b) => develop(task, b, knowledge, search.shelf))) {
    const method = singleMethod(task, stage, knowledge);
    if (!known.has(method.id)) known.set(method.id, method);
  }
  return { ...search, methods: [...known.values()] };
}
