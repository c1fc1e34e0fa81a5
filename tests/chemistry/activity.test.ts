import { describe, expect, test } from "vitest";
import {
  beyondDaviesRange,
  daviesTerm,
  debyeHueckelA,
  log10ActivityCoefficient,
  relativePermittivityOfWater,
} from "../../src/chemistry/activity.ts";
import { expectRelative } from "../expect-relative.ts";

describe("activity coefficients", () => {
  test("water has relative permittivity 78.30 and A 0.509 within 0.5 % at 25 C (CRC Handbook, from memory)", () => {
    expectRelative(relativePermittivityOfWater(25), 78.3, 1e-4);
    expectRelative(debyeHueckelA(25), 0.509, 5e-3);
  });

  test("A rises with temperature", () => {
    expect(debyeHueckelA(60)).toBeGreaterThan(debyeHueckelA(25));
    expect(debyeHueckelA(25)).toBeGreaterThan(debyeHueckelA(0));
  });

  test("a singly charged ion at 0.1 mol/L has log10 gamma -0.107 (Davies with A 0.509)", () => {
    expectRelative(log10ActivityCoefficient(1, 0.1, 25), -0.509 * (Math.sqrt(0.1) / (1 + Math.sqrt(0.1)) - 0.03), 5e-3);
  });

  test("the coefficient goes with the square of the charge and not with its sign", () => {
    expectRelative(log10ActivityCoefficient(-3, 0.05, 25), 9 * log10ActivityCoefficient(1, 0.05, 25), 1e-12);
  });

  test("beyond 0.5 mol/L the term keeps its value at 0.5 and the range is left, not at 0.5 itself", () => {
    expect(daviesTerm(0.5 - 1e-6)).not.toBe(daviesTerm(0.5));
    expect(daviesTerm(2)).toBe(daviesTerm(0.5));
    expect(beyondDaviesRange(0.5)).toBe(false);
    expect(beyondDaviesRange(0.5 + 1e-9)).toBe(true);
  });
});
