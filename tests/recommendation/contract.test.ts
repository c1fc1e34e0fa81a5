import { describe, expect, it } from "vitest";
import { z } from "zod";
import { briefSchema, recommendationSchema } from "../../src/recommendation/contract.ts";
import { describeFound, jsonPath, shapeFaults } from "../../src/recommendation/contract-faults.ts";
import { DOCUMENT, METHOD, STAGE } from "./example-document.ts";

const withStage = (change: object): unknown => ({
  ...DOCUMENT,
  methods: [{ ...METHOD, stages: [{ ...STAGE, ...change }] }],
});

describe("recommendationSchema", () => {
  it("accepts the example document, also after a journey as JSON", () => {
    expect(recommendationSchema.parse(JSON.parse(JSON.stringify(DOCUMENT)))).toEqual(DOCUMENT);
  });
  it("accepts an answer without any method", () => {
    expect(
      recommendationSchema.safeParse({ ...DOCUMENT, verdict: "not-fit", methods: [], decidedBy: null }).success,
    ).toBe(true);
  });
  it.each([
    ["a missing field", { ...DOCUMENT, rejected: undefined }],
    ["a misspelt field", { ...DOCUMENT, remarks: [] }],
    ["an unknown verdict", { ...DOCUMENT, verdict: "perhaps" }],
    ["an unknown preparation step", withStage({ preparation: ["shake"] })],
    ["a number that is not finite", withStage({ titreML: Number.NaN })],
    ["a negative amount", withStage({ buffer: { id: "hexamine", molPerL: -0.1 } })],
    ["a masking step that masks nothing", withStage({ masking: [{ ...STAGE.masking[0], masks: [] }] })],
    ["a method without a titration", { ...DOCUMENT, methods: [{ ...METHOD, stages: [] }] }],
  ])("refuses %s", (_what, document) => {
    expect(recommendationSchema.safeParse(document).success).toBe(false);
  });
});

describe("briefSchema", () => {
  it("fills in every default of the contract", () => {
    const brief = { title: "t", analytes: [{ ion: "Zn2+", concentration: { value: 1, unit: "mmol/L" } }] };
    expect(briefSchema.parse(brief)).toEqual({
      ...brief,
      analytes: [{ ion: "Zn2+", concentration: { value: 1, unit: "mmol/L" }, report: "individual" }],
      matrix: [],
      portion: { volumeML: 50, titrationVolumeML: 100 },
      requirement: { relativeExpandedUncertaintyPercent: 1 },
      laboratory: { avoid: [], available: null, detection: ["visual"], heating: true, buretteML: 25 },
      temperatureC: 25,
    });
  });
  it("fills the rest of a group of which one field is given", () => {
    const brief = briefSchema.parse({
      title: "t",
      analytes: [{ ion: "Zn2+", concentration: { value: 1, unit: "mmol/L" } }],
      portion: { volumeML: 20 },
      laboratory: { heating: false },
    });
    expect(brief.portion).toEqual({ volumeML: 20, titrationVolumeML: 100 });
    expect(brief.laboratory).toMatchObject({ heating: false, detection: ["visual"], available: null });
  });
});

describe("shapeFaults", () => {
  const schema = z.strictObject({
    rows: z.array(z.strictObject({ n: z.number().max(5), "odd name": z.string().optional() })).default([]),
  });
  it("gives one fault per error, with place, expectation and finding", () => {
    expect(shapeFaults(schema, { rows: [{ n: "5", colour: 1 }, { n: 7 }, {}] })).toEqual([
      { path: "$.rows[0].n", expected: "a number", found: '"5"' },
      { path: "$.rows[0].colour", expected: "one of the fields n, odd name", found: 'an unknown field "colour"' },
      { path: "$.rows[1].n", expected: "a number of at most 5", found: "7" },
      { path: "$.rows[2].n", expected: "a number", found: "nothing" },
    ]);
  });
  it("gives none where the schema is kept", () => {
    expect(shapeFaults(schema, { rows: [{ n: 5, "odd name": "x" }] })).toEqual([]);
  });
  it("does not take a field named __proto__ for an object's own ancestry", () => {
    expect(shapeFaults(schema, JSON.parse('{"rows": [], "__proto__": {"n": 1}}'))).toHaveLength(1);
  });
});

describe("jsonPath and describeFound", () => {
  it("writes names that are no identifiers in brackets", () => {
    expect(jsonPath(["matrix", 2, "odd name"])).toBe('$.matrix[2]["odd name"]');
  });
  it.each([
    [undefined, "nothing"],
    ["", "an empty text"],
    [Number.POSITIVE_INFINITY, "a number too large to hold (Infinity)"],
    [[], "an empty list"],
    [[1, 2], "a list of 2"],
    [{}, "an object"],
    [null, "null"],
    [true, "true"],
    ["x".repeat(100), `"${"x".repeat(60)}…"`],
  ])("says in words what %j is", (value, words) => {
    expect(describeFound(value)).toBe(words);
  });
});
