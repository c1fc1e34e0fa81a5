import { DataError } from "../errors.ts";
import { compositionKey } from "./choose-chains.ts";
import type { Composition, Term } from "./equilibria-schema.ts";

/** A reaction with its partners under their keys, made once so that thousands of chains can be checked quickly. */
export interface KeyedReaction {
  readonly partners: readonly {
    readonly key: string;
    readonly components: Composition;
    readonly coefficient: number;
  }[];
  readonly hasValue: boolean;
}

/** The partners of a reaction but free components and water; solids and gases keep their phase in the key. */
export function keyReaction(terms: readonly Term[], hasValue: boolean): KeyedReaction {
  const partners = [];
  for (const [coefficient, components, phase] of terms) {
    const ids = Object.keys(components);
    const free = phase === undefined && (ids.length === 0 || (ids.length === 1 && components[ids[0]!] === 1));
    if (!free) partners.push({ key: `${phase ?? ""}|${compositionKey(components)}`, components, coefficient });
  }
  return { partners, hasValue };
}

const ROUNDING = 1e-6; // factors are stored to nine decimals

/**
 * Checks that a chain adds up: over its reactions times factors everything cancels but one partner, dissolved or solid as asked, whose composition
 * times what is left is `components`. Throws DataError (file, path) for an unknown reaction, one without a value, or a sum that is another.
 */
export function checkChain(
  chain: readonly (readonly [reaction: string, factor: number])[],
  components: Composition,
  phase: "" | "s",
  reactions: ReadonlyMap<string, KeyedReaction>,
  file: string,
  path: string,
): void {
  const left = new Map<string, { components: Composition; amount: number }>();
  for (const [id, factor] of chain) {
    const reaction = reactions.get(id);
    if (reaction === undefined) throw new DataError(file, `${path}.chain`, `unknown reaction "${id}"`);
    if (!reaction.hasValue) throw new DataError(file, `${path}.chain`, `the reaction "${id}" has no value`);
    for (const partner of reaction.partners) {
      const present = left.get(partner.key);
      const amount = factor * partner.coefficient;
      if (present === undefined) left.set(partner.key, { components: partner.components, amount });
      else present.amount += amount;
    }
  }
  const remaining = [...left].filter(([, { amount }]) => Math.abs(amount) > ROUNDING);
  const [only] = remaining;
  if (
    remaining.length !== 1 ||
    only === undefined ||
    !only[0].startsWith(`${phase}|`) ||
    !isMultiple(only[1], components)
  ) {
    const found = remaining.map(([key, { amount }]) => `${amount} of ${key}`).join(", ");
    throw new DataError(
      file,
      `${path}.chain`,
      `adds up to ${found || "nothing"}, expected ${compositionKey(components)}`,
    );
  }
}

function isMultiple(left: { components: Composition; amount: number }, components: Composition): boolean {
  const ids = new Set([...Object.keys(left.components), ...Object.keys(components)]);
  for (const id of ids) {
    if (Math.abs((left.components[id] ?? 0) * left.amount - (components[id] ?? 0)) > ROUNDING) return false;
  }
  return true;
}
