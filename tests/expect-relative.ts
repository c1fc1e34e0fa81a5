import { expect } from "vitest";

/**
 * Expects `actual` to agree with `expected` within the relative tolerance `rtol` (dimensionless, > 0).
 * Relative, because absolute tolerances pass 1e-9 for 5e-9. Fails on any value that is not finite.
 */
export function expectRelative(actual: number, expected: number, rtol: number): void {
  const error = Math.abs(actual - expected) / Math.max(Math.abs(expected), Number.MIN_VALUE);
  expect(
    Number.isFinite(actual) && error <= rtol,
    `${actual} agrees with ${expected} within ${rtol} (is off by ${error})`,
  ).toBe(true);
}
