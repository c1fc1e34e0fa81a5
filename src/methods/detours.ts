import type { ComponentId, DetourRecord, IndicatorRecord, IndicatorUse, Knowledge } from "../constants/knowledge.ts";
import { skeletonsOf } from "./detection-skeletons.ts";
import { bottleOnShelf, type Shelf } from "./shelf.ts";
import { backPlan } from "./back-skeletons.ts";
import { basePlan, forbidden, USUAL_FIELD, withAuxiliary, type Make, type Skeleton } from "./skeletons.ts";
import { benchPH, overlap, standingOf, usesFor, type UseStanding, type Window } from "./dye-uses.ts";
import { buffersFor } from "./buffers.ts";
import { stageSolution, vesselSample } from "./solution.ts";
import type { AddedReagent, Detour, StagePlan, Task } from "./types.ts";

/** The titrant of ways round: they count metals that EDTA binds well. */
const TITRANT = "EDTA";
/** Part of what the analyte takes that must be left over for the titration of a surplus, */
const LEAST_SURPLUS = 0.3;
/** and how much more reagent is tried to get there, where the sample takes some of it too. */
const MORE_REAGENT = [1, 1.5, 2, 3];

interface Way {
  readonly task: Task;
  readonly knowledge: Knowledge;
  readonly shelf: Shelf;
  readonly record: DetourRecord;
}

/** Ways round on record for one analyte, each with every dye in use for its metal; EDTA only, nothing barred by the laboratory. */
export function detourSkeletons(
  task: Task,
  determines: readonly ComponentId[],
  knowledge: Knowledge,
  shelf: Shelf,
): Skeleton[] {
  if (determines.length !== 1 || !shelf(TITRANT)) return [];
  return [...knowledge.detours.values()]
    .filter((record) => record.analyte === determines[0] && onShelf(task, record, knowledge, shelf))
    .flatMap((record) => skeletonsOfWay({ task, knowledge, shelf, record }));
}

function onShelf(task: Task, record: DetourRecord, knowledge: Knowledge, shelf: Shelf): boolean {
  const { avoid, available } = task.laboratory;
  return (
    bottleOnShelf(task, record.reagent, shelf) &&
    (record.precipitant === null || bottleOnShelf(task, record.precipitant, shelf)) &&
    record.further.every(({ id }) => !avoid.includes(id) && (available === null || available.includes(id))) &&
    record.auxiliary.every(({ id }) => shelf(id) && knowledge.agents.has(id)) &&
    !forbidden(task, record.preparation)
  );
}

function skeletonsOfWay(way: Way): Skeleton[] {
  const { task, knowledge, shelf, record } = way;
  const out: Skeleton[] = [];
  const metalTask = countedTask(way);
  const make: Make = { task: metalTask, knowledge, shelf, determines: [record.metal], field: USUAL_FIELD };
  for (const instrument of byInstrument(way, make)) out.push(instrument);
  if (!task.laboratory.detection.includes("visual")) return out;
  for (const indicator of knowledge.indicators.values()) {
    if (!shelf(indicator.id)) continue;
    const choices = record.finish.mode === "direct" ? directChoices(way, indicator) : backChoices(way, indicator);
    for (const { window, use, basis, backTitrant, standing } of choices) {
      const pH = benchPH(window);
      const buffer = buffersFor(pH, knowledge, shelf, new Set())[0];
      if (!buffer) continue;
      const made = backTitrant
        ? backPlan(make, TITRANT, indicator, pH, buffer, backTitrant, use)
        : basePlan(make, TITRANT, indicator, pH, buffer, use);
      const plan = aroundPlan(way, made);
      if (plan && !forbidden(task, plan.preparation)) out.push({ plan, use: standing, useBasis: basis, window });
    }
  }
  return out;
}

/** The same with a photometer or an electrode on the counted metal, where the laboratory has one; no record names it for the way. */
function byInstrument(way: Way, make: Make): Skeleton[] {
  const { record } = way;
  const detection = make.task.laboratory.detection.filter((d) => d !== "visual");
  if (detection.length === 0) return [];
  const task = { ...make.task, laboratory: { ...make.task.laboratory, detection } };
  return skeletonsOf({ ...make, task }).flatMap((skeleton): Skeleton[] => {
    const { backTitrant, pH, titrant } = skeleton.plan;
    const fits =
      record.finish.mode === "direct"
        ? backTitrant === null
        : record.finish.backTitrants.includes(backTitrant?.id ?? "");
    if (!fits || titrant.id !== TITRANT || pH < record.finish.pH[0] || pH > record.finish.pH[1]) return [];
    const plan = aroundPlan(way, skeleton.plan);
    return plan ? [{ ...skeleton, plan, use: "analogous" }] : [];
  });
}

interface Choice {
  readonly window: Window;
  readonly use: IndicatorUse;
  readonly basis: "read" | "memory";
  readonly standing: UseStanding;
  readonly backTitrant: ComponentId | null;
}

/** Uses of the dye for this way round as its own record has them. */
const namedUses = (record: DetourRecord, indicator: IndicatorRecord): IndicatorUse[] =>
  indicator.uses.filter((u) => (u.mode === "indirect" || u.mode === "displacement") && u.ions.includes(record.analyte));

