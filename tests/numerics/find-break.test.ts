import { describe, expect, it } from "vitest";
import { findBreak } from "../../src/numerics/find-break.ts";

/** The search with every place looked at counted and kept. */
function watched(f: (x: number) => number, good: number, bad: number, guesses: readonly number[] = []) {
  const looked: number[] = [];
  const excess = (x: number): number => {
    looked.push(x);
    return f(x);
  };
  const found = findBreak(
    excess,
    { x: good, excess: f(good) },
    { x: bad, excess: f(bad) },
    { relative: 0.004, guesses },
  );
  return { ...found, looked };
}

describe("findBreak", () => {
  it.each([
    ["a straight line", (x: number) => 3 * x - 0.6, 1e-6, 2, 0.2],
    ["a line from very far away", (x: number) => 1e4 * x - 0.3, 1e-9, 2, 3e-5],
    ["a saturating share", (x: number) => x / (1e-3 + x) - 0.25, 1e-9, 2, 1e-3 / 3],
    ["a jump", (x: number) => (x > 0.0123 ? Infinity : -0.5), 1e-9, 2, 0.0123],
    ["a finite jump", (x: number) => (x > 0.0123 ? 50 : -0.5), 1e-9, 2, 0.0123],
    ["a bound that breaks downwards", (x: number) => 1e-4 / x - 1, 1, 1e-8, 1e-4],
  ])("finds %s from both sides, to the ratio asked for", (_what, f, good, bad, at) => {
    const { holds, breaks, looked } = watched(f, good, bad);
    expect(holds.excess).toBeLessThanOrEqual(0);
    expect(breaks.excess).toBeGreaterThan(0);
    expect(Math.abs(Math.log(breaks.x / holds.x))).toBeLessThanOrEqual(Math.log(1.004) + 1e-12);
    expect(Math.min(holds.x, breaks.x)).toBeLessThanOrEqual(at * (1 + 1e-12));
    expect(Math.max(holds.x, breaks.x)).toBeGreaterThanOrEqual(at * (1 - 1e-12));
    expect(looked.length).toBeLessThanOrEqual(24);
  });
  it("needs four looks at a straight line, and two where the place is guessed", () => {
    expect(watched((x) => 1e4 * x - 0.3, 1e-9, 2).looked.length).toBeLessThanOrEqual(4);
    expect(watched((x) => (x > 0.0123 ? Infinity : -0.5), 1e-9, 2, [0.0123]).looked.length).toBe(2);
  });
  it("passes over guesses outside the bracket and survives a wrong one", () => {
    const { holds, breaks } = watched((x) => x - 0.5, 0.1, 1, [7, 0.11]);
    expect(holds.x).toBeLessThanOrEqual(0.5);
    expect(breaks.x).toBeGreaterThan(0.5);
  });
});
