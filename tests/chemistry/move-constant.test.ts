import { describe, expect, test } from "vitest";
import { daviesTerm, debyeHueckelA } from "../../src/chemistry/activity.ts";
import {
  constantAt,
  daviesMoveUncertainty,
  selectEnthalpy,
  selectionConditions,
} from "../../src/chemistry/move-constant.ts";
import { expectRelative } from "../expect-relative.ts";
import { enthalpy, reaction, record } from "./small-knowledge.ts";

const at = (ionicStrengthMolPerL: number, temperatureC = 25) => ({ ionicStrengthMolPerL, temperatureC });

describe("constantAt", () => {
  test("a constant used where it was measured is used as it stands, with its own uncertainty", () => {
    const use = constantAt(reaction("r", -16, [record(10.65)]), at(0.1));
    expectRelative(use.log10KUsed, 10.65, 1e-12);
    expectRelative(use.uncertainty, 0.05, 1e-12);
  });

  test("Ca + EDTA moves from 10.65 at 0.1 to about 12.4 at zero ionic strength (SRD 46 lists 12.44)", () => {
    const use = constantAt(reaction("r", -16, [record(10.65)]), at(0));
    expectRelative(use.log10KUsed, 10.65 + 16 * debyeHueckelA(25) * daviesTerm(0.1), 1e-9);
    expectRelative(use.log10KUsed, 12.44, 0.02);
    expectRelative(use.ionicStrengthShift, use.log10KUsed - 10.65, 1e-9);
  });

  test("a move of |sum nu z^2| of 8 or more adds uncertainty, one below does not", () => {
    const far = constantAt(reaction("r", -16, [record(10)]), at(0.001)).uncertainty;
    const near = constantAt(reaction("r", -7, [record(10)]), at(0.001)).uncertainty;
    expectRelative(far, Math.hypot(0.05, 0.3), 1e-9);
    expectRelative(near, 0.05, 1e-12);
    expect(daviesMoveUncertainty(8, 1)).toBe(0.2);
    expect(daviesMoveUncertainty(8, 0)).toBe(0);
  });

  test("an exothermic reaction is weaker at 60 C by van 't Hoff, and one without enthalpy only less certain", () => {
    const known = constantAt(reaction("r", 0, [record(10)], [enthalpy(-40)]), at(0.1, 60));
    const expected = (-40 / (0.008314462618 * Math.LN10)) * (1 / 298.15 - 1 / 333.15);
    expectRelative(known.temperatureShift, expected, 1e-9);
    expectRelative(known.log10KUsed, 10 + expected, 1e-9);
    const unknown = constantAt(reaction("r", 0, [record(10)]), at(0.1, 60));
    expectRelative(unknown.log10KUsed, 10, 1e-12);
    expect(unknown.uncertainty).toBeGreaterThan(known.uncertainty);
  });

  test("an enthalpy that is not doubtful comes before a nearer doubtful one, and the nearer of two alike before the farther", () => {
    const heats = [
      enthalpy(1, { doubtful: true }),
      enthalpy(2, { ionicStrengthMolPerL: 1 }),
      enthalpy(3, { ionicStrengthMolPerL: 0 }),
    ];
    expect(selectEnthalpy(reaction("r", 0, [], heats), at(0.1))?.kJPerMol).toBe(3);
    expect(selectEnthalpy(reaction("r", 0, [], []), at(0.1))).toBe(null);
  });

  test("records are chosen on a grid of ionic strengths that is within 6 % of the exact one", () => {
    for (const i of [1.1e-4, 0.003, 0.1, 0.49, 2])
      expectRelative(selectionConditions(at(i)).ionicStrengthMolPerL, i, 0.06);
    expect(selectionConditions(at(5e-5)).ionicStrengthMolPerL).toBe(0);
  });
});
