import type { ConstantRecord, DataRemark, Reaction } from "./knowledge.ts";
import { type ComparedReaction, comparedReaction, daviesShift, groupBy } from "./neighbour-values.ts";
import { checkDivalentOrder, checkRareEarths } from "./neighbour-metals.ts";
import { checkProtonation, checkSteps } from "./neighbour-steps.ts";

/** Two records of one reaction under the same conditions further apart than this (log10 units) are listed. */
const DUPLICATE_LIMIT = 0.5;
/** Two records of one reaction at 0 and about 0.1 mol/L whose difference departs from the Davies equation by more than this are listed. */
const IONIC_STRENGTH_LIMIT = 0.7;
/** Enthalpies of one reaction within 10 K and 0.5 mol/L of each other further apart than this (kJ/mol) are listed. */
const ENTHALPY_LIMIT_KJ_PER_MOL = 10;

/**
 * What looks wrong beside its neighbours, as remarks of kind "suspect" or "disagreement" (records of one reaction). Nothing is dropped for it. Checked:
 * records of one reaction against each other (same conditions; along ionic strength; enthalpies), protonation constants in order, stepwise
 * constants falling, reactions with doubtful values only, divalent metals from manganese to zinc in the usual order, rare earths smooth along the series.
 */
export function checkNeighbours(reactions: readonly Reaction[]): DataRemark[] {
  const compared = reactions.map(comparedReaction).filter((entry) => entry !== null);
  const byLigand = groupBy(compared, (entry) => entry.ligand);
  const remarks: DataRemark[] = [];
  for (const entry of compared) remarks.push(...checkRecords(entry));
  for (const reaction of reactions) remarks.push(...checkEnthalpies(reaction));
  for (const [ligand, entries] of byLigand) {
    remarks.push(...listDoubtful(ligand, entries));
    remarks.push(...checkProtonation(ligand, entries), ...checkSteps(ligand, entries));
    remarks.push(...checkDivalentOrder(ligand, entries), ...checkRareEarths(ligand, entries));
  }
  return remarks;
}

function checkRecords({ reaction }: ComparedReaction): DataRemark[] {
  const remarks: DataRemark[] = [];
  const { records } = reaction;
  for (const [i, a] of records.entries()) {
    for (const b of records.slice(i + 1)) {
      if (Math.abs(a.temperatureC - b.temperatureC) > 5) continue;
      const [low, high] = a.ionicStrengthMolPerL <= b.ionicStrengthMolPerL ? [a, b] : [b, a];
      if (low.ionicStrengthMolPerL === high.ionicStrengthMolPerL) {
        if (low.medium === high.medium && Math.abs(low.log10K - high.log10K) > DUPLICATE_LIMIT) {
          remarks.push({ kind: "disagreement", about: reaction.id, text: `Same conditions, ${pair(low, high)}.` });
        }
      } else if (low.ionicStrengthMolPerL === 0 && high.ionicStrengthMolPerL <= 0.15) {
        const expected = daviesShift(reaction.deltaZ2, 0, high.ionicStrengthMolPerL);
        const found = high.log10K - low.log10K;
        if (Math.abs(found - expected) > IONIC_STRENGTH_LIMIT) {
          const text = `Runs against ionic strength: ${pair(low, high)} differ by ${found.toFixed(2)}, the Davies equation says ${expected.toFixed(2)}.`;
          remarks.push({ kind: "suspect", about: reaction.id, text });
        }
      }
    }
  }
  return remarks;
}

function pair(low: ConstantRecord, high: ConstantRecord): string {
  const [a, b] = [low, high].map((r) => `${nameOf(r)} (I ${r.ionicStrengthMolPerL}: ${r.log10K})`) as [string, string];
  return `${a} and ${b}`;
}

function checkEnthalpies(reaction: Reaction): DataRemark[] {
  const near = reaction.enthalpies.filter((h) => Math.abs(h.temperatureC - 25) <= 10 && h.ionicStrengthMolPerL <= 1);
  if (near.length < 2) return [];
  const values = near.map((h) => h.kJPerMol);
  const spread = Math.max(...values) - Math.min(...values);
  if (spread <= ENTHALPY_LIMIT_KJ_PER_MOL) return [];
  const list = near.map((h) => `${h.kJPerMol} (${nameOf(h)}${h.doubtful ? ", doubtful" : ""})`).join(", ");
  return [{ kind: "suspect", about: reaction.id, text: `Enthalpies jump: ${list} kJ/mol.` }];
}

function nameOf(value: { provenance: { record?: string; source: string } }): string {
  return value.provenance.record === undefined ? value.provenance.source : `record ${value.provenance.record}`;
}

/** The reactions of a ligand that have nothing but values printed in parentheses: one remark, since each carries its mark as well. */
function listDoubtful(ligand: string, entries: readonly ComparedReaction[]): DataRemark[] {
  const doubtful = entries.filter(({ reaction }) => reaction.records.every((record) => record.doubtful));
  if (doubtful.length === 0) return [];
  const list = doubtful.map(({ metal, reaction }) => `${metal} ${reaction.text}`).join("; ");
  return [{ kind: "suspect", about: ligand, text: `Only values printed in parentheses (doubtful): ${list}.` }];
}
