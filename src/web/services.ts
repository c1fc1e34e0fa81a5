import type { Knowledge } from "../constants/knowledge.ts";
import type { StageSeries } from "../recommendation/calculate-series.ts";
import type {
  Brief,
  MethodLimits,
  MethodMap,
  Recommendation,
  Robustness,
  TurningPoints,
} from "../recommendation/contract.ts";

/** A condition of a rule, as the rule layer hands it over after its checks. */
export type RuleCondition =
  | { readonly fact: string; readonly operator: string; readonly value: unknown }
  | { readonly all: readonly RuleCondition[] }
  | { readonly any: readonly RuleCondition[] }
  | { readonly not: RuleCondition };

/** One rule as the pages list it: the part of the rule layer's own type that is shown. */
export interface RuleListing {
  readonly id: string;
  readonly topic: string;
  readonly scope: string;
  readonly when: RuleCondition;
  readonly effect: string;
  readonly weight: number;
  readonly requires: { readonly kind: string; readonly anyOf: readonly string[] } | null;
  readonly reservation: boolean;
  readonly statement: string;
  readonly rationale: string;
  readonly source: { readonly cite: string; readonly basis: string };
  readonly examples: {
    readonly fires: readonly Readonly<Record<string, unknown>>[];
    readonly silent: readonly Readonly<Record<string, unknown>>[];
  };
}

/** What a fact means, for rules in words. */
export interface FactListing {
  readonly name: string;
  readonly meaning: string;
  readonly unit: string | null;
}

/** The numbers behind the figures of one method. */
export type FigureSeries = StageSeries;

/** A long calculation as it stands, as the engine hands it over. */
export interface JobState<Result> {
  readonly id: string;
  readonly state: "running" | "done" | "stopped" | "failed";
  readonly progress: { readonly done: number; readonly total: number };
  readonly result: Result | null; // as far as there is one
  readonly message: string | null; // why it failed
}

/** Long calculations of one kind: the same question has the same id. */
export interface Jobs<Asks, Result> {
  readonly start: (asks: Asks) => string;
  readonly look: (id: string) => JobState<Result> | null;
  readonly stop: (id: string) => boolean;
}

/** Which method of an answer is drawn, how often, and from which seed. */
export interface RobustnessAsk {
  readonly document: Recommendation;
  readonly method?: string | undefined; // id or rank; the first where nothing is said
  readonly draws?: number | undefined;
  readonly seed?: number | undefined;
}

/** Everything the pages need from the layers below; the composition root supplies it. */
export interface WebServices {
  readonly knowledge: Knowledge;
  readonly rules: readonly RuleListing[];
  readonly facts: readonly FactListing[];
  /** The operators of the rule language, by name, with the words they are read as. */
  readonly operators: ReadonlyMap<string, { readonly words: string }>;
  /** A brief with its ions recognised and every default filled in; throws InputError with one fault per error of the brief. */
  readonly readBrief: (brief: unknown) => Brief;
  /** Answers a brief; throws InputError with one fault per error of the brief. */
  readonly recommend: (brief: unknown) => Promise<Recommendation>;
  /** The figures of one method of an answer; null where they cannot be computed. */
  readonly figureSeries: (recommendation: Recommendation, methodId: string) => FigureSeries | null;
  /** Tolerance limits of one method of an answer, also for what the brief does not name; throws InputError where it is not one, or an ion is not known. */
  readonly limits: (
    document: Recommendation,
    methodId: string | undefined,
    also: readonly string[],
  ) => Promise<MethodLimits>;
  /** What becomes of a method of an answer when everything is only known so well: a long calculation. Throws InputError where the answer has no such method. */
  readonly robustness: Jobs<RobustnessAsk, Robustness>;
  /** The smallest changes of a brief that change its answer: a long calculation. Throws InputError with one fault per error of the brief. */
  readonly turningPoints: Jobs<unknown, TurningPoints>;
  /** The method map as far as it is worked out; the first call sets the work going. */
  readonly methodMap: () => MethodMap;
  /** Where one line about an unexpected failure goes; the page shows only its id. */
  readonly log: (line: string) => void;
}
