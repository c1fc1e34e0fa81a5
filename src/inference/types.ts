/** The rule layer's public types. Facts are flat: a name, and a number, a string, a truth value or a list of strings. */
export type FactValue = number | string | boolean | readonly string[];
export type Facts = Readonly<Record<string, FactValue>>;

/** What a rule looks at: a whole method, one titration (stage) of it, or one component of the solution within a stage. */
export type RuleScope = "method" | "stage" | "component";
export type RuleEffect = "excludes" | "requires" | "favours" | "disfavours" | "cautions";

/** One entry of the fact catalogue. Numeric facts may be absent when the calculation behind them did not converge; `guard` names the status fact that says so. */
export interface FactDefinition {
  readonly name: string;
  readonly scope: RuleScope;
  readonly type: "number" | "string" | "boolean" | "strings";
  readonly unit: string | null; // "mol/L", "%", "pH", null for words
  readonly meaning: string;
  readonly optional: boolean; // true: may be absent; then every rule that uses it must also test its guard
  readonly guard: string | null;
}

/** A fact as a line of the catalogue: name, type, unit, whether it may be absent, meaning. */
export type FactRow = readonly [
  name: string,
  type: FactDefinition["type"],
  unit: string | null,
  presence: "always" | "may be absent",
  meaning: string,
];

/** A rule that fired, or a decisive near miss, with the values it saw. */
export interface RuleFinding {
  readonly rule: string;
  readonly effect: RuleEffect;
  readonly weight: number; // points: favours > 0, disfavours < 0, excludes/requires/cautions 0
  readonly reservation: boolean; // a caution that makes a fit a fit-with-reservations
  readonly requires: {
    readonly kind: "preparation" | "auxiliary" | "masking";
    readonly anyOf: readonly string[];
  } | null;
  readonly statement: string; // template filled with the values seen
  readonly facts: Facts; // only those the rule looked at or quotes
  readonly rationale: string;
  readonly source: string; // citation text
  readonly basis: "read" | "memory" | "common practice" | "computed";
}
