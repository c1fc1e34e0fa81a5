import { beforeAll, describe, expect, it } from "vitest";
import { type Engine, openEngine } from "../../src/main.ts";
import type { RecommendedMethod } from "../../src/recommendation/contract.ts";
import { recommendationText } from "../../src/recommendation/text.ts";

const mmol = (value: number) => ({ value, unit: "mmol/L" });
const sample = (ion: string, beside: Readonly<Record<string, number>>, available: readonly string[] | null) => ({
  title: "An invented sample",
  analytes: [{ ion, concentration: mmol(8) }],
  matrix: Object.entries(beside).map(([component, value]) => ({ component, concentration: mmol(value) })),
  portion: { volumeML: 25, titrationVolumeML: 100 },
  laboratory: { available },
});

// Invented samples, each with a shelf that leaves hardly a choice but the dangerous reagent.
const DANGERS = [
  {
    what: "cyanide",
    brief: sample("Mg2+", { "Cu2+": 0.5, "Cl-": 17 }, [
      "EDTA",
      "ammonia",
      "mordant-black-11",
      "cyanide",
      "ascorbic-acid",
    ]),
    said: [/cyanide: fatal/i, /never below pH 9\.5/, /local rules/],
  },
  {
    what: "sulfide",
    brief: sample("Mg2+", { "Zn2+": 0.05 }, ["EDTA", "ammonia", "mordant-black-11", "sulfide"]),
    said: [/only in alkaline solution/, /hydrogen sulfide/, /local rules/],
  },
  {
    what: "fluoride",
    brief: sample("Zn2+", { "Al3+": 1, "Cl-": 19 }, ["EDTA", "hexamine", "xylenol-orange", "fluoride"]),
    said: [/hydrofluoric acid/, /local rules/],
  },
  {
    what: "perchloric-acid",
    brief: sample("Bi3+", {}, ["EDTA", "perchloric-acid", "xylenol-orange"]),
    said: [/perchlorates .* explode/],
  },
  { what: "Hg2+", brief: sample("Hg2+", {}, null), said: [/mercury: fatal/i, /local rules/i] },
] as const;

const uses = (method: RecommendedMethod, id: string): boolean =>
  method.stages.some((stage) =>
    [
      ...stage.masking.map((step) => step.agent),
      ...[...stage.auxiliary, ...stage.added, stage.buffer].map((added) => added.id),
      ...stage.determines,
    ].includes(id),
  );

describe("a method that uses something dangerous", () => {
  let engine: Engine;
  beforeAll(async () => {
    engine = await openEngine();
  });
  it.each(DANGERS)(
    "carries the caution for $what, in the document and in words, and no other method does",
    async ({ what, brief, said }) => {
      const document = await engine.recommend(brief);
      const dangerous = document.methods.filter((method) => uses(method, what));
      expect(dangerous.length).toBeGreaterThan(0);
      for (const method of dangerous) for (const words of said) expect(method.cautions.join("\n")).toMatch(words);
      for (const method of document.methods.filter((other) => !uses(other, what)))
        expect(method.cautions.join("\n")).not.toMatch(said[0]);
      const [first] = dangerous;
      const text = recommendationText({ ...document, methods: first === undefined ? [] : [first] }).replace(
        /\s+/g,
        " ",
      );
      for (const words of said) expect(text).toMatch(words);
    },
  );
  it("puts its cautions before its steps in the readable text", async () => {
    const text = recommendationText(await engine.recommend(DANGERS[2].brief));
    expect(text.indexOf("\nCautions\n")).toBeGreaterThan(0);
    expect(text.indexOf("\nCautions\n")).toBeLessThan(text.indexOf("\nSteps\n"));
  });
});
