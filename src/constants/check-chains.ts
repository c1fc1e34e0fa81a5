import { DataError } from "../errors.ts";
import { compositionKey } from "./choose-chains.ts";
import type { Composition, Term } from "./equilibria-rows.ts";

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
  const left: { key: string; components: Composition; amount: number }[] = [];
  for (const [id, factor] of chain) {
    const reaction = reactions.get(id);
    if (reaction === undefined) throw new DataError(file, `${path}.chain`, `unknown reaction "${id}"`);
    if (!reaction.hasValue) throw new DataError(file, `${path}.chain`, `the reaction "${id}" has no value`);
    for (const { key, components: partner, coefficient } of reaction.partners) {
      const present = left.find((other) => other.key === key);
      if (present === undefined) left.push({ key, components: partner, amount: factor * coefficient });
      else present.amount += factor * coefficient;
    }
  }
  const remaining = left.filter(({ amount }) => Math.abs(amount) > ROUNDING);
  const [only] = remaining;
  if (
    remaining.length !== 1 ||
    only === undefined ||
    !only.key.startsWith(`${phase}|`) ||
    !isMultiple(only.components, only.amount, components)
  ) {
    const found = remaining.map(({ key, amount }) => `${amount} of ${key}`).join(", ");
    throw new DataError(
      file,
      `${path}.chain`,
      `adds up to ${found || "nothing"}, expected ${compositionKey(components)}`,
    );
  }
}

function isMultiple(left: Composition, amount: number, components: Composition): boolean {
  for (const id in left) if (Math.abs(left[id]! * amount - (components[id] ?? 0)) > ROUNDING) return false;
  for (const id in components) if (!(id in left)) return false;
  return true;
}
