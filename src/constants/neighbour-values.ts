import type { Reaction } from "./knowledge.ts";
import { selectRecord } from "./select-constant.ts";

/** The conditions all neighbours are compared at: where most records stand. */
const COMPARED_AT = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };
/** Davies equation at 25 C (A = 0.509): sqrt(I)/(1 + sqrt(I)) - 0.3 I, held at its value at 0.5 mol/L beyond. */
const DAVIES_A = 0.509;
const DAVIES_LIMIT_MOL_PER_L = 0.5;

/** Change of log10 K of a reaction with this sum of nu z^2 from `from` to `to` (mol/L), by the Davies equation at 25 C. */
export function daviesShift(deltaZ2: number, from: number, to: number): number {
  return deltaZ2 * DAVIES_A * (daviesTerm(to) - daviesTerm(from));
}

function daviesTerm(ionicStrengthMolPerL: number): number {
  const root = Math.sqrt(Math.min(ionicStrengthMolPerL, DAVIES_LIMIT_MOL_PER_L));
  return root / (1 + root) - 0.3 * root * root;
}

/** A reaction of one metal (or H+) with one ligand, taken to I = 0.1 mol/L. */
export interface ComparedReaction {
  readonly ligand: string;
  readonly metal: string;
  readonly reaction: Reaction;
  readonly log10K: number; // at I = 0.1 mol/L, from the record chosen for 25 C
  readonly records: string; // ids of the records behind it, for a remark
  readonly doubtful: boolean;
}

/** A reaction with the ligand and the metal that its id names, or null where it has no value. */
export function comparedReaction(reaction: Reaction): ComparedReaction | null {
  if (reaction.records.length === 0) return null;
  const [ligand, metal] = reaction.id.split(" ", 2) as [string, string];
  const { record } = selectRecord(reaction, COMPARED_AT);
  const shift = daviesShift(reaction.deltaZ2, record.ionicStrengthMolPerL, COMPARED_AT.ionicStrengthMolPerL);
  const records =
    record.provenance.record === undefined ? record.provenance.source : `record ${record.provenance.record}`;
  return { ligand, metal, reaction, log10K: record.log10K + shift, records, doubtful: record.doubtful };
}

/** Entries by key, in the order in which keys and entries come. */
export function groupBy<T>(entries: readonly T[], keyOf: (entry: T) => string): Map<string, T[]> {
  const groups = new Map<string, T[]>();
  for (const entry of entries) {
    const key = keyOf(entry);
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [entry]);
    else group.push(entry);
  }
  return groups;
}
