import { describe, expect, it } from "vitest";
import { AppError } from "../../src/errors.ts";
import { findRoot } from "../../src/numerics/find-root.ts";
import { expectRelative } from "../expect-relative.ts";

describe("findRoot", () => {
  it("finds Wallis's root of x^3 - 2x - 5", () => {
    // 2.0945514815423265...: OEIS A007493.
    const root = findRoot((x) => x ** 3 - 2 * x - 5, 2, 3);
    expect(root.status).toBe("converged");
    expectRelative(root.x, 2.0945514815423265, 1e-15);
    expect(root.evaluations).toBeLessThan(15);
  });

  it("finds the fixed point of the cosine", () => {
    // 0.7390851332151607: OEIS A003957.
    expectRelative(findRoot((x) => Math.cos(x) - x, 0, 1).x, 0.7390851332151607, 1e-15);
  });

  it("finds a root of a function that is flat over hundreds of units", () => {
    const root = findRoot((x) => Math.exp(x) - 1e-8, -700, 10);
    expectRelative(root.x, Math.log(1e-8), 1e-12);
    expect(root.evaluations).toBeLessThan(60);
  });

  it("keeps the root in the bracket it returns", () => {
    const root = findRoot((x) => x - 0.3, 0, 1, { xTolerance: 1e-3 });
    expect(root.low <= 0.3 && root.high >= 0.3).toBe(true);
    expect(Math.abs(root.x - 0.3)).toBeLessThanOrEqual(1e-3);
  });

  it("returns an end that is a root", () => {
    expect(findRoot((x) => x, 0, 1)).toMatchObject({ status: "converged", x: 0, evaluations: 2 });
    expect(findRoot((x) => x - 1, 0, 1)).toMatchObject({ status: "converged", x: 1 });
  });

  it("uses values at the ends that are given", () => {
    let calls = 0;
    const f = (x: number): number => {
      calls++;
      return x - 0.25;
    };
    const root = findRoot(f, 0, 1, { valueAtLow: -0.25, valueAtHigh: 0.75 });
    expectRelative(root.x, 0.25, 1e-15);
    expect(calls).toBe(root.evaluations);
  });

  it("says noSignChange and gives the nearer end when both values have one sign", () => {
    expect(findRoot((x) => x * x + 1, -1, 3)).toMatchObject({ status: "noSignChange", x: -1, value: 2 });
    expect(findRoot((x) => x * x - 1, -0.5, 3).status).toBe("converged");
  });

  it("says maxIterations at the limit and converged with one more than needed", () => {
    const f = (x: number): number => x ** 3 - 2 * x - 5;
    const needed = findRoot(f, 2, 3).evaluations;
    expect(findRoot(f, 2, 3, { maxEvaluations: needed - 1 }).status).toBe("maxIterations");
    expect(findRoot(f, 2, 3, { maxEvaluations: needed }).status).toBe("converged");
  });

  it("says nonFinite when the function is not a number, and returns numbers", () => {
    const root = findRoot((x) => (x > 0.4 && x < 0.6 ? NaN : x - 0.5), 0, 1);
    expect(root.status).toBe("nonFinite");
    expect(Object.values(root).every((value) => typeof value === "string" || Number.isFinite(value))).toBe(true);
  });

  it("refuses ends that are not finite or not in order", () => {
    expect(() => findRoot((x) => x, NaN, 1)).toThrow(AppError);
    expect(() => findRoot((x) => x, 2, 1)).toThrow(/lo <= hi/);
  });
});
