import { factsOfScope } from "./fact-catalogue.ts";
import { wordsOfFact } from "./fact-words.ts";
import type { FactDefinition, Facts, RuleScope } from "./types.ts";

function fitsType(value: unknown, type: FactDefinition["type"]): boolean {
  if (type === "number") return typeof value === "number" && Number.isFinite(value);
  if (type === "strings") return Array.isArray(value) && value.every((item) => typeof item === "string");
  return typeof value === type;
}

/** What is wrong with a set of facts: names the catalogue does not have, wrong types, numbers that are not finite, and (unless `partial`) facts that must exist and do not. */
export function factFaults(scope: RuleScope, facts: Facts, partial = false): readonly string[] {
  const catalogue = factsOfScope(scope);
  const faults: string[] = [];
  for (const [name, value] of Object.entries(facts)) {
    const definition = catalogue.get(name);
    if (definition === undefined) faults.push(`${name} is no fact of scope ${scope}`);
    else if (!fitsType(value, definition.type)) {
      const expected = definition.type === "number" ? "a finite number" : definition.type;
      faults.push(
        `${name} is to be ${expected}, found ${typeof value === "number" ? String(value) : JSON.stringify(value)}`,
      );
    } else if (typeof value === "string" && wordsOfFact(name)?.includes(value) === false)
      faults.push(`${name} is to be one of ${wordsOfFact(name)!.join(", ")}, found ${value}`);
  }
  if (!partial)
    for (const definition of catalogue.values())
      if (!definition.optional && !(definition.name in facts)) faults.push(`${definition.name} is missing`);
  return faults;
}

/**
 * Refuses facts that the catalogue does not describe: whoever computed them made a programming error.
 * @throws TypeError naming every fault.
 */
export function assertFacts(scope: RuleScope, facts: Facts): void {
  const faults = factFaults(scope, facts);
  if (faults.length > 0) throw new TypeError(`facts of scope ${scope}: ${faults.join("; ")}`);
}
