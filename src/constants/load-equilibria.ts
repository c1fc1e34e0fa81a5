import { DataError } from "../errors.ts";
import { checkChain, keyReaction, type KeyedReaction } from "./check-chains.ts";
import type { Composition, Term } from "./equilibria-rows.ts";
import {
  componentFileSchema,
  reactionFileSchema,
  remarkFileSchema,
  solidFileSchema,
  sourceFileSchema,
  speciesFileSchema,
} from "./equilibria-schema.ts";
import type {
  ComponentRecord,
  DataRemark,
  Reaction,
  SolidDefinition,
  SourceRecord,
  SpeciesDefinition,
} from "./knowledge.ts";
import { checkNeighbours } from "./neighbours.ts";
import { printedEnthalpy, printedRecord, singleRecord } from "./printed-records.ts";
import { type ReadFile, readRecords } from "./read-records.ts";

/** Files of reactions, by the group of the ligand. */
export const REACTION_FILES = [
  "equilibria-complexones.json",
  "equilibria-hydroxide.json",
  "equilibria-inorganic.json",
  "equilibria-organic.json",
  "equilibria-dyes.json",
] as const;

/** The equilibrium data, checked. */
export interface Equilibria {
  readonly components: readonly ComponentRecord[];
  readonly reactions: readonly Reaction[];
  readonly species: readonly SpeciesDefinition[];
  readonly solids: readonly SolidDefinition[];
  readonly sources: readonly SourceRecord[];
  readonly remarks: readonly DataRemark[];
}

/**
 * Loads and checks the equilibrium data; `readFile` gives the text of a data file by name. Checked: every file against its schema, ids unique,
 * each reaction balanced, each chain adding up to the composition it stands for, components and sources known. Standard uncertainties
 * come from uncertainty.ts, sums of nu z^2 from the charges of the components. Remarks are those of the file and those of `checkNeighbours`.
 * Throws DataError with file and path.
 */
export function loadEquilibria(readFile: ReadFile): Equilibria {
  const { components } = readRecords(readFile, "components.json", componentFileSchema);
  const charges = new Map<string, number>();
  for (const [i, component] of components.entries()) {
    unique(charges, component.id, "components.json", `$.components[${i}].id`);
    charges.set(component.id, component.charge);
  }
  const sources = readRecords(readFile, "sources-equilibria.json", sourceFileSchema).sources as SourceRecord[];
  const listed = new Set(sources.map((source) => source.id));
  const { reactions, keyed } = loadReactions(readFile, charges, listed);
  const ids = new Set<string>();

  const species: SpeciesDefinition[] = [];
  const speciesFile = "equilibria-species.json";
  for (const [i, entry] of readRecords(readFile, speciesFile, speciesFileSchema).species.entries()) {
    const path = `$.species[${i}]`;
    unique(ids, entry.id, speciesFile, `${path}.id`);
    ids.add(entry.id);
    checkChain(entry.chain, entry.components, "", keyed, speciesFile, path);
    const charge = chargeOf(entry.components, charges, speciesFile, path);
    species.push({ id: entry.id, components: entry.components, charge, chain: asChain(entry.chain) });
  }
  const solids: SolidDefinition[] = [];
  for (const [i, entry] of readRecords(readFile, "solids.json", solidFileSchema).solids.entries()) {
    const path = `$.solids[${i}]`;
    unique(ids, entry.id, "solids.json", `${path}.id`);
    ids.add(entry.id);
    if (!listed.has(entry.provenance.source))
      throw new DataError("solids.json", path, `unknown source "${entry.provenance.source}"`);
    checkChain(entry.chain, entry.components, "s", keyed, "solids.json", path);
    solids.push({ ...entry, chain: asChain(entry.chain) } as SolidDefinition);
  }
  const written = readRecords(readFile, "equilibria-remarks.json", remarkFileSchema).remarks;
  const remarks = [...written, ...checkNeighbours(reactions)];
  return { components: components, reactions, species, solids, sources, remarks };
}

function loadReactions(
  readFile: ReadFile,
  charges: ReadonlyMap<string, number>,
  sources: ReadonlySet<string>,
): { reactions: Reaction[]; keyed: Map<string, KeyedReaction> } {
  const reactions: Reaction[] = [];
  const keyed = new Map<string, KeyedReaction>();
  for (const name of REACTION_FILES) {
    const file = readRecords(readFile, name, reactionFileSchema);
    if (!sources.has(file.source)) throw new DataError(name, "$.source", `unknown source "${file.source}"`);
    for (const [i, entry] of file.reactions.entries()) {
      const path = `$.reactions[${i}]`;
      unique(keyed, entry.id, name, `${path}.id`);
      const records = [
        ...(entry.logK ?? []).map((value) => printedRecord(value, file.source)),
        ...(entry.single ?? []).map((value) => singleRecord(value, sources, name, path)),
      ];
      reactions.push({
        id: entry.id,
        text: entry.text,
        deltaZ2: balancedDeltaZ2(entry.terms, charges, name, path),
        records,
        enthalpies: (entry.enthalpy ?? []).map((value) => printedEnthalpy(value, file.source)),
      });
      keyed.set(entry.id, keyReaction(entry.terms, records.length > 0));
    }
  }
  return { reactions, keyed };
}

/** Sum of nu z^2 over the dissolved partners of a reaction whose components and charges balance; solids and gases count nothing. */
function balancedDeltaZ2(
  terms: readonly Term[],
  charges: ReadonlyMap<string, number>,
  file: string,
  path: string,
): number {
  const sum: Record<string, number> = {};
  let deltaZ2 = 0;
  for (const term of terms) {
    const [coefficient, composition] = term;
    for (const id in composition) sum[id] = (sum[id] ?? 0) + coefficient * composition[id]!;
    const charge = chargeOf(composition, charges, file, path);
    if (term.length === 2) deltaZ2 += coefficient * charge * charge;
  }
  for (const id in sum) {
    if (Math.abs(sum[id]!) > 1e-9)
      throw new DataError(file, `${path}.terms`, `does not balance: ${sum[id]} of ${id} left`);
  }
  return deltaZ2;
}

function chargeOf(composition: Composition, charges: ReadonlyMap<string, number>, file: string, path: string): number {
  let sum = 0;
  for (const id in composition) {
    const charge = charges.get(id);
    if (charge === undefined) throw new DataError(file, path, `unknown component "${id}"`);
    sum += composition[id]! * charge;
  }
  return sum;
}

function asChain(chain: readonly (readonly [string, number])[]): SpeciesDefinition["chain"] {
  return chain.map(([reaction, factor]) => ({ reaction, factor }));
}

function unique(known: { has(id: string): boolean }, id: string, file: string, path: string): void {
  if (known.has(id)) throw new DataError(file, path, `"${id}" stands twice`);
}
