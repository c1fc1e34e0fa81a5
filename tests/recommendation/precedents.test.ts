import { describe, expect, it } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { openEngine } from "../../src/main.ts";

const engine = await openEngine();
const knowledge = loadKnowledge();
const zinc = {
  title: "Zinc in an invented rinse",
  analytes: [{ ion: "Zn2+", concentration: { value: 8, unit: "mmol/L" } }],
};

describe("published methods beside a recommendation", () => {
  it("each record names its source, and a read scheme is not passed off as a read pH", () => {
    for (const record of knowledge.precedents) {
      expect(knowledge.sources.has(record.provenance.source)).toBe(true);
      expect(record.pH[0]).toBeLessThanOrEqual(record.pH[1]);
      if (record.pHBasis === "read") expect(record.provenance.basis).toBe("read");
    }
  });

  // The European Pharmacopoeia titrates zinc with xylenol orange in hexamine, the USP oral solution with mordant black 11 at
  // pH 10 (both in the project's precedents, read): neither is wrong.
  it("says that official methods of zinc differ, and lets both stand", async () => {
    const document = await engine.recommend(zinc);
    expect(document.disagreement).toMatch(/Zn2\+ differ/);
    const dyes = document.methods
      .filter((m) => m.precedents.length > 0)
      .flatMap((m) => m.stages[0]?.indicator?.id ?? []);
    expect(dyes).toEqual(expect.arrayContaining(["xylenol-orange", "mordant-black-11"]));
  });

  it("steers nothing: without the records the same methods stand in the same order", async () => {
    const { recommend } = await import("../../src/recommendation/recommend.ts");
    const { readBrief } = await import("../../src/recommendation/brief.ts");
    const bare = { ...engine.knowledge, precedents: [] };
    const without = await recommend(readBrief(zinc, bare), bare, engine.rules);
    const withThem = await engine.recommend(zinc);
    expect(without.methods.map((m) => m.id)).toEqual(withThem.methods.map((m) => m.id));
    expect(without.disagreement).toBe(null);
  });
});
