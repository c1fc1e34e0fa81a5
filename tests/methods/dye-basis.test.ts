import { describe, expect, it } from "vitest";
import { pickDyeBasis } from "../../src/methods/dye-basis.ts";
import { KNOWLEDGE } from "./invented.ts";
import { expectRelative } from "../expect-relative.ts";

const basis = (id: string, pH: number, metals: readonly string[]) =>
  pickDyeBasis(KNOWLEDGE, KNOWLEDGE.indicators.get(id)!, pH, new Set(metals));

describe("pickDyeBasis", () => {
  it("takes the published table of xylenol orange with zinc, two metals a dye", () => {
    const { byTable, byConstants, dye } = basis("xylenol-orange", 5.5, ["Zn2+"]);
    expect(byTable.get("Zn2+")).toEqual({ pM: 5.7, counts: "free-ion", metalsPerDye: 2 });
    expect([...byConstants]).toEqual([]);
    expect(dye).toBe(null);
  });
  it("interpolates the table between its points", () => {
    // Between 5.5 (5.7) and 6 (6.5): 5.7 + 0.8 x 0.2 / 0.5.
    expectRelative(basis("xylenol-orange", 5.7, ["Zn2+"]).byTable.get("Zn2+")!.pM, 5.7 + (0.8 * 0.2) / 0.5, 1e-12);
  });
  it("does not extend a table beyond its ends: constants serve there, or nothing", () => {
    expect(basis("xylenol-orange", 4.4, ["Zn2+"]).byTable.size).toBe(0);
    expect(basis("xylenol-orange", 4.5, ["Zn2+"]).byTable.size).toBe(1);
    expect(basis("xylenol-orange", 7, ["Zn2+"]).byTable.size).toBe(1);
    expect(basis("xylenol-orange", 7.1, ["Zn2+"]).byTable.size).toBe(0);
  });
  it("counts bismuth by what is not bound to the titrant, as its table was measured", () => {
    expect(basis("xylenol-orange", 2, ["Bi3+"]).byTable.get("Bi3+")?.counts).toBe("not-bound-to-titrant");
  });
  it("puts the constants of an azo dye before its table", () => {
    const { byTable, byConstants, dye } = basis("mordant-black-11", 10, ["Mg2+", "Na+"]);
    expect([...byConstants]).toEqual(["Mg2+"]);
    expect(byTable.size).toBe(0);
    expect(dye).toBe("mordant-black-11");
  });
  it("decides metal by metal where one has a table and another only constants", () => {
    const { byTable, byConstants } = basis("xylenol-orange", 5.5, ["Zn2+", "Al3+"]);
    expect([...byTable.keys()]).toEqual(["Zn2+"]);
    expect([...byConstants]).toEqual(["Al3+"]);
  });
  it("knows nothing of a metal that the dye has neither constants nor table for", () => {
    const { byTable, byConstants, dye } = basis("calcon", 12.5, ["Bi3+"]);
    expect([byTable.size, byConstants.size, dye]).toEqual([0, 0, null]);
  });
});
