import { describe, expect, test } from "vitest";
import { assumedUncertainty, printedUncertainty } from "../../src/constants/uncertainty.ts";
import { expectRelative } from "../expect-relative.ts";

describe("printedUncertainty", () => {
  test("reads a spread in units of the last digit as the half-width of a rectangle", () => {
    expectRelative(printedUncertainty("9.57", "+/-10", false).value, 0.1 / Math.sqrt(3), 1e-12);
    expectRelative(printedUncertainty("16.5", "+/-1", false).value, 0.1 / Math.sqrt(3), 1e-12);
    expectRelative(printedUncertainty("-17", "+/-2", false).value, 2 / Math.sqrt(3), 1e-12);
  });

  test("takes half of a spread to one side", () => {
    expectRelative(printedUncertainty("27.8", "-4", false).value, 0.2 / Math.sqrt(3), 1e-12);
    expect(printedUncertainty("27.8", "-4", false)).toEqual(printedUncertainty("27.8", "+4", false));
  });

  test("counts trailing zeros as printed: 2.00 with +/-10 is 0.10, 2.0 with +/-10 is 1.0", () => {
    const [fine, coarse] = [printedUncertainty("2.00", "+/-10", false), printedUncertainty("2.0", "+/-10", false)];
    expectRelative(coarse.value / fine.value, 10, 1e-12);
  });

  test("does not go below 0.03 where workers agree", () => {
    expect(printedUncertainty("25.1", "+/-0", false)).toEqual({ value: 0.03, stated: true });
    expect(printedUncertainty("13.997", "+/-3", false).value).toBe(0.03);
  });

  test("assumes 0.2 where none is stated, and says so", () => {
    expect(printedUncertainty("18.3", "0", false)).toEqual({ value: 0.2, stated: false });
  });

  test("widens what is printed in parentheses by 0.3 in quadrature", () => {
    expectRelative(printedUncertainty("18.3", "0", true).value, Math.hypot(0.2, 0.3), 1e-12);
    expectRelative(printedUncertainty("25.1", "+/-0", true).value, Math.hypot(0.03, 0.3), 1e-12);
  });

  test.each(["", "5", "+/-", "+-5", "about 3"])("refuses the error column %j", (error) => {
    expect(() => printedUncertainty("1.0", error, false)).toThrow(RangeError);
  });
});

describe("assumedUncertainty", () => {
  test("is wider the less sure the memory, and narrower for what was read", () => {
    const [high, medium, low] = (["high", "medium", "low"] as const).map((c) => assumedUncertainty("memory", c).value);
    expect(high).toBeLessThan(medium!);
    expect(medium).toBeLessThan(low!);
    expect(assumedUncertainty("read", "low").value).toBeLessThan(low!);
    expect(assumedUncertainty("memory", "low").stated).toBe(false);
  });
});
