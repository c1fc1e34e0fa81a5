import { COMPONENT_ROWS } from "./component-facts.ts";
import { ELECTRODE_ROWS, PHOTOMETER_ROWS } from "./detection-facts.ts";
import { METHOD_ROWS } from "./method-facts.ts";
import { STAGE_ROWS } from "./stage-facts.ts";
import { TITRANT_ROWS } from "./titrant-facts.ts";
import { WAY_ROWS } from "./way-facts.ts";
import type { FactDefinition, FactRow, RuleScope } from "./types.ts";

// Known from the record of the masking, not from the solved solution.
const EMPIRICAL: readonly string[] = ["empiricalLimitMolPerL", "ratioToEmpiricalLimit"];

function facts(scope: RuleScope, guard: string, rows: readonly FactRow[]): readonly FactDefinition[] {
  return rows.map(([name, type, unit, presence, meaning]) => {
    const optional = presence === "may be absent";
    return { name, scope, type, unit, meaning, optional, guard: optional ? guard : null };
  });
}

const METHOD_FACTS = facts("method", "evaluationStatus", METHOD_ROWS);

const COMPONENT_FACTS = facts("component", "solutionStatus", COMPONENT_ROWS).map((fact) =>
  EMPIRICAL.includes(fact.name) ? { ...fact, guard: "maskingBasis" } : fact,
);

const ALL_STAGE_FACTS: readonly FactDefinition[] = [
  ...facts("stage", "solutionStatus", [...STAGE_ROWS, ...WAY_ROWS]),
  ...facts("stage", "solutionStatus", TITRANT_ROWS),
  ...facts("stage", "electrodeStatus", ELECTRODE_ROWS),
  ...facts("stage", "photometerStatus", PHOTOMETER_ROWS),
];

/** Every fact a rule may look at. Numbers that may be absent name the status fact that says whether they exist. */
export const FACT_CATALOGUE: readonly FactDefinition[] = [...METHOD_FACTS, ...ALL_STAGE_FACTS, ...COMPONENT_FACTS];

/** For each guard fact, the values under which the numbers it guards may exist; a rule that uses one must narrow the guard to these. */
export const GUARD_VALUES: Readonly<Record<string, readonly string[]>> = {
  evaluationStatus: ["converged", "outOfModelRange"],
  solutionStatus: ["converged"],
  maskingBasis: ["empirical"],
  electrodeStatus: ["read"],
  photometerStatus: ["read"],
};

const BY_SCOPE: Readonly<Record<RuleScope, ReadonlyMap<string, FactDefinition>>> = {
  method: new Map(METHOD_FACTS.map((fact) => [fact.name, fact])),
  stage: new Map(ALL_STAGE_FACTS.map((fact) => [fact.name, fact])),
  component: new Map(COMPONENT_FACTS.map((fact) => [fact.name, fact])),
};

/** The facts of one scope by name. */
export function factsOfScope(scope: RuleScope): ReadonlyMap<string, FactDefinition> {
  return BY_SCOPE[scope];
}
