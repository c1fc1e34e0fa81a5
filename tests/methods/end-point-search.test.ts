import { describe, expect, it } from "vitest";
import { firstCrossing, nearCrossing } from "../../src/methods/end-point-search.ts";
import { expectRelative } from "../expect-relative.ts";

/** The shape of a titration: log10 of what is over minus log10 of what is left, equivalence at `at`. */
const jump =
  (at: number, width = 1e-6) =>
  (v: number) =>
    Math.asinh((v - at) / width); // steep at the crossing, flat beside it

describe("firstCrossing", () => {
  it.each([0.31, 0.899, 0.999, 1, 1.001, 1.2, 3.99])(
    "finds the end of a steep jump at %d times the expected volume",
    (part) => {
      const search = firstCrossing(jump(part * 0.02), 0.02);
      expect(search.found).toBe(true);
      expect(Math.abs(search.volumeL - part * 0.02)).toBeLessThanOrEqual(2e-6 * 0.02);
    },
  );
  it("spends few evaluations on a jump where it is expected", () => {
    expect(firstCrossing(jump(0.02), 0.02).evaluations).toBeLessThan(30);
  });
  it("takes the first of two crossings upwards", () => {
    // Rises through zero at 1.01, falls back at 1.5, rises again at 2.
    const twice = (v: number) => (v - 1.01) * (v - 1.5) * (v - 2);
    expectRelative(firstCrossing(twice, 1).volumeL, 1.01, 1e-5);
  });
  it("reports none where the criterion never turns", () => {
    expect(firstCrossing(() => -1, 0.02)).toMatchObject({ found: false, volumeL: 0 });
    expect(firstCrossing((v) => v - 4.01 * 0.02, 0.02).found).toBe(false);
  });
  it("reports none where the end was over before a third went in", () => {
    expect(firstCrossing(() => 1, 0.02)).toMatchObject({ found: false, volumeL: 0 });
    expect(firstCrossing((v) => v - 0.29 * 0.02, 0.02).found).toBe(false);
  });
  it("looks past volumes at which there is no value", () => {
    const gap = (v: number) => (v > 0.5 && v < 0.95 ? Number.NaN : v - 1);
    expectRelative(firstCrossing(gap, 1).volumeL, 1, 1e-5);
  });
});

describe("nearCrossing", () => {
  const line = (v: number) => v - 1;
  it("finds the shifted crossing on either side", () => {
    expectRelative(nearCrossing((v) => line(v) + 0.01, 1, -1, 1)!, 0.99, 1e-9);
    expectRelative(nearCrossing((v) => line(v) - 0.01, 1, 1, 1)!, 1.01, 1e-9);
  });
  it("stops at no volume at all where the band reaches there", () => {
    expect(nearCrossing((v) => line(v) + 2, 1, -1, 1)).toBe(0);
  });
  it("gives null where the band has no edge on the scale", () => {
    expect(nearCrossing(() => -1, 1, 1, 1)).toBe(null);
  });
  it("gives null where there is no value", () => {
    expect(nearCrossing(() => Number.NaN, 1, 1, 1)).toBe(null);
  });
});
