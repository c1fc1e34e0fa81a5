import { describe, expect, it } from "vitest";
import { EliminatedBalances } from "../../src/chemistry/solve-eliminated-balances.ts";
import { compileEliminated } from "../../src/chemistry/solve-eliminated-terms.ts";
import { unrollBalances } from "../../src/chemistry/solve-eliminated-unrolled.ts";
import { randomSystem, type RandomSystem } from "../campaigns/random-system.ts";

/** A random system whose constants stay small enough that free concentrations of 1e-3 mol/L overflow nothing. */
function compiled({ problem, totals, fixedLnFree, metals }: RandomSystem) {
  const terms = compileEliminated(problem, fixedLnFree, metals);
  if (terms === null) return null;
  const { kept, gone, k } = terms.structure;
  const balances = new EliminatedBalances(terms);
  const keptTotal = Float64Array.from(kept, (j) => totals[j]!);
  const goneTotal = Float64Array.from(gone, (j) => totals[j]!);
  const least = Math.min(...keptTotal, ...goneTotal);
  for (let l = 0; l < k; l++) balances.free[l] = 10 ** (-9 - 2 * l);
  return { terms, balances, keptTotal, goneTotal, least, k };
}

const close = (actual: number, expected: number, scale: number, rtol: number): boolean =>
  Math.abs(actual - expected) <= rtol * scale;

describe("the balances of the eliminated form", () => {
  it("are the same to the last digit from unrolled code as from the loops, matrix and free metals included", () => {
    let compared = 0;
    let mixed = 0;
    for (let index = 0; index < 300; index++) {
      const system = compiled(randomSystem(20261205, index));
      if (system === null) continue;
      const { terms, balances, keptTotal, goneTotal, least } = system;
      const unrolled = unrollBalances(terms.structure);
      if (unrolled === null) continue;
      balances.moments();
      balances.combine(keptTotal, goneTotal, least, true);
      const loops = [balances.gradient.slice(), balances.hessian.slice(), balances.freeGone.slice()];
      balances.evaluateUnrolled(keptTotal, goneTotal, least, true, unrolled);
      expect([balances.gradient, balances.hessian, balances.freeGone]).toEqual(loops);
      compared++;
      if (terms.structure.mixed.n > 0) mixed++;
    }
    expect(compared).toBeGreaterThan(200);
    expect(mixed).toBeGreaterThan(50);
  });

  it("have the matrix that finite differences of the balances give", () => {
    const h = 1e-5;
    let compared = 0;
    for (let index = 0; index < 60; index++) {
      const system = compiled(randomSystem(20261206, index));
      if (system === null) continue;
      const { balances, keptTotal, goneTotal, least, k } = system;
      const at = (): Float64Array => {
        balances.moments();
        balances.combine(keptTotal, goneTotal, least, true);
        return balances.gradient.slice();
      };
      const middle = at();
      const matrix = balances.hessian.slice();
      for (let l = 0; l < k; l++) {
        const x = balances.free[l]!;
        balances.free[l] = x * Math.exp(h);
        const high = at();
        balances.free[l] = x * Math.exp(-h);
        const low = at();
        balances.free[l] = x;
        for (let c = 0; c < k; c++) {
          const cell = c >= l ? matrix[c * k + l]! : matrix[l * k + c]!;
          const bulk = 36 * Math.max(...[l, c].map((i) => keptTotal[i]! + Math.abs(middle[i]!)));
          expect(close((high[c]! - low[c]!) / (2 * h), cell, bulk, 1e-8)).toBe(true);
          compared++;
        }
      }
    }
    expect(compared).toBeGreaterThan(200);
  });

  it("are not unrolled where species with several atoms hold a kept component", () => {
    const structures = Array.from({ length: 60 }, (_, index) => compiled(randomSystem(20261207, index))).flatMap((s) =>
      s === null ? [] : [s.terms.structure],
    );
    for (const structure of structures)
      expect(unrollBalances(structure) === null).toBe(structure.homonuclear.segment.length > 0);
  });
});
