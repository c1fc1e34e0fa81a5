import { readFileSync } from "node:fs";
import { type Equilibria, loadEquilibria } from "../../src/constants/load-equilibria.ts";
import type { ConstantRecord, Reaction } from "../../src/constants/knowledge.ts";

/** Text of a data file as it stands in the repository. */
export function readDataText(name: string): string {
  return readFileSync(new URL(`../../src/constants/data/${name}`, import.meta.url), "utf8");
}

/** The data files with `edit` applied to the parsed content of one of them: for planting faults. */
export function withEdited(file: string, edit: (content: never) => void): (name: string) => string {
  return (name) => {
    const text = readDataText(name);
    if (name !== file) return text;
    const content = JSON.parse(text) as never;
    edit(content);
    return JSON.stringify(content);
  };
}

/** The equilibrium data of the repository, loaded once for a test file. */
export const equilibria: Equilibria = loadEquilibria(readDataText);

const reactions = new Map(equilibria.reactions.map((reaction) => [reaction.id, reaction]));

/** A reaction by its id; fails for one that is not there. */
export function reaction(id: string): Reaction {
  const found = reactions.get(id);
  if (found === undefined) throw new Error(`no reaction "${id}"`);
  return found;
}

/** The record of SRD 46 with this id, with the reaction it stands for. */
export function srdRecord(record: string): { reaction: Reaction; record: ConstantRecord } {
  for (const candidate of equilibria.reactions) {
    const found = candidate.records.find((r) => r.provenance.record === record && r.provenance.basis === "read");
    if (found !== undefined) return { reaction: candidate, record: found };
  }
  throw new Error(`no record ${record}`);
}
