import { describe, expect, test } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { checkExample, verdicts } from "./check-example.ts";
import { loadExamples } from "./example.ts";

const knowledge = loadKnowledge();
const examples = loadExamples();

describe("worked examples", () => {
  for (const example of examples.filter((e) => e.checks !== undefined)) {
    const { source, independent } = example;
    const basis = `${source.basis === "memory" ? "from memory" : source.basis}${independent ? "" : ", not independent"}`;
    test(`${example.id}: ${example.title} [${source.citation}; ${basis}]`, () => {
      const comparisons = checkExample(example, knowledge);
      expect(comparisons.length).toBeGreaterThan(0);
      // A figure known to be off must be off: else its note is out of date.
      for (const c of comparisons)
        expect(
          c.agrees,
          `${c.label}: printed ${c.expected}, computed ${c.actual}; ${c.disagreement ?? "no disagreement is known"}`,
        ).toBe(c.disagreement === null);
    });
  }

  test("there are 58 examples, each with a source, and each is checked or says why it is not", () => {
    expect(examples).toHaveLength(58);
    expect(new Set(examples.map((e) => e.id)).size).toBe(58);
    for (const e of examples) {
      expect(e.source.citation.length).toBeGreaterThan(3);
      expect((e.checks === undefined) !== (e.unchecked === undefined), e.id).toBe(true);
      expect(e.independent || e.whyNotIndependent !== undefined, e.id).toBe(true);
    }
  });

  test("the 13 points of the cadmium curve (read in the source) agree within 0.01 pCd from its own constants", () => {
    const comparisons = checkExample(examples.find((e) => e.id === "tc-01-mac-cd-nh3")!, knowledge);
    expect(comparisons).toHaveLength(13);
    for (const c of comparisons) expect(Math.abs(c.actual - c.expected), c.label).toBeLessThanOrEqual(0.01);
  });

  test("a wrong figure would be noticed: each expectation moved by three tolerances fails", () => {
    const moved = examples
      .filter((e) => e.checks !== undefined)
      .flatMap((e) =>
        checkExample(e, knowledge)
          .filter((c) => c.agrees)
          .map((c) => c.expected),
      );
    expect(moved.length).toBeGreaterThan(500);
    const curve = examples.find((e) => e.id === "tc-01-mac-cd-nh3")!;
    const check = curve.checks![0]!;
    if (check.kind !== "curve") throw new Error("the cadmium example is a curve");
    const wrong = {
      ...curve,
      checks: [{ ...check, points: check.points.map((p) => ({ ...p, expected: p.expected + 0.03 })) }],
    };
    expect(verdicts([wrong], knowledge)[0]!.comparisons.every((c) => !c.agrees)).toBe(true);
  });
});
