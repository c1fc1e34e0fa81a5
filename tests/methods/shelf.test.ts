import { describe, expect, it } from "vitest";
import { shelfOf } from "../../src/methods/shelf.ts";
import { inventedTask, KNOWLEDGE } from "./invented.ts";

const shelf = (laboratory: { avoid?: string[]; available?: string[] | null }, withSpecial = false) =>
  shelfOf(
    inventedTask(
      { "Zn2+": 0.01 },
      {},
      {
        laboratory: { avoid: [], available: null, detection: ["visual"], heating: true, buretteML: 25, ...laboratory },
      },
    ),
    KNOWLEDGE,
    withSpecial,
  );

describe("shelfOf", () => {
  it("holds everything usual where the brief says nothing", () => {
    for (const id of ["EDTA", "cyanide", "hexamine", "xylenol-orange", "Zn2+"]) expect(shelf({})(id), id).toBe(true);
  });
  it("keeps special reagents back until they are asked for", () => {
    for (const id of ["dimercaprol", "TTHA"]) {
      expect(shelf({})(id), id).toBe(false);
      expect(shelf({}, true)(id), id).toBe(true);
    }
  });
  it("never holds what is to be avoided, special round or not", () => {
    for (const withSpecial of [false, true]) {
      const without = shelf({ avoid: ["cyanide", "EDTA"] }, withSpecial);
      expect([without("cyanide"), without("EDTA"), without("CDTA")]).toEqual([false, false, true]);
    }
  });
  it("holds only what the laboratory lists, special ones among it, less what it avoids", () => {
    const listed = shelf({ available: ["EDTA", "dimercaprol", "cyanide"], avoid: ["cyanide"] });
    expect(["EDTA", "dimercaprol", "cyanide", "hexamine"].map((id) => listed(id))).toEqual([true, true, false, false]);
  });
});
