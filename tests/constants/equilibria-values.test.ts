import { describe, expect, test } from "vitest";
import { selectRecord } from "../../src/constants/select-constant.ts";
import { compositionKey } from "../../src/constants/choose-chains.ts";
import { expectRelative } from "../expect-relative.ts";
import { equilibria, reaction, srdRecord } from "./read-equilibria.ts";

const usual = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };

/** Overall log10 beta of a composition from the records chosen for I = 0.1 mol/L and 25 C, none of them moved. */
function log10BetaOf(components: Record<string, number>): number {
  const species = equilibria.species.find((s) => compositionKey(s.components) === compositionKey(components));
  if (species === undefined) throw new Error(`no species ${compositionKey(components)}`);
  return species.chain.reduce(
    (sum, link) => sum + link.factor * selectRecord(reaction(link.reaction), usual).record.log10K,
    0,
  );
}

describe("values as printed in SRD 46, by record", () => {
  // record, reaction, log10 K, C, mol/L, doubtful
  const spots: readonly [string, string, number, number, number, boolean][] = [
    ["108225", "EDTA H+ [HL]/([L][H])", 10.19, 25, 0.1, false],
    ["108282", "EDTA H+ [H4L]/([H3L][H])", 2.0, 25, 0.1, false],
    ["108707", "EDTA Zn2+ [ML]/([M][L])", 16.5, 25, 0.1, false],
    ["108809", "EDTA Bi3+ [ML]/([M][L])", 27.8, 20, 0.1, false],
    ["108542", "EDTA UO2^2+ [MHL]/([M][HL])", 7.4, 25, 0.1, false],
    ["108656", "EDTA TiO2+ [ML]/([M][L])", 17.3, 25, 0.1, false],
    ["108673", "EDTA VO2^+ [ML]/([M][L])", 15.5, 20, 0.1, false],
    ["108669", "EDTA VO2+ [ML]/([M][L])", 18.7, 25, 0.1, false],
    ["108632", "EDTA Cr3+ [ML]/([M][L])", 23.4, 20, 0.1, true],
    ["170275", "hydroxide H+ [HL]/([L][H])", 13.78, 25, 0.1, false],
    ["170935", "hydroxide Zn2+ [ML2]/([M][L]^2)", 10.2, 25, 0, true],
    ["171138", "hydroxide Al3+ [M13O4L24]/([M]^13[L]^32)", 349.3, 25, 0, false],
    ["175409", "sulfide H+ [H2L]/([HL][H])", 7.02, 25, 0, false],
    ["160912", "sulfosalicylic-acid Fe3+ [ML][H]/([M][HL])", 2.7, 25, 0.1, false],
    ["164728", "mordant-black-11 Zn2+ [ML][H]^2/([M][H2L])", -5.8, 20, 0.5, false],
  ];

  test.each(spots)(
    "record %s of %s is %d at %d C and I %d",
    (record, id, log10K, temperatureC, ionicStrengthMolPerL, doubtful) => {
      const found = srdRecord(record);
      expect(found.reaction.id).toBe(id);
      expect(found.record).toMatchObject({ log10K, temperatureC, ionicStrengthMolPerL, doubtful });
    },
  );

  test("the footnotes that name a background are kept in words, the others by number", () => {
    expect(srdRecord("108224").record.medium).toBe("Na+ background");
    expect(srdRecord("108225").record.medium).toBe("K+ background");
    expect(srdRecord("109646").record.medium).toBe("footnote 64 of the compilation");
    expect(srdRecord("108254").record).not.toHaveProperty("medium");
  });

  test("the enthalpy of ML of calcium and EDTA is record 108352, -25.5 kJ/mol", () => {
    const [enthalpy] = reaction("EDTA Ca2+ [ML]/([M][L])").enthalpies;
    expect(enthalpy).toMatchObject({ kJPerMol: -25.5, temperatureC: 25, ionicStrengthMolPerL: 0.1, doubtful: false });
    expect(enthalpy?.provenance.record).toBe("108352");
  });
});

