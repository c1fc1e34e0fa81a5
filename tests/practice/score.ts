// Scores the engine against published practice, in process:
//   npm run practice -- [--trades] [--only ID,ID] [--verbose]
// --trades takes the invented briefs of the trades in place of the acceptance cases.
// --verbose shows, for each case that missed, the first three methods and what counted for and against them.
// The last line printed is the figures. Exit code 1 where a case had no answer.
import { parseArgs } from "node:util";
import { openEngine } from "../../src/main.ts";
import type { Recommendation, RecommendedMethod } from "../../src/recommendation/contract.ts";
import { practiceCases } from "./cases.ts";
import { difference, judge, type Judgement } from "./judge.ts";
import { lastLine, type Outcome, tallies, tallyLine } from "./tally.ts";
import type { PracticeCase } from "./cases.ts";

const { values } = parseArgs({
  options: {
    only: { type: "string" },
    verbose: { type: "boolean", default: false },
    trades: { type: "boolean", default: false },
  },
});
const only = values.only?.split(",");
const cases = practiceCases(values.trades ? "trade-briefs" : "cases").filter(
  (testCase) => only?.includes(testCase.id) ?? true,
);
const print = (line: string): void => void process.stdout.write(`${line}\n`);

if (cases.length === 0) {
  process.stderr.write("no case has one of these ids\n");
  process.exit(2);
}
const engine = await openEngine();
const outcomes: Outcome[] = [];
const started = performance.now();
for (const testCase of cases) {
  try {
    const document = await engine.recommend(testCase.brief);
    const judgement = judge(document, testCase);
    outcomes.push({ testCase, judgement });
    if (isClean(judgement)) continue;
    print(`${testCase.id}: ${whatMissed(document, judgement)}`);
    if (values.verbose) document.methods.slice(0, 3).forEach((method) => explain(method, testCase));
  } catch (error) {
    outcomes.push({ testCase, judgement: null });
    print(
      `${testCase.id}: no answer (${error instanceof Error ? error.message.split("\n")[0]?.slice(0, 160) : String(error)})`,
    );
  }
}
const groups = tallies(outcomes);
for (const [name, tally] of groups) print(tallyLine(name, tally));
print(`${((performance.now() - started) / cases.length).toFixed(0)} ms a recommendation`);
const all = groups.get("all");
if (all !== undefined) print(lastLine(all));
process.exitCode = all?.answered === cases.length ? 0 : 1;

function isClean(j: Judgement): boolean {
  return j.first && j.forbidden === null && j.verdict && j.notFlagged.length === 0 && j.falseAlarms.length === 0;
}

function whatMissed(document: Recommendation, j: Judgement): string {
  const first = document.methods[0];
  const said = first === undefined ? "none" : inShort(first);
  return [
    j.first ? "first ok" : `first no (${said}; differs in ${j.differences.join(", ")})`,
    ...(j.three && !j.first ? ["among three"] : []),
    ...(j.forbidden === null ? [] : [`FORBIDDEN: ${j.forbidden}`]),
    ...(j.verdict ? [] : [`verdict ${document.verdict}`]),
    ...(j.notFlagged.length > 0 ? [`not flagged: ${j.notFlagged.join(", ")}`] : []),
    ...(j.falseAlarms.length > 0 ? [`false alarm: ${j.falseAlarms.join(", ")}`] : []),
  ].join(", ");
}

function inShort(method: RecommendedMethod): string {
  const stages = method.stages.map((s) => `pH ${s.pH.target} ${s.indicator?.id ?? s.detection}`).join(" | ");
  return `${method.mode} ${method.titrant.id}${method.backTitrant === null ? "" : ` < ${method.backTitrant.id}`} ${stages}`;
}

function explain(method: RecommendedMethod, testCase: PracticeCase): void {
  const total = method.scores.reduce((sum, score) => sum + score.weight, 0);
  const differs = [...new Set(testCase.accepts.map((wanted) => difference(method, wanted) ?? "nothing"))].join(", ");
  print(`  ${method.rank}. ${inShort(method)}`);
  for (const stage of method.stages)
    print(
      `     ${stage.determines.join("+") || "discarded"}: ${stage.buffer.id}; masking ${stage.masking.map((m) => `${m.agent} for ${m.masks.join("+")}`).join(", ") || "none"}; auxiliary ${stage.auxiliary.map((a) => a.id).join(", ") || "none"}; ${stage.preparation.join(", ") || "no other steps"}`,
    );
  print(
    `     U ${method.predicted.relativeExpandedUncertaintyPercent.toPrecision(3)} %, bias ${method.predicted.biasPercent.toPrecision(2)} %, ${method.verdict}, score ${total.toFixed(1)}; differs in ${differs}`,
  );
  for (const score of method.scores) print(`       ${score.weight > 0 ? "+" : ""}${score.weight} ${score.rule}`);
  for (const reservation of method.reservations) print(`       reservation: ${reservation}`);
}
