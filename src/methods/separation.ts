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

/**
 * The fewest steps on record that part the ions `removed` from those that are determined: greedily, the step that parts most first.
 * A step serves when it takes an interferent and leaves every analyte, or takes every analyte and leaves the interferent.
 */
export function separationOf(
  removed: readonly ComponentId[],
  determines: readonly ComponentId[],
  knowledge: Knowledge,
): Separation {
  const candidates = knowledge.separations.flatMap((record): SeparationStep[] => {
    const goes = (ion: ComponentId): boolean => record.removes.includes(ion);
    const mayGo = (ion: ComponentId): boolean => goes(ion) || record.takesAlong.includes(ion);
    if (!determines.some(mayGo)) return [{ record, takes: "interferents", ions: removed.filter(goes) }];
    if (determines.every(goes)) return [{ record, takes: "analyte", ions: removed.filter((ion) => !mayGo(ion)) }];
    return [];
  });
  const steps: SeparationStep[] = [];
  let left = [...removed];
  for (;;) {
    const gain = (step: SeparationStep): number => step.ions.filter((ion) => left.includes(ion)).length;
    const best = candidates.reduce<SeparationStep | null>(
      (most, step) => (gain(step) > (most === null ? 0 : gain(most)) ? step : most),
      null,
    );
    if (best === null) return { steps, unknown: left };
    const ions = best.ions.filter((ion) => left.includes(ion));
    steps.push({ ...best, ions });
    left = left.filter((ion) => !ions.includes(ion));
  }
}
