import { expect, test } from "vitest";
import { seededRandom } from "../../src/numerics/seeded-random.ts";
import { correlation, ranks, varianceShare } from "../../src/numerics/variance-share.ts";

const random = seededRandom(5);
const N = 20_000;
const normals = (): number[] => Array.from({ length: N }, () => random.normal());
const [a, b, c] = [normals(), normals(), normals()];

test("shares of a sum are the squares of its factors over their sum", () => {
  const y = a.map((value, i) => 3 * value + 2 * b[i]!);
  expect(Math.abs(varianceShare(a, y) - 9 / 13)).toBeLessThan(0.02);
  expect(Math.abs(varianceShare(b, y) - 4 / 13)).toBeLessThan(0.02);
  expect(varianceShare(c, y)).toBeLessThan(0.004);
});

test("a bend without a slope is seen, which a correlation does not", () => {
  const y = a.map((value, i) => value * value + 0.5 * b[i]!);
  // Var(z²) = 2 for a standard normal z: the share is 2 / 2.25 = 0.89, less what varies inside the two outermost of 20 classes.
  expect(varianceShare(a, y)).toBeGreaterThan(0.7);
  expect(varianceShare(a, y)).toBeLessThan(0.89);
  expect(Math.abs(correlation(a, y))).toBeLessThan(0.05);
});

test("pairs without a value are left out, and too few give no share", () => {
  const y = a.map((value, i) => (i % 2 === 0 ? value : Number.NaN));
  expect(varianceShare(a, y)).toBeGreaterThan(0.9);
  expect(correlation(a, y)).toBeGreaterThan(0.999);
  expect(varianceShare(a.slice(0, 40), a.slice(0, 40))).toBe(0);
  expect(
    varianceShare(
      a,
      a.map(() => 1),
    ),
  ).toBe(0);
});

test("ranks leave gaps where there is no value", () => {
  expect([...ranks([3, Number.NaN, -1, 3, 1e9])]).toEqual([1, Number.NaN, 0, 2, 3]);
});
