import type { LIMIT_ENDS } from "./contract-vocabulary.ts";

/** What happens just beyond a tolerance limit, as the end of a sentence. */
export const LIMIT_END_WORDS: Readonly<Record<(typeof LIMIT_ENDS)[number], string>> = {
  requirement: "beyond it the requirement is missed",
  blocking: "beyond it the dye is blocked",
  "masking-used-up": "beyond it the masking agent is used up",
  "empirical-record": "beyond it no record says that the mask holds",
  precipitation: "beyond it a precipitate forms",
  fails: "beyond it no end point is found",
  none: "nothing ends it up to there",
};
