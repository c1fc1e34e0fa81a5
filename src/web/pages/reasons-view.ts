import type { Because } from "../../recommendation/contract.ts";
import { amount, fixed, percent, significant } from "../format/numbers.ts";
import { ruleHref, type Names } from "../format/names.ts";
import { BASIS_WORDS, EFFECT_WORDS, spacedName, wordsOf } from "../format/words.ts";
import type { Markup } from "../render/markup.ts";
import type { FactListing } from "../services.ts";

export interface FactView {
  readonly name: string;
  readonly meaning: Markup;
  readonly value: Markup;
}

export interface ReasonView {
  readonly effect: string;
  readonly statement: Markup;
  readonly rule: string;
  readonly ruleHref: string;
  readonly facts: readonly FactView[];
  readonly rationale: Markup;
  readonly source: Markup;
  readonly basis: string;
}

/** The order in which reasons are read: what forbids or demands first, what only weighs last. */
const ORDER = ["excludes", "requires", "favours", "disfavours", "cautions"];

/** Facts as rows: what each one means, and the value that was seen. */
export function factViews(
  facts: Because["facts"],
  catalogue: ReadonlyMap<string, FactListing>,
  names: Names,
): readonly FactView[] {
  return Object.entries(facts).map(([name, value]) => {
    const known = catalogue.get(name);
    return {
      name,
      meaning: names.set(known?.meaning ?? spacedName(name)),
      value: names.set(factValue(value, known?.unit ?? null)),
    };
  });
}

/** A fact's value as text with its unit. */
export function factValue(value: unknown, unit: string | null): string {
  if (typeof value === "number") {
    const text = Number.isInteger(value) && Math.abs(value) < 1e4 ? fixed(value, 0) : significant(value, 4);
    return unit === null || unit === "pH" ? text : `${text} ${unit}`;
  }
  if (typeof value === "boolean") return value ? "yes" : "no";
  if (Array.isArray(value)) return value.length === 0 ? "none" : value.join(", ");
  return typeof value === "string" && value !== "" ? value : "none";
}

/** Facts for the margin: the shortest name that still says what it is, the value in the unit of its name. */
export function marginFacts(facts: Because["facts"], names: Names): readonly Omit<FactView, "name">[] {
  return Object.entries(facts).map(([name, value]) => {
    const short = spacedName(name.replace(/(?:MolPerL|Percent|Fraction)$/, ""));
    return { meaning: names.set(short), value: names.set(marginValue(name, value)) };
  });
}

function marginValue(name: string, value: Because["facts"][string]): string {
  if (typeof value !== "number") return factValue(value, null);
  if (name.endsWith("MolPerL")) return amount(value);
  if (name.endsWith("Fraction")) return percent(value * 100);
  if (name.endsWith("Percent")) return percent(value);
  return name === "pH" ? fixed(value, 1) : significant(value, 3);
}

/** Every rule that spoke for or against a method, in reading order, with what it saw. */
export function reasonViews(
  because: readonly Because[],
  catalogue: ReadonlyMap<string, FactListing>,
  names: Names,
): readonly ReasonView[] {
  return [...because]
    .sort((a, b) => ORDER.indexOf(a.effect) - ORDER.indexOf(b.effect))
    .map((b) => ({
      effect: wordsOf(EFFECT_WORDS, b.effect),
      statement: names.set(b.statement),
      rule: b.rule,
      ruleHref: ruleHref(b.rule),
      facts: factViews(b.facts, catalogue, names),
      rationale: names.set(b.rationale ?? ""),
      source: names.set(b.source),
      basis: b.basis === null ? "" : wordsOf(BASIS_WORDS, b.basis),
    }));
}