describe("sums of nu z^2", () => {
  test.each([
    ["EDTA Zn2+ [ML]/([M][L])", 4 - 4 - 16],
    ["EDTA H+ [HL]/([L][H])", 9 - 16 - 1],
    ["hydroxide H+ [HL]/([L][H])", -2],
    ["hydroxide Zn2+ [ML2]/([M][L]^2)", 0 - 4 - 2],
    ["hydroxide Mg2+ [M][L]^2/[ML2(s,active)]", 4 + 2],
    ["EDTA Fe3+ [M2(OH)2L2]/[M(OH)L]^2", 16 - 8],
    ["ammonia Zn2+ [ML4]/([M][L]^4)", 0],
  ])("%s has %d", (id, expected) => {
    expect(reaction(id).deltaZ2).toBe(expected);
  });
});

describe("overall constants from chains, in the potassium background", () => {
  // Read: Harvey, Analytical Chemistry 2.1, section 16.12 (values of Martell and Smith, 20 C, I = 0.1); the later compilation differs by up to 0.3
  test.each([
    ["Mg2+", 8.79],
    ["Ca2+", 10.69],
    ["Ba2+", 7.86],
    ["Bi3+", 27.8],
    ["Co2+", 16.31],
    ["Ni2+", 18.62],
    ["Cu2+", 18.8],
  ])("log10 K of %s with EDTA agrees with Harvey's appendix (%d) within 0.3", (metal, expected) => {
    expect(Math.abs(log10BetaOf({ [metal]: 1, EDTA: 1 }) - expected)).toBeLessThanOrEqual(0.3);
  });

  test("pKw at I = 0.1 mol/L and 25 C is 13.78 (record 170275)", () => {
    expectRelative(log10BetaOf({ "H+": -1 }), -13.78, 1e-12);
  });

  test("Zn(OH)2 is its hydroxide constant less two ionic products of water", () => {
    expectRelative(log10BetaOf({ "Zn2+": 1, "H+": -2 }), 10.2 - 2 * 13.78, 1e-12);
  });

  test("H4EDTA adds up its four protonation constants of records 108225, 108254, 108272 and 108282", () => {
    expectRelative(log10BetaOf({ "H+": 4, EDTA: 1 }), 10.19 + 6.13 + 2.69 + 2.0, 1e-12);
  });

  test("a proton-release constant passes through the protonation of its ligand: Fe(III) sulfosalicylate", () => {
    expectRelative(log10BetaOf({ "Fe3+": 1, "sulfosalicylic-acid": 1 }), 2.7 + 11.85, 1e-12);
  });

  test("sodium binds EDTA relative to the potassium background: 1.86 less log10(1 + 0.1 x 10^0.8)", () => {
    expectRelative(log10BetaOf({ "Na+": 1, EDTA: 1 }), 1.86 - Math.log10(1 + 0.1 * 10 ** 0.8), 0.005);
    expect(equilibria.species.some(({ components }) => "K+" in components)).toBe(false);
  });

  test("zinc with mordant black 11 has the remembered pair 12.9 and 20.0, and the record passed over is remarked", () => {
    expectRelative(log10BetaOf({ "Zn2+": 1, "mordant-black-11": 1 }), 12.9, 1e-12);
    expectRelative(log10BetaOf({ "Zn2+": 1, "mordant-black-11": 2 }), 20.0, 1e-12);
    expect(equilibria.remarks.some((r) => r.kind === "passed-over" && r.text.includes("12.31"))).toBe(true);
  });

  test("arsenazo III forms no metal species, for its metal records cannot stand beside its protonation", () => {
    const withMetal = equilibria.species.filter(
      ({ components }) =>
        "arsenazo-iii" in components && Object.keys(components).some((id) => id !== "arsenazo-iii" && id !== "H+"),
    );
    expect(withMetal).toEqual([]);
  });
});

