/**
 * The rows of the equilibrium files that come by the ten thousand, and plain predicates for them: the schema library would take half a second over
 * them. It is asked only for the rows that a predicate refuses, to say what is wrong.
 */

export type Composition = Readonly<Record<string, number>>;

/** One partner of a reaction: coefficient (products positive), composition, and "s" or "g" where it is not dissolved. */
export type Term = readonly [number, Composition] | readonly [number, Composition, "s" | "g"];

/**
 * One value of a compilation as printed: record id, value, temperature (C), ionic strength (mol/L), error column, footnote,
 * 1 where printed in parentheses. Value and error stay text, for the error counts in units of the last digit printed.
 */
export type PrintedValue = readonly [string, string, number, number, string, string, 0 | 1];

/** A chain as stored: reactions with their factors. */
export type StoredChain = readonly (readonly [reaction: string, factor: number])[];

const isNumber = (value: unknown): value is number => typeof value === "number" && Number.isFinite(value);

/** Whether the value keeps the shape of its type. */
export function isComposition(value: unknown): value is Composition {
  if (typeof value !== "object" || value === null || Array.isArray(value)) return false;
  for (const id in value) {
    const count: unknown = (value as Record<string, unknown>)[id];
    if (!isNumber(count) || count === 0) return false;
  }
  return true;
}

/** Whether the value keeps the shape of its type. */
export function isTerm(value: unknown): value is Term {
  if (!Array.isArray(value) || value.length < 2 || value.length > 3) return false;
  const [coefficient, composition, phase] = value as readonly unknown[];
  return (
    isNumber(coefficient) &&
    coefficient !== 0 &&
    isComposition(composition) &&
    (value.length === 2 || phase === "s" || phase === "g")
  );
}

const PRINTED_NUMBER = /^-?\d+(\.\d+)?$/;
const ERROR_COLUMN = /^(0|\+\/-\d+|[+-]\d+)$/;

/** Whether the value keeps the shape of its type. */
export function isPrinted(row: unknown): row is PrintedValue {
  if (!Array.isArray(row) || row.length !== 7) return false;
  const [record, value, temperature, ionicStrength, error, footnote, parentheses] = row as readonly unknown[];
  return (
    typeof record === "string" &&
    record !== "" &&
    typeof value === "string" &&
    PRINTED_NUMBER.test(value) &&
    isNumber(temperature) &&
    isNumber(ionicStrength) &&
    ionicStrength >= 0 &&
    typeof error === "string" &&
    ERROR_COLUMN.test(error) &&
    typeof footnote === "string" &&
    (parentheses === 0 || parentheses === 1)
  );
}

/** Whether the value keeps the shape of its type. */
export function isChain(value: unknown): value is StoredChain {
  if (!Array.isArray(value) || value.length === 0) return false;
  for (const link of value as readonly unknown[]) {
    if (!Array.isArray(link) || link.length !== 2 || typeof link[0] !== "string" || !isNumber(link[1])) return false;
  }
  return true;
}

/** Whether the value is an object with these keys and no others, of which those in `required` are there. */
export function hasKeys(
  value: unknown,
  required: readonly string[],
  optional: readonly string[],
): value is Record<string, unknown> {
  if (typeof value !== "object" || value === null || Array.isArray(value)) return false;
  let present = 0;
  for (const key in value) {
    if (required.includes(key)) present++;
    else if (!optional.includes(key)) return false;
  }
  return present === required.length;
}

/** Whether the value is a list that is not empty, each of whose members passes. */
export function isListOf<T>(value: unknown, is: (member: unknown) => member is T): value is readonly T[] {
  return Array.isArray(value) && value.length > 0 && value.every(is);
}

/** Whether the value is a text that is not empty. */
export function isText(value: unknown): value is string {
  return typeof value === "string" && value !== "";
}
