import type { Recommendation } from "../../recommendation/contract.ts";
import type { FigureSeries, WebServices } from "../services.ts";

const KEPT = 32;

/** Answers lately given, by the text of their brief, so that a page and its figures are worked out once. */
export interface Answers {
  readonly answer: (brief: unknown) => Promise<Recommendation>;
  /** The figures of one method of an answer, computed once while the answer is kept; null where they cannot be. */
  readonly figures: (recommendation: Recommendation, methodId: string) => FigureSeries | null;
}

/** Keeps the last answers in memory; a failed one is forgotten at once. */
export function createAnswers(services: Pick<WebServices, "recommend" | "figureSeries">): Answers {
  const kept = new Map<string, Promise<Recommendation>>();
  const drawn = new WeakMap<Recommendation, Map<string, FigureSeries | null>>();
  return {
    figures: (recommendation, methodId) => {
      const ofAnswer = drawn.get(recommendation) ?? new Map<string, FigureSeries | null>();
      drawn.set(recommendation, ofAnswer);
      const known = ofAnswer.get(methodId);
      if (known !== undefined) return known;
      const series = services.figureSeries(recommendation, methodId);
      ofAnswer.set(methodId, series);
      return series;
    },
    answer: async (brief) => {
      const key = keyOf(brief);
      // What is nested too deep to be written down is no brief: let the reader say so.
      if (key === null) return services.recommend(brief);
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

/** The brief as text, by which its answer is kept; null where it is nested too deep to be written. */
function keyOf(brief: unknown): string | null {
  try {
    return JSON.stringify(brief);
  } catch {
    return null;
  }
}
