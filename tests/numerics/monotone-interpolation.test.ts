import { describe, expect, it } from "vitest";
import { monotoneInterpolation } from "../../src/numerics/monotone-interpolation.ts";
import { expectRelative } from "../expect-relative.ts";

describe("monotoneInterpolation", () => {
  // The RPN 14 data of Fritsch and Carlson, SIAM J. Numer. Anal. 17 (1980) 238, table 1 (from memory).
  const x = [7.99, 8.09, 8.19, 8.7, 9.2, 10, 12, 15, 20];
  const y = [0, 2.76429e-5, 4.37498e-2, 0.169183, 0.469428, 0.94374, 0.998636, 0.999919, 0.999994];

  it("passes through its points", () => {
    const curve = monotoneInterpolation(x, y);
    x.forEach((value, i) => expectRelative(1 + curve.at(value), 1 + y[i]!, 1e-15));
  });

  it("rises everywhere on data that rise everywhere", () => {
    const curve = monotoneInterpolation(x, y);
    let before = -1;
    for (let k = 0; k <= 2000; k++) {
      const here = curve.at(7.99 + (12.01 * k) / 2000);
      expect(here).toBeGreaterThanOrEqual(before);
      before = here;
    }
    expect(before).toBeLessThanOrEqual(y.at(-1)!);
  });

  it("has the slope that differences of its values have", () => {
    const curve = monotoneInterpolation(x, y);
    for (const at of [8.05, 8.5, 9.01, 9.9, 11, 17]) {
      const h = 1e-5;
      expectRelative(curve.slopeAt(at), (curve.at(at + h) - curve.at(at - h)) / (2 * h), 1e-6);
    }
  });

  it("is exact for a straight line and holds the end values outside", () => {
    const curve = monotoneInterpolation([0, 1, 3, 4], [1, 3, 7, 9]);
    for (const at of [0.2, 1.7, 3.9]) expectRelative(curve.at(at), 1 + 2 * at, 1e-14);
    expect([curve.at(-5), curve.at(9), curve.slopeAt(-5)]).toEqual([1, 9, 0]);
    expectRelative(monotoneInterpolation([0, 2], [1, 2]).at(1), 1.5, 1e-15);
  });

  it("stays flat where neighbours are equal and does not overshoot a peak", () => {
    const curve = monotoneInterpolation([0, 1, 2, 3], [0, 1, 1, 0]);
    for (const at of [1.2, 1.5, 1.8]) expectRelative(curve.at(at), 1, 1e-15);
  });

  it("refuses points out of order, and takes them in order", () => {
    expect(() => monotoneInterpolation([0, 2, 1], [0, 1, 2])).toThrow(/increasing/);
    expect(() => monotoneInterpolation([0], [0])).toThrow(/at least 2/);
    expect(() => monotoneInterpolation([0, 1], [0, NaN])).toThrow(/finite/);
    expectRelative(monotoneInterpolation([0, 1, 2], [0, 1, 2]).at(0.5), 0.5, 1e-15);
  });
});
