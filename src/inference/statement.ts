import type { FactDefinition, Facts, FactValue } from "./types.ts";

const PLACEHOLDER = /\{([^{}|]*)(?:\|([^{}|]*))?\}/g;

interface Format {
  readonly type: FactDefinition["type"];
  readonly write: (value: never) => string;
}

/** Three significant figures, without an exponent between 0.001 and 100000. */
function significant(value: number): string {
  if (value === 0) return "0";
  const size = Math.abs(value);
  return size >= 0.001 && size < 1e5 ? String(Number(value.toPrecision(3))) : value.toExponential(1).replace("e+", "e");
}

/** How a placeholder `{fact|format}` may be written. */
export const STATEMENT_FORMATS: ReadonlyMap<string, Format> = new Map<string, Format>([
  ["percent", { type: "number", write: (value: number) => `${Number(value.toPrecision(2))} %` }],
  ["share", { type: "number", write: (value: number) => `${Number((100 * value).toPrecision(2))} %` }],
  [
    "sci",
    { type: "number", write: (value: number) => (value === 0 ? "0" : value.toExponential(1).replace("e+", "e")) },
  ],
  ["fixed1", { type: "number", write: (value: number) => value.toFixed(1) }],
  ["fixed2", { type: "number", write: (value: number) => value.toFixed(2) }],
  ["molPerL", { type: "number", write: (value: number) => `${significant(value)} mol/L` }],
  ["mL", { type: "number", write: (value: number) => `${value.toFixed(1)} mL` }],
  ["or", { type: "strings", write: (value: readonly string[]) => joined(value, "or") }],
]);

function joined(words: readonly string[], last: string): string {
  return words.length < 2 ? (words[0] ?? "none") : `${words.slice(0, -1).join(", ")} ${last} ${words.at(-1) ?? ""}`;
}

/** A reagent id as words: "mordant-black-11" reads "mordant black 11"; ions, names and abbreviations stay. */
const worded = (text: string): string =>
  /^[a-z0-9]+(-[a-z0-9]+)+$/.test(text)
    ? text.replaceAll("-", " ").replace(/ [a-z]$/, (letter) => letter.toUpperCase())
    : text;

/** The placeholders of a statement template, in order: fact name and format ("" where none is given). */
export function placeholdersOf(template: string): readonly { readonly fact: string; readonly format: string }[] {
  return [...template.matchAll(PLACEHOLDER)].map((match) => ({ fact: match[1] ?? "", format: match[2] ?? "" }));
}

/** Whether a template holds a brace that belongs to no placeholder. */
export function hasStrayBrace(template: string): boolean {
  return /[{}]/.test(template.replace(PLACEHOLDER, ""));
}

/**
 * Fills a statement template with the facts seen: numbers to three significant figures, lists joined with "and", unless a format is named.
 * @throws TypeError where a fact that the template names has no value.
 */
export function fillStatement(template: string, facts: Facts): string {
  return template.replace(PLACEHOLDER, (_, name: string, format: string | undefined) => {
    const value: FactValue | undefined = facts[name];
    if (value === undefined) throw new TypeError(`statement names ${name}, which has no value`);
    const chosen = format === undefined ? undefined : STATEMENT_FORMATS.get(format);
    if (chosen !== undefined) return chosen.write(value as never);
    if (typeof value === "number") return significant(value);
    return typeof value === "object" ? joined(value.map(worded), "and") : worded(String(value));
  });
}
