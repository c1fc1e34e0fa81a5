import type { DataRemark } from "./knowledge.ts";
import { type ComparedReaction, groupBy } from "./neighbour-values.ts";

/** Divalent metals in the order of Irving and Williams; zinc comes back down after copper. */
const RISING_TO_COPPER = ["Mn2+", "Fe2+", "Co2+", "Ni2+", "Cu2+"] as const;
/** A 1:1 constant that breaks the order by more than this (log10 units) is listed. */
const ORDER_LIMIT = 0.5;

/** Rare earths by atomic number: constants change smoothly along them. */
const ATOMIC_NUMBERS: Readonly<Record<string, number>> = {
  "La3+": 57,
  "Ce3+": 58,
  "Pr3+": 59,
  "Nd3+": 60,
  "Sm3+": 62,
  "Eu3+": 63,
  "Gd3+": 64,
  "Tb3+": 65,
  "Dy3+": 66,
  "Ho3+": 67,
  "Er3+": 68,
  "Tm3+": 69,
  "Yb3+": 70,
  "Lu3+": 71,
};
/** A rare earth whose constant (per ligand bound, for 2:3 solids per formula) departs from its neighbours' line by more than this is listed. */
const SMOOTH_LIMIT = 0.8;

/** 1:1 constants of manganese to zinc that break the order of Irving and Williams: for soft or strong-field ligands the chemistry does so itself. */
export function checkDivalentOrder(ligand: string, entries: readonly ComparedReaction[]): DataRemark[] {
  const of = new Map(entries.filter((e) => e.reaction.text === "[ML]/([M][L])").map((e) => [e.metal, e]));
  const remarks: DataRemark[] = [];
  const compare = (lower: ComparedReaction, upper: ComparedReaction): void => {
    if (lower.log10K <= upper.log10K + ORDER_LIMIT) return;
    const text = `Order of the divalent metals: ${lower.metal} ${lower.log10K.toFixed(2)} (${lower.records}) above ${upper.metal} ${upper.log10K.toFixed(2)} (${upper.records}).`;
    remarks.push({ kind: "suspect", about: `${ligand} ${lower.metal}, ${ligand} ${upper.metal}`, text });
  };
  const present = RISING_TO_COPPER.map((metal) => of.get(metal)).filter((entry) => entry !== undefined);
  for (const [i, entry] of present.entries()) {
    const next = present[i + 1];
    if (next !== undefined) compare(entry, next);
  }
  const zinc = of.get("Zn2+");
  const copper = of.get("Cu2+");
  if (zinc !== undefined && copper !== undefined) compare(zinc, copper);
  return remarks;
}

/** The same for enthalpies, kJ/mol. */
const SMOOTH_LIMIT_KJ_PER_MOL = 12;

/** Rare earths that depart from the line between their neighbours in the series, for each reaction of the ligand that has at least three. */
export function checkRareEarths(ligand: string, entries: readonly ComparedReaction[]): DataRemark[] {
  const remarks: DataRemark[] = [];
  const earths = entries.filter((entry) => entry.metal in ATOMIC_NUMBERS);
  for (const [text, series] of groupBy(earths, (entry) => entry.reaction.text)) {
    const constants = series.map(({ metal, log10K, records }) => ({ metal, value: log10K, records }));
    const enthalpies = series.flatMap(({ metal, reaction }) => {
      const [first] = reaction.enthalpies;
      if (first === undefined) return [];
      return [{ metal, value: first.kJPerMol, records: `enthalpy, record ${first.provenance.record ?? "unknown"}` }];
    });
    for (const { metal, text: found } of [
      ...offTheLine(constants, SMOOTH_LIMIT),
      ...offTheLine(enthalpies, SMOOTH_LIMIT_KJ_PER_MOL),
    ]) {
      remarks.push({ kind: "suspect", about: `${ligand} ${metal}`, text: `${text}: ${found}` });
    }
  }
  return remarks;
}

interface SeriesValue {
  readonly metal: string;
  readonly value: number;
  readonly records: string;
}

function offTheLine(series: readonly SeriesValue[], limit: number): { metal: string; text: string }[] {
  const sorted = [...series].sort((a, b) => ATOMIC_NUMBERS[a.metal]! - ATOMIC_NUMBERS[b.metal]!);
  const found: { metal: string; text: string }[] = [];
  for (const [i, entry] of sorted.entries()) {
    const before = sorted[i - 1];
    const after = sorted[i + 1];
    if (before === undefined || after === undefined) continue;
    const [zb, z, za] = [before, entry, after].map((e) => ATOMIC_NUMBERS[e.metal]!) as [number, number, number];
    const line = before.value + ((after.value - before.value) * (z - zb)) / (za - zb);
    if (Math.abs(entry.value - line) <= limit) continue;
    const neighbours = `${before.metal} ${before.value.toFixed(2)}, ${after.metal} ${after.value.toFixed(2)}`;
    const text = `${entry.metal} ${entry.value.toFixed(2)} (${entry.records}) is off the line of its neighbours (${neighbours}; expected ${line.toFixed(2)}).`;
    found.push({ metal: entry.metal, text });
  }
  return found;
}
