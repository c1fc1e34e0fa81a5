import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { bareStage, develop, type DevelopedStage } from "./develop.ts";
import { demasked, holdsForGood } from "./demask.ts";
import { skeletonsOf } from "./detection-skeletons.ts";
import { dyeBreadth, promising, roughCost, seenWith, stageKey, stagesFor, type EvaluatedMethod } from "./methods.ts";
import { portions, resultOf } from "./portions.ts";
import type { Shelf } from "./shelf.ts";
import { USUAL_FIELD, type Skeleton } from "./skeletons.ts";
import type { MaskingStep, Task } from "./types.ts";
import { combineDifference } from "./uncertainty.ts";

/** How many titrations of a group are carried on into combinations. */
const CARRIED_ON = 4;
const FOLLOWED = 3;
/** How many continuations of a titration in the same vessel are looked at. */
const NEXT_TRIED = 12;

/** Methods that give several results: separate portions, one portion in turn, or a difference of two titrations. */
export function combinedMethods(
  task: Task,
  asked: readonly (readonly ComponentId[])[],
  knowledge: Knowledge,
  shelf: Shelf,
): EvaluatedMethod[] {
  // The order of the rows in a brief says nothing: portions stand in an order of their own.
  const groups = [...asked].sort((a, b) => a.join().localeCompare(b.join()));
  const found = groups.map((group) => stagesFor(task, group, knowledge, shelf, "until-served"));
  const byGroup = found.map((stages) => best(task, stages, knowledge));
  return [
    ...portions(task, found, byGroup, knowledge),
    ...successive(task, groups, found, knowledge, shelf),
    ...(groups.length === 2 ? differences(task, groups, byGroup, knowledge, shelf) : []),
  ];
}

/** The most promising titrations of one group, different dyes and preparations before shades of the same. */
export function best(task: Task, stages: readonly DevelopedStage[], knowledge: Knowledge): DevelopedStage[] {
  const cost = new Map(stages.map((s) => [s, roughCost(task, s, knowledge)]));
  const seen = new Map<string, number>();
  return [...stages]
    .filter((s) => s.evaluation.status !== "failed")
    .sort((a, b) => cost.get(a)! - cost.get(b)! || stageKey(a).localeCompare(stageKey(b)))
    .filter((s) => {
      const kind = `${s.plan.mode} ${seenWith(s.plan)} ${s.plan.removed.join()}`;
      const n = seen.get(kind) ?? 0;
      seen.set(kind, n + 1);
      return n < 1;
    })
    .slice(0, 12);
}

/** Order in which groups may be titrated in one portion: every order of up to three groups. */
function orders(n: number): number[][] {
  if (n <= 1) return n === 1 ? [[0]] : [];
  if (n > 3) return [Array.from({ length: n }, (_, i) => i)];
  return orders(n - 1).flatMap((rest) =>
    Array.from({ length: n }, (_, at) => [...rest.slice(0, at), n - 1, ...rest.slice(at)]),
  );
}

function successive(
  task: Task,
  groups: readonly (readonly ComponentId[])[],
  found: readonly (readonly DevelopedStage[])[],
  knowledge: Knowledge,
  shelf: Shelf,
): EvaluatedMethod[] {
  return orders(groups.length).flatMap((order) => {
    // What can start is chosen before the best are: a separation or a back titration is no rival here.
    const able = (found[order[0]!] ?? []).filter(
      (s) =>
        s.plan.backTitrant === null &&
        // A chelate in bulk leaves its metal in the vessel.
        s.plan.mode !== "displacement" &&
        // A way round changes the whole portion: nothing else is titrated in it after.
        s.plan.detour === null &&
        s.plan.removed.length === 0 &&
        s.remaining.length === 0 &&
        !holdsForGood(
          s.plan.masking,
          order.slice(1).flatMap((i) => groups[i]!),
          knowledge,
          shelf,
        ),
    );
    const starts = best(task, able, knowledge);
    const later = order.slice(1).map((i) => groups[i]!);
    // A dye that serves the next titration too is worth more than a shade of uncertainty.
    const serves = (s: DevelopedStage): number => Number(!later.every((group) => dyeServes(s, group, knowledge)));
    const ranked = [...starts].sort((a, b) => serves(a) - serves(b));
    return ranked.slice(0, FOLLOWED).flatMap((start) => follow(task, [start], later, knowledge, shelf));
  });
}

const dyeServes = (stage: DevelopedStage, group: readonly ComponentId[], knowledge: Knowledge): boolean =>
  knowledge.indicators
    .get(stage.plan.indicator?.id ?? "")
    ?.uses.some(
      (u) =>
        (u.mode === "direct" || u.mode === "back") &&
        group.every((ion) => u.ions.includes(ion)) &&
        u.pH[1] >= stage.plan.pH,
    ) ?? false;

