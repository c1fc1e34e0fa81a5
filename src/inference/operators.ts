import type { FactDefinition, FactValue } from "./types.ts";

/** What stands on the right of a comparison. */
export type Operand = number | string | boolean | readonly number[] | readonly string[];

/** What an operator asks of its value: one of the fact's own kind, a word, a list of words, or a pair of numbers low < high. */
export type OperandKind = "same" | "string" | "words" | "range";

/** One comparison of the rule language. A fact that is absent (null) satisfies none of them. */
export interface RuleOperator {
  readonly name: string;
  readonly reads: readonly FactDefinition["type"][];
  readonly operand: OperandKind;
  readonly words: string; // as an explanation says it
  /** How far the test reaches, for whoever writes a rule. */
  readonly meaning: string;
  readonly holds: (fact: never, operand: never) => boolean;
}

/** A comparison that met a value it cannot compare: the facts were computed wrongly. */
function finite(value: unknown, operator: string): number {
  if (typeof value !== "number" || !Number.isFinite(value))
    throw new TypeError(`operator ${operator} compares finite numbers, found ${String(value)}`);
  return value;
}

function numeric(
  name: string,
  words: string,
  meaning: string,
  test: (x: number, limit: number) => boolean,
): RuleOperator {
  const holds = (fact: number, limit: number): boolean => test(finite(fact, name), finite(limit, name));
  return { name, reads: ["number"], operand: "same", words, meaning, holds };
}

function interval(
  name: string,
  words: string,
  meaning: string,
  test: (x: number, low: number, high: number) => boolean,
) {
  const holds = (fact: number, range: readonly number[]): boolean =>
    test(finite(fact, name), finite(range[0], name), finite(range[1], name));
  return { name, reads: ["number"], operand: "range", words, meaning, holds } satisfies RuleOperator;
}

function word(
  name: string,
  words: string,
  meaning: string,
  operand: OperandKind,
  holds: (x: string, y: never) => boolean,
) {
  return { name, reads: ["string"], operand, words, meaning, holds } satisfies RuleOperator;
}

function list(
  name: string,
  words: string,
  meaning: string,
  operand: OperandKind,
  holds: (x: readonly string[], y: never) => boolean,
) {
  return { name, reads: ["strings"], operand, words, meaning, holds } satisfies RuleOperator;
}

const ALL: readonly RuleOperator[] = [
  numeric("below", "below", "number < value", (x, limit) => x < limit),
  numeric("atMost", "at most", "number <= value", (x, limit) => x <= limit),
  numeric("above", "above", "number > value", (x, limit) => x > limit),
  numeric("atLeast", "at least", "number >= value", (x, limit) => x >= limit),
  interval("between", "between", "low <= number <= high", (x, low, high) => x >= low && x <= high),
  interval(
    "aboveUpTo",
    "above, up to",
    "low < number <= high: bands that share a border never fire twice",
    (x, low, high) => x > low && x <= high,
  ),
  {
    ...word("is", "is", "word or truth value = value", "same", (x, y: string) => x === y),
    reads: ["string", "boolean"],
  },
  word("isNot", "is not", "word differs from value", "same", (x, y: string) => x !== y),
  word("isOneOf", "is one of", "word stands in the list", "words", (x, y: readonly string[]) => y.includes(x)),
  word(
    "isNoneOf",
    "is none of",
    "word does not stand in the list",
    "words",
    (x, y: readonly string[]) => !y.includes(x),
  ),
  list("contains", "contains", "list holds value", "string", (x, y: string) => x.includes(y)),
  list("lacks", "lacks", "list does not hold value", "string", (x, y: string) => !x.includes(y)),
  list(
    "containsAnyOf",
    "contains any of",
    "list holds at least one of the values",
    "words",
    (x, y: readonly string[]) => y.some((z) => x.includes(z)),
  ),
  list(
    "containsNoneOf",
    "contains none of",
    "list holds none of the values",
    "words",
    (x, y: readonly string[]) => !y.some((z) => x.includes(z)),
  ),
];

/** The operators of the rule language by name: the only ones a rule may use, and the only ones the engine knows. */
export const OPERATORS: ReadonlyMap<string, RuleOperator> = new Map(ALL.map((operator) => [operator.name, operator]));

/**
 * Applies an operator. `fact` and `operand` may be null (a number that does not exist): then nothing holds.
 * @throws TypeError where a number is not finite.
 */
export function holds(operator: RuleOperator, fact: FactValue | null, operand: Operand | null): boolean {
  if (fact === null || operand === null) return false;
  return operator.holds(fact as never, operand as never);
}
