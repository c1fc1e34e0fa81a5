import type { ComponentId, Knowledge, SeparationRecord } from "../constants/knowledge.ts";

/** One step of a separation: what it takes away from the analyte, or the analyte that it takes away from the rest. */
export interface SeparationStep {
  readonly record: SeparationRecord;
  readonly takes: "interferents" | "analyte";
  /** Of the ions to be parted from the analyte, those that this step parts. */
  readonly ions: readonly ComponentId[];
}

export interface Separation {
  readonly steps: readonly SeparationStep[];
  /** Ions for which no step is on record that parts them from the analyte. */
  readonly unknown: readonly ComponentId[];
}

/** Ions to be parted from those that one titration determines. */
export interface Parting {
  readonly removed: readonly ComponentId[];
  readonly determines: readonly ComponentId[];
}

/** What one record does for one parting: a step serves when it takes an interferent and leaves every analyte, or takes every analyte and leaves the interferent. */
function stepOf(record: SeparationRecord, { removed, determines }: Parting): SeparationStep | null {
  const goes = (ion: ComponentId): boolean => record.removes.includes(ion);
  const mayGo = (ion: ComponentId): boolean => goes(ion) || record.takesAlong.includes(ion);
  if (!determines.some(mayGo)) return { record, takes: "interferents", ions: removed.filter(goes) };
  if (determines.every(goes)) return { record, takes: "analyte", ions: removed.filter((ion) => !mayGo(ion)) };
  return null;
}

/** Whether one step on record parts everything that is to go. */
export const parts = (record: SeparationRecord, parting: Parting): boolean =>
  stepOf(record, parting)?.ions.length === parting.removed.length;

/** The fewest steps on record that part the ions `removed` from those that are determined: greedily, the step that parts most first. */
export const separationOf = (
  removed: readonly ComponentId[],
  determines: readonly ComponentId[],
  knowledge: Knowledge,
): Separation => separationsOf([{ removed, determines }], knowledge)[0]!;

/**
 * The same for the titrations of one method, in their order: a step that parts the ions of several of them (one in the precipitate,
 * the other in the filtrate) is one step, and is preferred to one for each.
 */
export function separationsOf(partings: readonly Parting[], knowledge: Knowledge): Separation[] {
  const candidates = knowledge.separations.map((record) => partings.map((parting) => stepOf(record, parting)));
  const found = partings.map(({ removed }) => ({ steps: [] as SeparationStep[], unknown: [...removed] }));
  const partsOf = (step: SeparationStep | null, i: number): ComponentId[] =>
    (step?.ions ?? []).filter((ion) => found[i]!.unknown.includes(ion));
  for (;;) {
    const gain = (row: readonly (SeparationStep | null)[]): number =>
      row.reduce((n, step, i) => n + partsOf(step, i).length, 0);
    let best: readonly (SeparationStep | null)[] = [];
    for (const row of candidates) if (gain(row) > gain(best)) best = row;
    if (best.length === 0) return found;
    best.forEach((step, i) => {
      const ions = partsOf(step, i);
      if (step === null || ions.length === 0) return;
      found[i]!.steps.push({ ...step, ions });
      found[i]!.unknown = found[i]!.unknown.filter((ion) => !ions.includes(ion));
    });
  }
}