function follow(
  task: Task,
  done: readonly DevelopedStage[],
  todo: readonly (readonly ComponentId[])[],
  knowledge: Knowledge,
  shelf: Shelf,
): EvaluatedMethod[] {
  const next = todo[0];
  if (next === undefined)
    return [
      {
        id: `successive: ${done.map(stageKey).join(" ; ")}`,
        mode: "successive",
        stages: done,
        results: done.map((s) => resultOf(task, s, knowledge)),
        portions: 1,
      },
    ];
  const last = done.at(-1)!;
  // After a back titration or a release the vessel holds two standard solutions: nothing is titrated on.
  if (last.plan.backTitrant !== null) return [];
  // The vessel as the last titration left it: fuller by its titre, its titrant bound to what it determined.
  const addedML = done.reduce((ml, s) => ml + s.evaluation.endPointML, 0);
  const grown = task.portion.titrationVolumeML + addedML;
  const metals = done.flatMap((s) => [...s.plan.determines]);
  const titrantMolPerL = done.reduce((s, d) => s + (d.plan.titrant.molPerL * d.evaluation.endPointML) / grown, 0);
  // Masks and auxiliaries of the last titration are those of all before it, thinner by its titre.
  const thinner = (task.portion.titrationVolumeML + (last.plan.carried?.addedML ?? 0)) / grown;
  const kept: MaskingStep[] = last.plan.masking.map((m) => ({ ...m, molPerL: m.molPerL * thinner }));
  const helped = last.plan.auxiliary.map((a) => ({ ...a, molPerL: a.molPerL * thinner }));
  const make = { task, knowledge, shelf, determines: next, field: USUAL_FIELD };
  // The dye that is in the vessel already comes first, then those in wide use.
  const preference = (s: Skeleton): number =>
    (seenWith(s.plan) === seenWith(last.plan) ? 0 : 100) +
    50 -
    Math.min(50, dyeBreadth(s.plan.indicator?.id, knowledge));
  const options = skeletonsOf(make)
    .filter((s) => s.plan.titrant.id === last.plan.titrant.id && s.plan.pH >= last.plan.pH)
    .filter((s) => kept.every((m) => s.plan.pH >= (knowledge.agents.get(m.agent)?.pH[0] ?? 0)))
    .sort((a, b) => preference(a) - preference(b))
    .slice(0, NEXT_TRIED)
    .flatMap((skeleton): Skeleton[] => {
      const there = helped.filter((a) => skeleton.plan.auxiliary.every((own) => own.id !== a.id));
      const carriedOn = {
        ...skeleton.plan,
        carried: { metals, titrantMolPerL, addedML },
        masking: [...kept, ...skeleton.plan.masking],
        auxiliary: [...there, ...skeleton.plan.auxiliary],
        demasked: last.plan.demasked,
      };
      const plan = demasked(carriedOn, knowledge, shelf);
      return plan === null ? [] : [{ ...skeleton, plan }];
    });
  const starts = promising(
    task,
    options.map((s) => bareStage(task, s, knowledge, shelf)),
    knowledge,
  );
  const developed = best(
    task,
    starts.flatMap((s) => develop(task, s, knowledge, shelf, false)),
    knowledge,
  );
  const sameDye = (s: DevelopedStage): number => Number(seenWith(s.plan) !== seenWith(last.plan));
  // A continuation that leaves something undone is no use, whatever its dye.
  const undone = (s: DevelopedStage): number => Number(s.remaining.length > 0);
  developed.sort((a, b) => undone(a) - undone(b) || sameDye(a) - sameDye(b));
  return developed.slice(0, FOLLOWED).flatMap((s) => follow(task, [...done, s], todo.slice(1), knowledge, shelf));
}

function differences(
  task: Task,
  groups: readonly (readonly ComponentId[])[],
  byGroup: readonly (readonly DevelopedStage[])[],
  knowledge: Knowledge,
  shelf: Shelf,
): EvaluatedMethod[] {
  const together = best(task, stagesFor(task, groups.flat(), knowledge, shelf, "until-served"), knowledge).filter(
    (s) => s.remaining.length === 0,
  );
  const sum = together.slice(0, CARRIED_ON);
  return [0, 1].flatMap((alone) => {
    const other = groups[1 - alone]!;
    const partner = (byGroup[alone] ?? [])
      .filter((s) => s.remaining.length === 0 && s.plan.removed.length === 0)
      .slice(0, CARRIED_ON);
    return sum.flatMap((whole, i) => {
      const single = partner[Math.min(i, partner.length - 1)];
      if (!single) return [];
      return [
        {
          id: `difference: ${stageKey(whole)} ; ${stageKey(single)}`,
          mode: "difference" as const,
          stages: [whole, single],
          results: [
            resultOf(task, single, knowledge),
            { determines: other, ...combineDifference(task, whole.evaluation, single.evaluation, knowledge) },
          ],
          portions: 2,
        },
      ];
    });
  });
}
