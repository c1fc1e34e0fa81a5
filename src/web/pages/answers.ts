import type { Recommendation } from "../../recommendation/contract.ts";
import type { WebServices } from "../services.ts";

const KEPT = 32;

/** Answers lately given, by the text of their brief, so that a page and its figures are worked out once. */
export interface Answers {
  readonly answer: (brief: unknown) => Promise<Recommendation>;
}

/** Keeps the last answers in memory; a failed one is forgotten at once. */
export function createAnswers(services: Pick<WebServices, "recommend">): Answers {
  const kept = new Map<string, Promise<Recommendation>>();
  return {
    answer: async (brief) => {
      const key = JSON.stringify(brief);
      const known = kept.get(key);
      if (known) {
        kept.delete(key);
        kept.set(key, known);
        return known;
      }
      const coming = services.recommend(brief);
      kept.set(key, coming);
      if (kept.size > KEPT) kept.delete(kept.keys().next().value ?? key);
      try {
        return await coming;
      } catch (error) {
        kept.delete(key);
        throw error;
      }
    },
  };
}
