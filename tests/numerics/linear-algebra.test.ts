import { describe, expect, it } from "vitest";
import { factorScaled, solveScaled } from "../../src/numerics/cholesky.ts";
import { compensatedDot } from "../../src/numerics/compensated-dot.ts";
import { greedyBasis } from "../../src/numerics/integer-basis.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";
import { expectRelative } from "../expect-relative.ts";

describe("factorScaled and solveScaled", () => {
  it("solve a badly scaled system that is well conditioned once scaled", () => {
    // D A D with A = tridiagonal (-1, 2, -1) has the solution D^-1 x; entries span 40 decades.
    const n = 4;
    const d = [1e-20, 1e-3, 1, 1e20];
    const tri = (i: number, j: number): number => (i === j ? 2 : Math.abs(i - j) === 1 ? -1 : 0);
    const a = Float64Array.from(
      { length: n * n },
      (_, p) => tri(Math.floor(p / n), p % n) * d[Math.floor(p / n)]! * d[p % n]!,
    );
    const x = [1, -2, 3, 4];
    const b = Float64Array.from(x, (_, i) => x.reduce((sum, value, j) => sum + tri(i, j) * value, 0) * d[i]!);
    const scale = new Float64Array(n);
    const pivot = factorScaled(a, n, scale, 1e-30);
    expect(pivot).toBeGreaterThan(0.5);
    solveScaled(a, n, scale, b);
    x.forEach((value, i) => expectRelative(b[i]! * d[i]!, value, 1e-14));
  });

  it("report a vanishing pivot for a singular matrix and none for its regular neighbour", () => {
    const scale = new Float64Array(2);
    expect(factorScaled(Float64Array.of(1, 0, 1, 1), 2, scale, 1e-30)).toBe(0);
    expectRelative(factorScaled(Float64Array.of(1, 0, 0.5, 1), 2, scale, 1e-30), 0.75, 1e-15);
    expect(factorScaled(Float64Array.of(0, 0, 0, 1), 2, scale, 1e-30)).toBe(0);
  });
});

describe("compensatedDot", () => {
  it("keeps the small difference of large products", () => {
    expect(compensatedDot([1e16, 1, -1e16], 0, 1, [1, 1, 1], 3)).toBe(1);
    expect([1e16, 1, -1e16].reduce((sum, value) => sum + value, 0)).toBe(0); // what a plain sum makes of it
  });

  it("keeps the rounding errors of the products", () => {
    const a = 1 + 2 ** -30;
    expect(compensatedDot([a, -1], 0, 1, [a, 1 + 2 ** -29], 2)).toBe(2 ** -60);
  });

  it("walks a column by its stride", () => {
    expect(compensatedDot([1, 2, 3, 4, 5, 6], 1, 2, [10, 100, 1000], 3)).toBe(6420);
  });
});

describe("greedyBasis", () => {
  it("takes the best independent rows and inverts them exactly", () => {
    // M, L, ML, M2L3 in order of preference ML, M2L3, M, L
    const rows = [1, 0, 0, 1, 1, 1, 2, 3];
    const basis = greedyBasis(rows, 2, [2, 3, 0, 1], 4)!;
    expect([...basis.rows]).toEqual([2, 3]);
    expect([...basis.inverse].map((value) => value / basis.denominator)).toEqual([3, -1, -2, 1]);
  });

  it("gives fractions over the determinant", () => {
    const basis = greedyBasis([2, 0, 0, 3], 2, [0, 1], 2)!;
    expect(basis.denominator).toBe(6);
    expect([...basis.inverse]).toEqual([3, 0, 0, 2]);
  });

  it("leaves out only rows that combine rows taken before them", () => {
    const random = seededRandom(3);
    for (let trial = 0; trial < 50; trial++) {
      const n = 2 + random.integerBelow(8);
      const m = n + random.integerBelow(30);
      const matrix = Float64Array.from({ length: (n + m) * n }, (_, p) =>
        p < n * n ? (p % (n + 1) === 0 ? 1 : 0) : random.integerBelow(4),
      );
      const order = Array.from({ length: n + m }, (_, i) => n + m - 1 - i);
      const basis = greedyBasis(matrix, n, order, order.length)!;
      let latecomers = 0;
      const place = new Map(order.map((row, i) => [row, i]));
      for (const row of order)
        for (let k = 0; k < n; k++) {
          let weight = 0;
          for (let j = 0; j < n; j++) weight += matrix[row * n + j]! * basis.inverse[j * n + k]!;
          if (Math.abs(weight) > 1e-6 * basis.denominator)
            latecomers += place.get(basis.rows[k]!)! > place.get(row)! ? 1 : 0;
        }
      expect(latecomers).toBe(0);
    }
  });

  it("returns null when the rows do not span, and a basis when one more makes them", () => {
    expect(greedyBasis([1, 1, 2, 2, 0, 1], 2, [0, 1], 2)).toBe(null);
    expect(greedyBasis([1, 1, 2, 2, 0, 1], 2, [0, 1, 2], 3)).not.toBe(null);
  });
});
