// Goes through the ions one by one: what is ranked first for the ion alone, and what became of each usual way:
//   npm run sweep -- [--only Zn2+,Co2+] [--ways]
// --ways prints a line for each usual way: shown, judged behind, excluded (by which rule), or not found at all.
import { parseArgs } from "node:util";
import { openEngine } from "../../src/main.ts";
import { searchMethods } from "../../src/methods/search.ts";
import type { RecommendedMethod } from "../../src/recommendation/contract.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { judge as judgeMethod } from "../../src/recommendation/judge.ts";
import { acceptedWay, ionPractice, plainBrief, type IonPractice, type UsualWay } from "./ion-practice.ts";
import { difference } from "./judge.ts";

const { values } = parseArgs({ options: { only: { type: "string" }, ways: { type: "boolean", default: false } } });
const only = values.only?.split(",");
const print = (line: string): void => void process.stdout.write(`${line}\n`);
const engine = await openEngine();
let firsts = 0;
let swept = 0;
for (const row of ionPractice()) {
  if (only && !only.includes(row.ion)) continue;
  const brief = plainBrief(row);
  const { methods, rejected } = await engine.recommend(brief);
  const usual = (method: RecommendedMethod): boolean =>
    row.ways.some((way) => difference(method, acceptedWay(row.ion, way)) === null);
  const first = methods[0];
  const ok = first !== undefined && usual(first);
  swept++;
  firsts += Number(ok);
  const rank = methods.findIndex(usual) + 1;
  print(
    `${row.ion.padEnd(8)} ${ok ? "usual " : "OTHER "} ${first ? inShort(first) : `none (${rejected.length} rejected)`}${ok ? "" : `; first usual at ${rank || "none"}`}`,
  );
  if (values.ways) for (const line of await fates(row, methods)) print(`         ${line}`);
}
print(`sweep: first among the usual ways ${firsts} of ${swept}`);

/** What became of each usual way of an ion. */
async function fates(row: IonPractice, shown: readonly RecommendedMethod[]): Promise<string[]> {
  const task = readBrief(plainBrief(row), engine.knowledge);
  const { methods } = searchMethods(task, engine.knowledge);
  const out: string[] = [];
  for (const way of row.ways) {
    const rank = shown.findIndex((m) => difference(m, acceptedWay(row.ion, way)) === null) + 1;
    const said = `${way.modes[0]} ${way.titrant}${way.backTitrant ? ` < ${way.backTitrant}` : ""} pH ${way.pH.join("-")} ${way.indicators.join("/")} ${way.preparation.join(", ")}`;
    if (rank > 0) {
      out.push(`${rank}. ${said}`);
      continue;
    }
    const alike = methods.filter((m) => m.stages.length === 1 && isAlike(m.stages[0]!.plan, way));
    const judged = await Promise.all(
      alike
        .slice(0, 4)
        .map((method) =>
          judgeMethod(task, { method, ranges: [null], bearsRicherMatrix: null }, engine.knowledge, engine.rules),
        ),
    );
    const why = judged.map((j) =>
      j.excludedBy.length > 0
        ? `${nameOf(j.method.stages[0]!.plan)}: ${j.excludedBy.map((v) => v.finding.rule).join(", ")}`
        : `${nameOf(j.method.stages[0]!.plan)}: behind (${j.points}, U ${j.expandedPercent.toPrecision(2)} %)`,
    );
    out.push(`-  ${said}: ${why.length > 0 ? why.join("; ") : "not found"}`);
  }
  return out;
}

interface Alike {
  readonly mode: string;
  readonly titrant: { readonly id: string };
  readonly backTitrant: { readonly id: string } | null;
  readonly pH: number;
  readonly indicator: { readonly id: string } | null;
}

function isAlike(plan: Alike, way: UsualWay): boolean {
  return (
    way.modes.some((mode) => mode === plan.mode) &&
    plan.titrant.id === way.titrant &&
    (way.backTitrant === undefined || plan.backTitrant?.id === way.backTitrant) &&
    way.indicators.includes(plan.indicator?.id ?? "")
  );
}

function nameOf(plan: Alike): string {
  return `pH ${plan.pH} ${plan.indicator?.id ?? ""}`;
}

function inShort(method: RecommendedMethod): string {
  const stage = method.stages[0]!;
  const points = method.scores.reduce((sum, score) => sum + score.weight, 0);
  return `${method.mode} ${method.titrant.id}${method.backTitrant ? ` < ${method.backTitrant.id}` : ""} pH ${stage.pH.target} ${stage.indicator?.id ?? stage.detection} ${stage.buffer.id} [${stage.preparation.join(", ")}] ${stage.auxiliary.map((a) => a.id).join("+")} U ${method.predicted.relativeExpandedUncertaintyPercent.toPrecision(2)} %, points ${points}, ${method.verdict}`;
}
