import { describe, expect, it } from "vitest";
import { median, quantile } from "../../src/numerics/quantile.ts";
import { expectRelative } from "../expect-relative.ts";

describe("quantile", () => {
  it("follows definition 7 of Hyndman and Fan: position 1 + (n - 1) p between order statistics", () => {
    const values = [15, 20, 35, 40, 50];
    expectRelative(quantile(values, 0.4), 29, 1e-15);
    expectRelative(quantile(values, 0.25), 20, 1e-15);
    expect([quantile(values, 0), quantile(values, 1)]).toEqual([15, 50]);
  });

  it("does not depend on the order of the values and leaves them alone", () => {
    const values = [3, 1, 2, 10];
    expectRelative(median(values), 2.5, 1e-15);
    expect(values).toEqual([3, 1, 2, 10]);
    expect(median([7])).toBe(7);
  });

  it("refuses an empty list, a missing number and a probability outside 0 to 1", () => {
    expect(() => quantile([], 0.5)).toThrow(/finite values/);
    expect(() => quantile([1, NaN], 0.5)).toThrow(/finite values/);
    expect(() => quantile([1], 1.01)).toThrow(/probability/);
    expect(quantile([1], 1)).toBe(1);
  });
});
