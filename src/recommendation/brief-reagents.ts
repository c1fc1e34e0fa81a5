import { editDistance } from "../constants/edit-distance.ts";
import { loadContractIds } from "../constants/index.ts";
import { readIon } from "../constants/ion-names.ts";
import type { Knowledge } from "../constants/knowledge.ts";
import type { Fault } from "../errors.ts";
import { describeFound, jsonPath } from "./contract-faults.ts";

/** Chelates that a method may add; their preparation steps name them (add-Mg-EDTA). */
const CHELATES = ["Mg-EDTA", "Zn-EDTA", "Zn-EGTA", "Cu-EDTA", "tetracyanonickelate"] as const;

let cachedIds: ReturnType<typeof loadContractIds> | undefined;
const contractIds = () => (cachedIds ??= loadContractIds());

/** Every reagent id that a brief may name: those of the contract and those of the knowledge base. */
export function reagentIds(knowledge: Knowledge): ReadonlySet<string> {
  const ids = contractIds();
  return new Set([
    ...[ids.titrants, ids.metalTitrants, ids.indicators, ids.buffers, ids.agents].flat(),
    ...CHELATES,
    ...[knowledge.titrants, knowledge.metalTitrants, knowledge.indicators].flatMap((map) => [...map.keys()]),
    ...[knowledge.buffers, knowledge.agents, knowledge.reagents].flatMap((map) => [...map.keys()]),
    "water", // free, but nobody is wrong to list it
  ]);
}

/**
 * Reads a list of reagent ids as a brief writes them: exact ids, the same in other case or with blanks for hyphens, an
 * indicator's synonym, or a metal ion in any spelling. Returns canonical ids, each once; an unknown one becomes a fault naming the nearest.
 */
export function readReagents(
  written: readonly string[],
  path: readonly PropertyKey[],
  knowledge: Knowledge,
): { readonly ids: readonly string[]; readonly faults: readonly Fault[] } {
  const known = spellings(knowledge);
  const ids = new Set<string>();
  const faults: Fault[] = [];
  written.forEach((text, index) => {
    const id = known.get(text) ?? known.get(plain(text)) ?? metalTitrant(text, knowledge);
    if (id !== undefined) ids.add(id);
    else
      faults.push({
        path: jsonPath([...path, index]),
        expected: `a known reagent id (nearest: ${nearest(text, [...reagentIds(knowledge)]).join(", ")})`,
        found: describeFound(text),
      });
  });
  return { ids: [...ids], faults };
}

function spellings(knowledge: Knowledge): ReadonlyMap<string, string> {
  const known = new Map<string, string>();
  for (const indicator of knowledge.indicators.values())
    for (const synonym of indicator.synonyms) known.set(plain(synonym), indicator.id);
  for (const id of reagentIds(knowledge)) known.set(plain(id), id);
  for (const id of reagentIds(knowledge)) known.set(id, id); // an exact id always wins
  return known;
}

const plain = (text: string): string =>
  text
    .trim()
    .toLowerCase()
    .replace(/[\s_]+/g, "-");

function metalTitrant(text: string, knowledge: Knowledge): string | undefined {
  const reading = readIon(text, knowledge.components);
  if (reading.kind !== "found" || reading.component.kind !== "metal") return undefined;
  return reading.component.ion;
}

/** Distances beyond this are all the same: nothing alike. */
const FURTHEST = 20;

/** The known words closest to `text` by the number of letters to change, best first (at most three). */
export function nearest(text: string, known: readonly string[]): readonly string[] {
  const wanted = plain(text);
  return known
    .map((word) => ({ word, distance: editDistance(wanted, plain(word), FURTHEST) }))
    .sort((a, b) => a.distance - b.distance || a.word.localeCompare(b.word))
    .slice(0, 3)
    .map(({ word }) => word);
}
