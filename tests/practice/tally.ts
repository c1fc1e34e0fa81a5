import type { PracticeCase } from "./cases.ts";
import type { Judgement } from "./judge.ts";

/** Counts over a group of cases. */
export interface Tally {
  cases: number;
  answered: number;
  first: number;
  three: number;
  forbidden: number;
  flags: number;
  flagged: number;
  alarms: number;
  verdict: number;
}

/** One case with what became of it; null where there was no answer. */
export interface Outcome {
  readonly testCase: PracticeCase;
  readonly judgement: Judgement | null;
}

/** Counts over all cases ("all") and over each difficulty, in the order met. */
export function tallies(outcomes: readonly Outcome[]): ReadonlyMap<string, Readonly<Tally>> {
  const groups = new Map<string, Tally>();
  for (const { testCase, judgement } of outcomes)
    for (const name of ["all", testCase.difficulty]) {
      const tally = groups.get(name) ?? emptyTally();
      groups.set(name, tally);
      tally.cases += 1;
      if (judgement === null) continue;
      tally.answered += 1;
      tally.first += Number(judgement.first);
      tally.three += Number(judgement.three);
      tally.forbidden += Number(judgement.forbidden !== null);
      tally.verdict += Number(judgement.verdict);
      tally.flags += testCase.flags.length;
      tally.flagged += testCase.flags.length - judgement.notFlagged.length;
      tally.alarms += judgement.falseAlarms.length;
    }
  return groups;
}

const emptyTally = (): Tally => ({
  cases: 0,
  answered: 0,
  first: 0,
  three: 0,
  forbidden: 0,
  flags: 0,
  flagged: 0,
  alarms: 0,
  verdict: 0,
});

/** One line of figures for a group. */
export function tallyLine(name: string, t: Readonly<Tally>): string {
  return `${name}: cases ${t.cases}  answered ${t.answered}  first ${share(t.first, t.cases)}  among three ${share(t.three, t.cases)}  forbidden first ${t.forbidden}  flags ${share(t.flagged, t.flags)}  false alarms ${t.alarms}  verdict ${share(t.verdict, t.cases)}`;
}

/** The figures that matter, in one line. */
export function lastLine(t: Readonly<Tally>): string {
  return `practice: first ${share(t.first, t.cases)}, among three ${share(t.three, t.cases)}, forbidden first ${t.forbidden} of ${t.cases}`;
}

const share = (n: number, of: number): string => (of === 0 ? "-" : `${((100 * n) / of).toFixed(1)} %`);
