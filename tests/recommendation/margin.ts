import type { Recommendation, RecommendedMethod } from "../../src/recommendation/contract.ts";
import { idOf } from "./same-answer.ts";

/** How near two answers to related briefs are where their order first differs: points, uncertainty, and the rules that spoke in one only. */
export function marginOf(a: Recommendation, b: Recommendation): string[] {
  const at = a.methods.findIndex((method, i) => b.methods[i] === undefined || idOf(method) !== idOf(b.methods[i]));
  const rivals = [a.methods[at], b.methods[at]].filter((method) => method !== undefined);
  return rivals.map((rival) => {
    const here = a.methods.find((method) => idOf(method) === idOf(rival));
    const there = b.methods.find((method) => idOf(method) === idOf(rival));
    return `${idOf(rival)}: ${standing(here)} becomes ${standing(there)}${here && there ? changed(here, there) : ""}`;
  });
}

const points = (method: RecommendedMethod): number => method.scores.reduce((sum, { weight }) => sum + weight, 0);

const standing = (method: RecommendedMethod | undefined): string =>
  method === undefined
    ? "not shown"
    : `${points(method)} points, ${method.predicted.relativeExpandedUncertaintyPercent} %, ${method.verdict}`;

/** The rules that spoke of one of the two only, with the values they saw. */
function changed(here: RecommendedMethod, there: RecommendedMethod): string {
  const only = (x: RecommendedMethod, y: RecommendedMethod): string[] =>
    x.because
      .filter(({ rule, stage }) => !y.because.some((other) => other.rule === rule && other.stage === stage))
      .map(({ rule, facts }) => `${rule} ${JSON.stringify(facts)}`);
  const lost = only(here, there).map((text) => `without ${text}`);
  const won = only(there, here).map((text) => `now ${text}`);
  return lost.length + won.length === 0 ? "" : ` (${[...lost, ...won].join(", ")})`;
}
