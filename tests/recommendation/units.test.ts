import { describe, expect, it } from "vitest";
import type { ComponentForm } from "../../src/constants/knowledge.ts";
import type { Concentration } from "../../src/recommendation/contract.ts";
import { toComponentMolPerL } from "../../src/recommendation/units.ts";
import { formulaMassGPerMol, readFormula } from "../../src/recommendation/units-formula.ts";
import { expectRelative } from "../expect-relative.ts";

// IUPAC conventional atomic weights (Pure Appl. Chem. 2022, 94, 573), g/mol.
const WEIGHTS = new Map(
  Object.entries({
    H: 1.008,
    C: 12.011,
    N: 14.007,
    O: 15.999,
    S: 32.06,
    Ca: 40.078,
    Mg: 24.305,
    Fe: 55.845,
    Zn: 65.38,
    Al: 26.982,
    Cu: 63.546,
    P: 30.974,
    Cr: 51.996,
    U: 238.03,
  }),
);

const form = (
  spelling: string,
  charge: number,
  molarMassGPerMol: number,
  more: Partial<ComponentForm> = {},
): ComponentForm => ({
  spelling,
  charge,
  molarMassGPerMol,
  protonsPerComponent: 0,
  componentsPerFormula: 1,
  ...more,
});
const CALCIUM = form("Ca2+", 2, 40.078);
const MAGNESIUM = form("Mg2+", 2, 24.305);
const IRON = form("Fe3+", 3, 55.845);
const SULFATE = form("SO4^2-", -2, 96.06);
const HYDROGENCARBONATE = form("HCO3-", -1, 61.017, { protonsPerComponent: 1 });
const DICHROMATE = form("Cr2O7^2-", -2, 215.99, { componentsPerFormula: 2 });
const NITRATE = form("NO3-", -1, 62.004);
const CITRATE = form("citrate", -3, 189.1);

function molPerL(level: Concentration, of: ComponentForm): number {
  const converted = toComponentMolPerL(level, of, WEIGHTS);
  if (converted.kind === "fault") throw new Error(converted.expected);
  return converted.molPerL;
}

describe("readFormula", () => {
  it.each([
    ["CaCO3", { Ca: 1, C: 1, O: 3 }],
    ["Al2(SO4)3", { Al: 2, S: 3, O: 12 }],
    ["CuSO4·5H2O", { Cu: 1, S: 1, O: 9, H: 10 }],
    ["CuSO4.5H2O", { Cu: 1, S: 1, O: 9, H: 10 }],
    ["(NH4)2Fe(SO4)2*6H2O", { N: 2, H: 20, Fe: 1, S: 2, O: 14 }],
  ])("counts the atoms of %s", (text, atoms) => {
    expect(Object.fromEntries(readFormula(text, WEIGHTS) ?? [])).toEqual(atoms);
  });
  it.each(["", "caco3", "Xx2", "Ca(CO3", "CaCO3)", "Ca0", "·", "EDTA", "2", "CaCO3·"])(
    "finds no formula in %j",
    (text) => {
      expect(readFormula(text, WEIGHTS)).toBeNull();
    },
  );
  it("weighs a formula by its atoms", () => {
    expectRelative(formulaMassGPerMol(readFormula("CaCO3", WEIGHTS) ?? new Map(), WEIGHTS), 100.086, 1e-5);
  });
});

