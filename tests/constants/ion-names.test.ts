import { describe, expect, test } from "vitest";
import { readIon } from "../../src/constants/ion-names.ts";
import { equilibria } from "./read-equilibria.ts";

const { components } = equilibria;
const read = (text: string): string => {
  const reading = readIon(text, components);
  if (reading.kind === "found") return `${reading.component.id} as ${reading.form.spelling}`;
  return reading.kind === "ambiguous"
    ? `one of ${reading.readings.join(", ")}`
    : `unknown, near ${reading.nearest.join(", ")}`;
};

describe("readIon finds", () => {
  test("every canonical spelling as itself", () => {
    for (const component of components) {
      for (const form of component.forms) expect(read(form.spelling)).toBe(`${component.id} as ${form.spelling}`);
    }
  });

  test("every component by its id, and never another component by it", () => {
    for (const { id } of components) {
      const reading = readIon(id, components);
      expect(reading.kind === "found" ? reading.component.id : reading.kind, id).toBe(id);
    }
  });

  test.each([
    // the spellings the contract asks for
    ["SO42-", "sulfate as SO4^2-"],
    ["SO4--", "sulfate as SO4^2-"],
    ["Fe(III)", "Fe3+ as Fe3+"],
    ["Fe+3", "Fe3+ as Fe3+"],
    ["iron(III)", "Fe3+ as Fe3+"],
    ["calcium", "Ca2+ as Ca2+"],
    ["sulphate", "sulfate as SO4^2-"],
    ["HCO3^-", "carbonate as HCO3-"],
    ["VO2+", "VO2+ as VO2+"],
    ["VO2^+", "VO2^+ as VO2^+"],
    // charges in other places and signs
    ["SO4^-2", "sulfate as SO4^2-"],
    ["SO4-2", "sulfate as SO4^2-"],
    ["SO4(2-)", "sulfate as SO4^2-"],
    ["SO4", "sulfate as SO4^2-"],
    ["Fe+++", "Fe3+ as Fe3+"],
    ["Fe^3+", "Fe3+ as Fe3+"],
    ["Fe(3+)", "Fe3+ as Fe3+"],
    ["Fe(+3)", "Fe3+ as Fe3+"],
    ["Pb 2+", "Pb2+ as Pb2+"],
    ["Ca^{2+}", "Ca2+ as Ca2+"],
    ["VO2(+)", "VO2^+ as VO2^+"],
    ["VO^2+", "VO2+ as VO2+"],
    ["UO22+", "UO2^2+ as UO2^2+"],
    ["UO2++", "UO2^2+ as UO2^2+"],
    ["Hg22+", "Hg2^2+ as Hg2^2+"],
    ["Hg2+", "Hg2+ as Hg2+"],
    ["Cr2O72-", "chromate as Cr2O7^2-"],
    ["HPO42-", "phosphate as HPO4^2-"],
    ["S2-", "sulfide as S^2-"],
    ["NO3-", "nitrate as NO3-"],
    // superscripts, subscripts, other minus signs
    ["SO\u2084\u00b2\u207b", "sulfate as SO4^2-"],
    ["Ca\u00b2\u207a", "Ca2+ as Ca2+"],
    ["Na\u207a", "Na+ as Na+"],
    ["Cl\u2212", "chloride as Cl-"],
    ["PO4^3\u2013", "phosphate as PO4^3-"],
    // case
    ["zn2+", "Zn2+ as Zn2+"],
    ["ZN2+", "Zn2+ as Zn2+"],
    ["so42-", "sulfate as SO4^2-"],
    ["Iron (III)", "Fe3+ as Fe3+"],
    ["edta", "EDTA as EDTA"],
    // names
    ["zinc ion", "Zn2+ as Zn2+"],
    ["ferric", "Fe3+ as Fe3+"],
    ["aluminum", "Al3+ as Al3+"],
    ["aluminium", "Al3+ as Al3+"],
    ["uranyl", "UO2^2+ as UO2^2+"],
    ["bicarbonate", "carbonate as HCO3-"],
    ["ammonium", "ammonia as NH4+"],
    ["dichromate", "chromate as Cr2O7^2-"],
    ["boric acid", "borate as B(OH)3"],
    ["citric acid", "citrate as citric acid"],
    ["manganese(VII)", "permanganate as MnO4-"],
    ["chromium(VI)", "chromate as CrO4^2-"],
    ["hydroxide", "H+ as OH-"],
    // one component, one total
    ["ZrO2+", "Zr4+ as ZrO2+"],
    ["Ti4+", "TiO2+ as Ti4+"],
    ["HCN", "cyanide as HCN"],
    ["HSO4-", "sulfate as HSO4-"],
    ["VO3-", "VO2^+ as VO3-"],
    // one valence: the symbol alone will do
    ["Zn", "Zn2+ as Zn2+"],
    ["Ca", "Ca2+ as Ca2+"],
    ["Al", "Al3+ as Al3+"],
    ["cobalt", "Co2+ as Co2+"],
    ["In", "In3+ as In3+"],
    // cobalt with a slip of the shift key is not carbon
    ["CO2+", "Co2+ as Co2+"],
    ["CO32-", "carbonate as CO3^2-"],
  ])("%s: %s", (text, expected) => {
    expect(read(text)).toBe(expected);
  });
});

describe("readIon offers", () => {
  test.each([
    ["Fe", "one of Fe2+, Fe3+"],
    ["iron", "one of Fe2+, Fe3+"],
    ["IRON", "one of Fe2+, Fe3+"],
    ["Cu", "one of Cu+, Cu2+"],
    ["copper", "one of Cu+, Cu2+"],
    ["mercury", "one of Hg2^2+, Hg2+"],
    ["tin", "one of Sn2+, Sn4+"],
    ["chromium", "one of Cr3+, CrO4^2-"],
    ["vanadium", "one of VO2+, VO2^+"],
    ["titanium", "one of Ti3+, TiO2+"],
    ["thallium", "one of Tl+, Tl3+"],
    ["uranium", "one of U4+, UO2^2+"],
    ["arsenic", "one of AsO4^3-, AsO3^3-"],
  ])("%s: %s", (text, expected) => {
    expect(read(text)).toBe(expected);
  });

  test.each([
    ["magnesum", "Mg2+"],
    ["calcuim", "Ca2+"],
    ["Zm2+", "Zn2+"],
    ["sulfatte", "SO4^2-"],
    ["oxalat", "oxalate"],
  ])("the nearest spelling for %s: %s", (text, nearest) => {
    const reading = readIon(text, components);
    expect(reading.kind).toBe("unknown");
    expect(reading.kind === "unknown" ? reading.nearest[0] : "").toBe(nearest);
  });

  test.each(["", " ", "Unobtainium", "Zn99+", "2+", "^", "Fe(VIII)", "a".repeat(500)])(
    "no component for %j, and at most three others",
    (text) => {
      const reading = readIon(text, components);
      expect(reading.kind).toBe("unknown");
      expect(reading.kind === "unknown" ? reading.nearest.length : 9).toBeLessThanOrEqual(3);
    },
  );
});

describe("readIon", () => {
  test("reads from a map as from a list", () => {
    const map = new Map(components.map((component) => [component.id, component]));
    expect(readIon("SO42-", map)).toEqual(readIon("SO42-", components));
  });
});