/** "published" where the way round names the dye, or the dye the analyte; else what is known of the metal is an analogy. */
function standingFor(record: DetourRecord, indicator: IndicatorRecord): UseStanding {
  if (record.finish.dyes.includes(indicator.id)) return "published";
  return namedUses(record, indicator).some((u) => standingOf(u) === "published") ? "published" : "analogous";
}

function directChoices({ record }: Way, indicator: IndicatorRecord): Choice[] {
  const standing = standingFor(record, indicator);
  const named = namedUses(record, indicator);
  const alcohol = named.some((u) => u.alcohol);
  const choice = (window: Window, use: IndicatorUse): Choice => ({
    window,
    use: alcohol ? { ...use, alcohol } : use,
    basis: use.provenance.basis === "read" ? "read" : "memory",
    standing,
    backTitrant: null,
  });
  const ofMetal = usesFor(indicator, [record.metal], ["direct", "displacement"]).flatMap(({ window, use }) => {
    const inside = use.titrant ? null : overlap(window, record.finish.pH);
    if (!inside) return [];
    // What is practised for the analyte itself narrows what the metal would allow.
    const practised = named
      .filter((u) => standingOf(u) === "published")
      .map((u) => overlap(inside, u.pH))
      .find((w) => w !== null);
    return [choice(practised ?? inside, use)];
  });
  if (ofMetal.length > 0) return ofMetal;
  return named.flatMap((use) => {
    const inside = overlap(use.pH, record.finish.pH);
    return inside ? [choice(inside, use)] : [];
  });
}

function backChoices({ record, shelf }: Way, indicator: IndicatorRecord): Choice[] {
  if (indicator.id === "Cu-PAN") return [];
  const standing = standingFor(record, indicator);
  return record.finish.backTitrants.filter(shelf).flatMap((backTitrant) =>
    usesFor(indicator, [backTitrant], ["direct"])
      .filter(({ use }) => !use.titrant && !use.chelate)
      .flatMap(({ window, use, basis }) => {
        const inside = overlap(window, record.finish.pH);
        return inside ? [{ window: inside, use, basis, standing, backTitrant }] : [];
      })
      .slice(0, 1),
  );
}

/** A task in which the counted metal stands at the level the titration has to find: for strengths and amounts of the plan. */
function countedTask({ task, record }: Way): Task {
  const analyte = task.analytes.find((a) => a.component === record.analyte)!;
  const ideal = analyte.molPerL / record.analytePerMetal;
  const molPerL = record.kind === "surplus" ? (record.reagentOverNeed - 1) * ideal : ideal;
  return { ...task, analytes: [{ ...analyte, component: record.metal, shown: record.metal, molPerL }] };
}

/** The titration of the metal made into the way round of the analyte: reagents, precipitation, preparation. */
function aroundPlan(way: Way, made: StagePlan): StagePlan | null {
  const { task, knowledge, record } = way;
  const analyte = vesselSample(task).find((c) => c.component === record.analyte)!.inVesselMolPerL;
  const need = analyte / record.analytePerMetal;
  const finishing = made.preparation.filter(
    (step) => step !== "excess-titrant-first" && !record.preparation.includes(step),
  );
  const preparation = [...record.preparation, ...finishing];
  for (const more of record.kind === "surplus" ? MORE_REAGENT : [1]) {
    const detour: Detour = {
      id: record.id,
      metal: record.metal,
      analytePerMetal: record.analytePerMetal,
      reagent: {
        id: record.reagent.id,
        molPerL: bench(more * record.reagentOverNeed * (record.kind === "conversion" ? analyte : need)),
      },
      precipitant: record.precipitant && {
        id: record.precipitant.id,
        molPerL: bench((record.precipitant.overNeed * analyte) / record.precipitant.analytePerMetal),
      },
    };
    let plan: StagePlan = {
      ...made,
      determines: [record.analyte],
      mode: record.kind === "exchange" || record.kind === "conversion" ? "displacement" : made.mode,
      excessTitrantMolPerL: 0,
      added: addedOf(record, detour),
      preparation,
      detour,
    };
    for (const { id, purpose } of record.auxiliary) plan = withAuxiliary(plan, knowledge, id, purpose);
    if (record.kind !== "surplus" || left(task, plan, knowledge) >= LEAST_SURPLUS * need) return plan;
  }
  return null;
}

/** Counted metal that a surplus leaves for the titration, mol/L of the vessel. */
const left = (task: Task, plan: StagePlan, knowledge: Knowledge): number =>
  stageSolution(task, plan, knowledge).totals.get(plan.detour!.metal) ?? 0;

function addedOf(record: DetourRecord, detour: Detour): AddedReagent[] {
  const purposes: Record<DetourRecord["kind"], string> = {
    surplus: record.precipitation ? "precipitant, in excess" : "binds the analyte, in excess",
    precipitate: "precipitant, in excess",
    exchange: "gives its metal to the titrant for the analyte",
    conversion: "precipitant, in excess",
  };
  return [
    ...(detour.precipitant ? [{ ...detour.precipitant, purpose: "precipitant, in excess" }] : []),
    { ...detour.reagent, purpose: purposes[record.kind] },
    ...record.further.map((f) => ({ ...f })),
  ];
}

/** An amount as a bench takes it: two figures. */
const bench = (molPerL: number): number => Number(molPerL.toPrecision(2));