describe("toComponentMolPerL", () => {
  it.each([
    ["mol/L", 1],
    ["mmol/L", 1e-3],
    ["umol/L", 1e-6],
    ["µmol/L", 1e-6],
  ] as const)("takes %s as a molar unit", (unit, factor) => {
    expectRelative(molPerL({ value: 4, unit }, CALCIUM), 4 * factor, 1e-12);
  });
  it.each([
    ["g/L", 1],
    ["mg/L", 1e-3],
    ["ug/L", 1e-6],
    ["µg/L", 1e-6],
  ] as const)("takes %s without a formula as the mass of the ion itself", (unit, factor) => {
    expectRelative(molPerL({ value: 40.078, unit }, CALCIUM), factor, 1e-12);
  });
  it("takes hardness as calcium carbonate for calcium and for magnesium alike", () => {
    const level = { value: 100.086, unit: "mg/L", as: "CaCO3" } as const;
    expectRelative(molPerL(level, CALCIUM), 1e-3, 1e-5);
    expectRelative(molPerL(level, MAGNESIUM), 1e-3, 1e-5);
  });
  it("counts two irons in each Fe2O3 and two aluminiums in each Al2(SO4)3", () => {
    expectRelative(molPerL({ value: 159.687, unit: "mg/L", as: "Fe2O3" }, IRON), 2e-3, 1e-5);
    expectRelative(molPerL({ value: 342.13, unit: "mg/L", as: "Al2(SO4)3" }, form("Al3+", 3, 26.982)), 2e-3, 1e-3);
  });
  it("takes sulfur, sulfur trioxide and the hydrate of a salt for sulfate", () => {
    expectRelative(molPerL({ value: 32.06, unit: "g/L", as: "S" }, SULFATE), 1, 1e-9);
    expectRelative(molPerL({ value: 80.057, unit: "g/L", as: "SO3" }, SULFATE), 1, 1e-4);
    expectRelative(molPerL({ value: 249.68, unit: "g/L", as: "CuSO4·5H2O" }, SULFATE), 1, 1e-4);
  });
  it("counts nitrate as nitrogen, and uranyl by the uranium in U3O8", () => {
    expectRelative(molPerL({ value: 14.007, unit: "mg/L", as: "N" }, NITRATE), 1e-3, 1e-9);
    expectRelative(molPerL({ value: 842.082, unit: "mg/L", as: "U3O8" }, form("UO2^2+", 2, 270.03)), 3e-3, 1e-5);
  });
  it("counts two of the component in each dichromate, molar and by mass", () => {
    expectRelative(molPerL({ value: 1, unit: "mmol/L" }, DICHROMATE), 2e-3, 1e-12);
    expectRelative(molPerL({ value: 215.99, unit: "mg/L" }, DICHROMATE), 2e-3, 1e-12);
    expectRelative(molPerL({ value: 51.996, unit: "mg/L", as: "Cr" }, DICHROMATE), 1e-3, 1e-9);
  });
  it("says how hydrogencarbonate given as calcium carbonate was read", () => {
    const converted = toComponentMolPerL({ value: 100.086, unit: "mg/L", as: "CaCO3" }, HYDROGENCARBONATE, WEIGHTS);
    expect(converted).toMatchObject({
      kind: "converted",
      note: expect.stringContaining("one carbonate per CaCO3") as string,
    });
  });
  it.each([
    ["a formula without the element", { value: 1, unit: "mg/L", as: "ZnO" }, CALCIUM, "a formula that holds Ca"],
    ["calcium carbonate for a trivalent ion", { value: 1, unit: "mg/L", as: "CaCO3" }, IRON, "a formula that holds Fe"],
    ["no formula at all", { value: 1, unit: "mg/L", as: "chalk" }, CALCIUM, "a chemical formula"],
    ["a formula beside a molar unit", { value: 1, unit: "mmol/L", as: "CaCO3" }, CALCIUM, 'no "as" beside mmol/L'],
    [
      "a formula for an anion that has none",
      { value: 1, unit: "mg/L", as: "C6H8O7" },
      CITRATE,
      "citrate is counted as itself",
    ],
  ] as const)("refuses %s", (_what, level, of, expected) => {
    const converted = toComponentMolPerL(level, of, WEIGHTS);
    expect(converted).toMatchObject({
      kind: "fault",
      field: "as",
      expected: expect.stringContaining(expected) as string,
    });
  });
});
