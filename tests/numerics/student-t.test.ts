import { describe, expect, it } from "vitest";
import { incompleteBeta, lnGamma, studentTProbability, studentTQuantile } from "../../src/numerics/student-t.ts";
import { expectRelative } from "../expect-relative.ts";

describe("Student's t", () => {
  it("agrees with the table of the GUM (JCGM 100:2008, table G.2, from memory) for 95 % coverage", () => {
    for (const [degreesOfFreedom, t] of [
      [1, 12.71],
      [2, 4.3],
      [3, 3.18],
      [5, 2.57],
      [10, 2.23],
      [20, 2.09],
      [50, 2.01],
      [100, 1.984],
    ] as const)
      expectRelative(studentTQuantile(0.975, degreesOfFreedom), t, 0.003);
  });

  it("has the closed forms for one and two degrees of freedom", () => {
    for (const p of [0.6, 0.9, 0.975, 0.999]) {
      expectRelative(studentTQuantile(p, 1), Math.tan(Math.PI * (p - 0.5)), 1e-11);
      expectRelative(studentTQuantile(p, 2), (2 * p - 1) / Math.sqrt(2 * p * (1 - p)), 1e-11);
    }
  });

  it("tends to the normal quantile 1.959964 for many degrees of freedom", () => {
    // 1.959963984540054: Abramowitz and Stegun, table 26.5.
    expectRelative(studentTQuantile(0.975, 1e7), 1.959963984540054, 1e-6);
  });

  it("is odd about one half and inverts its distribution function", () => {
    for (const degreesOfFreedom of [0.7, 3, 17.3, 400]) {
      const t = studentTQuantile(0.93, degreesOfFreedom);
      expectRelative(-studentTQuantile(0.07, degreesOfFreedom), t, 1e-12);
      expectRelative(studentTProbability(t, degreesOfFreedom), 0.93, 1e-12);
    }
    expect(studentTQuantile(0.5, 3)).toBe(0);
  });

  it("refuses probabilities of 0 and 1 and no degrees of freedom", () => {
    expect(() => studentTQuantile(1, 3)).toThrow(/probability/);
    expect(() => studentTQuantile(0.9, 0)).toThrow(/degrees/);
    expect(studentTQuantile(0.9, 0.5)).toBeGreaterThan(studentTQuantile(0.9, 1)); // heavier tail
  });
});

describe("special functions", () => {
  it("lnGamma gives factorials and the value at one half", () => {
    expectRelative(lnGamma(11), Math.log(3628800), 1e-14);
    expectRelative(lnGamma(0.5), 0.5 * Math.log(Math.PI), 1e-13);
  });

  it("incompleteBeta gives its closed forms and its symmetry", () => {
    expectRelative(incompleteBeta(0.3, 1, 4), 1 - 0.7 ** 4, 1e-13);
    expectRelative(incompleteBeta(0.3, 2.5, 0.7), 1 - incompleteBeta(0.7, 0.7, 2.5), 1e-13);
    expect([incompleteBeta(0, 2, 3), incompleteBeta(1, 2, 3)]).toEqual([0, 1]);
  });
});
