import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import { joinKnowledge } from "./join-knowledge.ts";
import type { Knowledge } from "./knowledge.ts";
import { loadEquilibria } from "./load-equilibria.ts";
import { loadPractice } from "./load-practice.ts";
import { contractIdsSchema } from "./practice-schema.ts";
import { type ReadFile, readRecords } from "./read-records.ts";
import type { ContractIds } from "./vocabulary-coverage.ts";

let cached: Knowledge | undefined;

/** The knowledge of this installation, read once per process. Throws a DataError (file, JSON path) when a data file is faulty. */
export function loadKnowledge(): Knowledge {
  cached ??= buildKnowledge(readDataFile);
  return cached;
}

/**
 * Knowledge from the data files that `readFile` gives: validated, joined, frozen. Its hash is sha256 over name and text of every
 * file that was asked for, in the order of their names, line ends made uniform. Throws a DataError for the first fault.
 */
export function buildKnowledge(readFile: ReadFile): Knowledge {
  const texts = new Map<string, string>();
  const remember: ReadFile = (name) => {
    const text = readFile(name);
    texts.set(name, text);
    return text;
  };
  const practice = loadPractice(remember);
  const equilibria = loadEquilibria(remember);
  return joinKnowledge(practice, equilibria, hashOf(texts));
}

/** The ids of the vocabulary that briefs and answers use. */
export function loadContractIds(readFile: ReadFile = readDataFile): ContractIds {
  return readRecords(readFile, "contract-ids.json", contractIdsSchema);
}

/** Text of a file in src/constants/data. */
export function readDataFile(name: string): string {
  return readFileSync(new URL(`data/${name}`, import.meta.url), "utf8");
}

function hashOf(texts: ReadonlyMap<string, string>): string {
  const hash = createHash("sha256");
  for (const name of [...texts.keys()].sort())
    hash.update(`${name}\0${(texts.get(name) ?? "").replaceAll("\r\n", "\n")}\0`);
  return hash.digest("hex");
}