describe("protonation at zero ionic strength", () => {
  // Read: Fifield and Kealey, table 3.3 (NH4+ 9.25, HCN 9.22); Harris, appendix G (NH4+ 9.245)
  test.each([
    ["ammonia H+ [HL]/([L][H])", 9.245],
    ["cyanide H+ [HL]/([L][H])", 9.22],
  ])("%s is %d within 0.01", (id, expected) => {
    const { record } = selectRecord(reaction(id), { ionicStrengthMolPerL: 0, temperatureC: 25 });
    expect(Math.abs(record.log10K - expected)).toBeLessThanOrEqual(0.0101);
  });
});

describe("solubility products at zero ionic strength", () => {
  // Read: Harvey, Modern Analytical Chemistry, appendix 3A (pKsp); CaCO3, CaF2 and MgF2 differ from SRD 46 by up to 0.13
  test.each([
    ["Mg(OH)2 (brucite)", 11.15, 0.01],
    ["Ca(OH)2 (s)", 5.19, 0.01],
    ["La(OH)3 (s)", 20.7, 0.01],
    ["Mn(OH)2 (s)", 12.8, 0.01],
    ["Co(OH)2 (s)", 14.9, 0.01],
    ["Ni(OH)2 (s)", 15.2, 0.01],
    ["Cu(OH)2 (s)", 19.32, 0.01],
    ["Fe(OH)3 (s)", 38.8, 0.01],
    ["Zn(OH)2 (amorphous)", 15.52, 0.01],
    ["Cd(OH)2 (beta)", 14.35, 0.01],
    ["MgCO3 (magnesite)", 7.46, 0.01],
    ["CaCO3 (calcite)", 8.35, 0.15],
    ["CaCO3 (aragonite)", 8.22, 0.15],
    ["CaF2 (s)", 10.41, 0.15],
    ["MgF2 (s)", 8.18, 0.15],
  ])("pKsp of %s is %d", (id, expected, tolerance) => {
    const solid = equilibria.solids.find((candidate) => candidate.id === id);
    const dissolution = solid?.chain.find((link) => reaction(link.reaction).text.includes("(s"));
    const { record } = selectRecord(reaction(dissolution!.reaction), { ionicStrengthMolPerL: 0, temperatureC: 25 });
    expect(Math.abs(dissolution!.factor * record.log10K - expected)).toBeLessThanOrEqual(tolerance);
  });

  test("one phase of a composition is the fresh one, and never one that does not form", () => {
    const fresh = new Map<string, string>();
    for (const solid of equilibria.solids.filter((s) => s.fresh)) {
      const key = compositionKey(solid.components);
      expect(fresh.get(key), solid.id).toBeUndefined();
      expect(solid.pace).not.toBe("no");
      fresh.set(key, solid.id);
    }
    expect([...fresh.values()]).toEqual(
      expect.arrayContaining([
        "Mg(OH)2 (active)",
        "Zn(OH)2 (amorphous)",
        "Al(OH)3 (fresh)",
        "Fe(OH)3 (s)",
        "CaCO3 (calcite)",
      ]),
    );
  });

  test("barium sulfate and silver chloride do not redissolve while titrated, zinc hydroxide does", () => {
    const redissolves = (id: string) => equilibria.solids.find((s) => s.id === id)?.redissolvesWhileTitrated;
    expect(redissolves("BaSO4 (barite)")).toBe(false);
    expect(redissolves("AgCl (s)")).toBe(false);
    expect(redissolves("Zn(OH)2 (amorphous)")).toBe(true);
  });

  test("the basic copper sulfate is written in whole numbers, its chain scaled with it", () => {
    const solid = equilibria.solids.find((s) => s.id === "Cu4SO4(OH)6 (s)");
    expect(solid?.components).toEqual({ "Cu2+": 4, sulfate: 1, "H+": -6 });
    expect(solid?.chain.find((link) => link.reaction.startsWith("sulfate Cu2+"))?.factor).toBe(-4);
  });
});
