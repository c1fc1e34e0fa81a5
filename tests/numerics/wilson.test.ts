import { expect, test } from "vitest";
import { wilsonInterval } from "../../src/numerics/wilson.ts";
import { expectRelative } from "../expect-relative.ts";

// R. G. Newcombe, Statistics in Medicine 17 (1998) 857, table I, method 3 (score): 81 of 263, 15 of 148, 0 of 20 and 1 of 29; recalled.
test.each([
  [81, 263, 0.2553, 0.3662],
  [15, 148, 0.0624, 0.1605],
  [0, 20, 0, 0.1611],
  [1, 29, 0.0061, 0.1718],
])("the score interval of %i in %i is that of the published comparison", (successes, trials, low, high) => {
  const interval = wilsonInterval(successes, trials);
  expect(Math.abs(interval.low - low)).toBeLessThan(6e-5);
  expect(Math.abs(interval.high - high)).toBeLessThan(6e-5);
});

test("the interval stays inside 0 to 1 and mirrors itself", () => {
  expect(wilsonInterval(10, 10).high).toBe(1);
  expectRelative(wilsonInterval(10, 10).low, 1 - wilsonInterval(0, 10).high, 1e-12);
});
