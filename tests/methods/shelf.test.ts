import { describe, expect, it } from "vitest";
import { searchMethods } from "../../src/methods/search.ts";
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

describe("what a brief forbids", () => {
  const proposed = (analyte: string, detection: "visual" | "electrode", avoid: readonly string[]): string[] => {
    const laboratory = { avoid, available: null, detection: [detection], heating: true, buretteML: 25 } as const;
    const task = inventedTask({ [analyte]: 0.01 }, {}, { laboratory });
    return searchMethods(task, KNOWLEDGE).methods.flatMap(({ stages }) =>
      stages.flatMap(({ plan }) => [
        ...(plan.indicator ? [plan.indicator.id] : []),
        ...(plan.electrode === null ? [] : [plan.electrode]),
        ...plan.added.map(({ id }) => id),
      ]),
    );
  };
  it("is not made up from its parts: Cu-PAN of PAN and the copper chelate", () => {
    expect(proposed("Al3+", "visual", [])).toContain("Cu-PAN");
    expect(proposed("Al3+", "visual", ["Cu-PAN"])).not.toContain("Cu-PAN");
  });
  it("is not brought by an electrode: iron(II) for the couple of platinum", () => {
    expect(proposed("Fe3+", "electrode", [])).toContain("Fe2+");
    expect(proposed("Fe3+", "electrode", ["Fe2+"])).not.toContain("Fe2+");
  });
});
