import type { Knowledge } from "./knowledge.ts";

/** Ids of the briefs and answers, by kind (data/contract-ids.json). */
export interface ContractIds {
  readonly titrants: readonly string[];
  readonly metalTitrants: readonly string[];
  readonly indicators: readonly string[];
  readonly buffers: readonly string[];
  readonly agents: readonly string[];
  readonly indicatorClasses: readonly string[];
  readonly preparation: readonly string[];
}

/** What the knowledge holds of one id of the vocabulary. */
export interface Coverage {
  readonly kind: keyof ContractIds;
  readonly id: string;
  readonly status: "data" | "no-usable-data";
  readonly rests: readonly string[]; // what there is, in words; empty where there is nothing
  readonly missing: readonly string[]; // what there is not
}

type Check = readonly [held: boolean, what: string];

/**
 * What the knowledge holds of every id of the vocabulary, in its order: an id is covered when its essential data are there
 * (a record, and for dyes something an end point can rest on); everything else that is lacking is named.
 */
export function vocabularyCoverage(knowledge: Knowledge, ids: ContractIds): readonly Coverage[] {
  const inModel = (component: string | null | undefined) =>
    component !== null && component !== undefined && knowledge.components.has(component);
  const reagent = (id: string): Check => [knowledge.reagents.has(id), "reagent record with hazards"];
  const row = (
    kind: keyof ContractIds,
    id: string,
    essential: readonly Check[],
    further: readonly Check[],
  ): Coverage => {
    const all = [...essential, ...further];
    return {
      kind,
      id,
      status: essential.some(([held]) => held) ? "data" : "no-usable-data",
      rests: all.filter(([held]) => held).map(([, what]) => what),
      missing: all.filter(([held]) => !held).map(([, what]) => what),
    };
  };
  const indicator = (id: string) => {
    const record = knowledge.indicators.get(id);
    const endPoint: Check[] = [
      [record?.hasConstants ?? false, "metal constants"],
      [(record?.transitions.length ?? 0) > 0, "published transitions"],
      [(record?.uses.length ?? 0) > 0, "uses on record"],
    ];
    return row("indicators", id, endPoint, [[(record?.colours.length ?? 0) > 0, "colours"], reagent(id)]);
  };
  const agent = (id: string) => {
    const record = knowledge.agents.get(id);
    const rows = knowledge.masking.some((m) => m.agent === id);
    return row(
      "agents",
      id,
      [[record !== undefined && rows, "masking rows and amounts"]],
      [[inModel(record?.component), "constants in the model"], reagent(id)],
    );
  };
  const buffer = (id: string) => {
    const record = knowledge.buffers.get(id);
    const constants: Check[] = record?.kind === "pair" ? [[inModel(record.component), "constants in the model"]] : [];
    return row("buffers", id, [[record !== undefined, "working pH and amounts"]], [...constants, reagent(id)]);
  };
  return [
    ...ids.titrants.map((id) =>
      row("titrants", id, [[knowledge.titrants.has(id) && inModel(id), "strengths and constants"]], [reagent(id)]),
    ),
    ...ids.metalTitrants.map((id) =>
      row(
        "metalTitrants",
        id,
        [[knowledge.metalTitrants.has(id), "strengths"]],
        [[inModel(id), "constants in the model"], reagent(id)],
      ),
    ),
    ...ids.indicators.map(indicator),
    ...ids.buffers.map(buffer),
    ...ids.agents.map(agent),
    ...ids.indicatorClasses.map((id) =>
      row("indicatorClasses", id, [[[...knowledge.indicators.values()].some((i) => i.class === id), "indicators"]], []),
    ),
    ...ids.preparation.map((id) =>
      row(
        "preparation",
        id,
        [[knowledge.reagents.has(id) || OPERATIONS.has(id), "reagent record, or a mere operation"]],
        [],
      ),
    ),
  ];
}

/** Preparation steps that are done, not added: they need no reagent record. */
const OPERATIONS: ReadonlySet<string> = new Set([
  "warm",
  "heat",
  "boil",
  "cool",
  "wait",
  "excess-titrant-first",
  "remove-carbonate",
  "separate",
  "precipitate-and-filter",
  "air-oxidise",
  "reduce",
  "depolymerise",
]);
