import type { DataRemark } from "./knowledge.ts";
import { type ComparedReaction, groupBy } from "./neighbour-values.ts";

/** A protonation constant above the one before it by more than this (log10 units) is listed; equal sites differ by at least -0.6. */
const PROTONATION_RISE = 0.1;
/** A step to a further ligand that is firmer than the one before by more than this is listed. */
const STEP_RISE = 0.5;
/** A step that takes the complex apart again (log10 K below this) is listed. */
const STEP_FLOOR = -1.5;
/** Metals whose second step is known to be firmer than the first: linear and square planar complexes. */
const LINEAR_METALS: ReadonlySet<string> = new Set(["Ag+", "Cu+", "Hg2+", "Pd2+", "Tl3+"]);

const PROTONATION = /^\[H?(\d*)L\]\/\(\[H?\d*L\]\[H\]\)$/;
const OVERALL = /^\[ML(\d*)\]\/\(\[M\]\[L\](?:\^\d+)?\)$/;
const STEPWISE = /^\[ML(\d+)\]\/\(\[ML\d*\]\[L\]\)$/;

/** Protonation constants of a ligand that rise where they should fall. */
export function checkProtonation(ligand: string, entries: readonly ComparedReaction[]): DataRemark[] {
  const steps = new Map<number, ComparedReaction>();
  for (const entry of entries) {
    const match = entry.metal === "H+" ? PROTONATION.exec(entry.reaction.text) : null;
    if (match !== null && entry.reaction.text.startsWith("[H"))
      steps.set(match[1] === "" ? 1 : Number(match[1]), entry);
  }
  const remarks: DataRemark[] = [];
  for (const [n, entry] of steps) {
    const before = steps.get(n - 1);
    if (before === undefined || entry.log10K <= before.log10K + PROTONATION_RISE) continue;
    const text = `Protonation ${n} (${entry.log10K.toFixed(2)}, ${entry.records}) is firmer than ${n - 1} (${before.log10K.toFixed(2)}, ${before.records}).`;
    remarks.push({ kind: "suspect", about: `${ligand} H+`, text });
  }
  return remarks;
}

/** Stepwise constants of metal and ligand that rise, or fall so far that a further ligand would take the complex apart. */
export function checkSteps(ligand: string, entries: readonly ComparedReaction[]): DataRemark[] {
  const remarks: DataRemark[] = [];
  for (const [metal, of] of groupBy(entries, (entry) => entry.metal)) {
    if (metal === "H+") continue;
    const overall = overallConstants(of);
    let previous: number | undefined;
    let lastBeta = 0;
    for (let n = 1; n <= 6; n++) {
      const beta = overall.get(n);
      if (beta === undefined) break;
      const step = beta.log10Beta - lastBeta;
      const about = `${ligand} ${metal}`;
      const numbers = `log10 K${n} = ${step.toFixed(2)} (${beta.records})`;
      if (n > 1 && step < STEP_FLOOR) {
        remarks.push({ kind: "suspect", about, text: `${numbers}: log10 beta${n} lies below log10 beta${n - 1}.` });
      } else if (previous !== undefined && step > previous + STEP_RISE && !LINEAR_METALS.has(metal)) {
        remarks.push({
          kind: "suspect",
          about,
          text: `${numbers} is firmer than log10 K${n - 1} = ${previous.toFixed(2)}.`,
        });
      }
      previous = step;
      lastBeta = beta.log10Beta;
    }
  }
  return remarks;
}

function overallConstants(entries: readonly ComparedReaction[]): Map<number, { log10Beta: number; records: string }> {
  const overall = new Map<number, { log10Beta: number; records: string }>();
  const stepwise = new Map<number, ComparedReaction>();
  for (const entry of entries) {
    const match = OVERALL.exec(entry.reaction.text);
    if (match !== null) {
      const n = match[1] === "" ? 1 : Number(match[1]);
      overall.set(n, { log10Beta: entry.log10K, records: entry.records });
    }
    const step = STEPWISE.exec(entry.reaction.text);
    if (step !== null) stepwise.set(Number(step[1]), entry);
  }
  for (const [n, entry] of [...stepwise].sort(([a], [b]) => a - b)) {
    const before = overall.get(n - 1);
    if (before !== undefined && !overall.has(n)) {
      overall.set(n, { log10Beta: before.log10Beta + entry.log10K, records: entry.records });
    }
  }
  return overall;
}
