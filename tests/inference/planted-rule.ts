import type { RuleFile } from "../../src/inference/index.ts";

/** A sound rule of scope stage, as its file states it; tests plant one fault in a copy. */
export const SOUND_RULE = {
  id: "planted/soft-end-point",
  scope: "stage",
  when: {
    all: [
      { fact: "solutionStatus", operator: "is", value: "converged" },
      { fact: "sharpnessPercent", operator: "above", value: 0.5 },
      { fact: "detection", operator: "is", value: "visual" },
    ],
  },
  effect: "disfavours",
  weight: -4,
  statement: "The end point with {indicator} is read to {sharpnessPercent|percent}.",
  rationale: "Drops are larger than the change.",
  source: { cite: "Invented for the tests", basis: "common practice" },
  examples: {
    fires: [{ sharpnessPercent: 0.51 }],
    silent: [{ sharpnessPercent: 0.5 }, { sharpnessPercent: 0.51, detection: "photometric" }],
  },
};

/** A rule file of the topic "planted" that holds these rules. */
export function planted(...rules: readonly unknown[]): readonly RuleFile[] {
  return [
    { name: "planted.rules.json", text: JSON.stringify({ topic: "planted", about: "Planted for the tests.", rules }) },
  ];
}
