import type { CurveAnswer, EquilibriumAnswer } from "../recommendation/calculate.ts";
import type { MethodLimits, MethodMap, Recommendation, Robustness, TurningPoints } from "../recommendation/contract.ts";

/** What the knowledge base holds, counted, and what it is known to lack. */
export interface KnowledgeSummary {
  readonly version: string;
  readonly hash: string;
  readonly counts: readonly { readonly what: string; readonly count: number }[];
  readonly remarks: readonly { readonly kind: string; readonly about: string; readonly text: string }[];
}

/** The outcome of checking a folder of rules. */
export interface RuleCheck {
  readonly rules: number;
  readonly faults: readonly string[];
}

/** What the commands call; the composition root supplies it, and loads only what the one command needs. All throw InputError on faulty input. */
export interface Doors {
  readonly recommend: (brief: unknown) => Promise<Recommendation>;
  readonly equilibrium: (question: unknown) => Promise<EquilibriumAnswer>;
  readonly curve: (question: unknown) => Promise<CurveAnswer>;
  /** `ion` null means every metal ion of the knowledge base. */
  readonly methodMap: (ion: string | null) => Promise<MethodMap>;
  /** Tolerance limits of a method of the answer (undefined: the first), also for ions that the brief does not name. */
  readonly limits: (brief: unknown, method: string | undefined, also: readonly string[]) => Promise<MethodLimits>;
  /** Takes long: tells how far it is, and gives what it has when it is stopped. */
  readonly turningPoints: (
    brief: unknown,
    watch: { readonly signal: AbortSignal; readonly report: (soFar: TurningPoints) => void },
  ) => Promise<TurningPoints>;
  /** Draws a method of the answer (id or rank; undefined: the first); gives what it has when it is stopped, null where that is nothing. */
  readonly robustness: (
    brief: unknown,
    options: { readonly method?: string; readonly draws?: number; readonly seed?: number },
    watch: {
      readonly signal: AbortSignal;
      readonly report: (done: number, total: number) => void;
    },
  ) => Promise<Robustness | null>;
  readonly knowledge: () => Promise<KnowledgeSummary>;
  /** `folder` null means the project's own rules. */
  readonly checkRules: (folder: string | null) => Promise<RuleCheck>;
  /** Starts the pages; resolves with their address once they answer. */
  readonly serve: (host: string, port: number) => Promise<string>;
}

/** Where commands read and write. */
export interface CommandIO {
  readonly out: (text: string) => void;
  readonly err: (text: string) => void;
  readonly standardInput: AsyncIterable<Uint8Array>;
  /** Calls back when the user asks to stop (Ctrl-C); gives back what ends the watch. */
  readonly onStop: (stop: () => void) => () => void;
  readonly environment: Readonly<Record<string, string | undefined>>;
}
