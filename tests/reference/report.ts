// Prints how many of the worked examples are checked, how many agree, and why the rest do not: node --import tsx tests/reference/report.ts
import { loadKnowledge } from "../../src/constants/index.ts";
import { verdicts } from "./check-example.ts";
import { loadExamples } from "./example.ts";

const all = verdicts(loadExamples(), loadKnowledge());
const lines: string[] = [];
const figures = all.flatMap((v) => v.comparisons);
const count = (status: string) => all.filter((v) => v.status === status).length;
lines.push(
  `${all.length} examples: ${all.length - count("unchecked")} checked (${figures.length} figures, ${figures.filter((f) => f.agrees).length} agree), ` +
    `${count("agrees")} agree in every figure, ${count("disagrees")} do not, ${count("unchecked")} not checked.`,
);
const independent = all.filter((v) => v.status === "agrees" && v.example.independent);
lines.push(
  `Of those that agree ${independent.length} are independent, ` +
    `${independent.filter((v) => v.example.source.basis === "read" || v.example.source.basis === "partly read").length} of them read in the source.`,
);
for (const { example, comparisons, status } of all) {
  if (status === "agrees") continue;
  lines.push("", `${example.id} (${example.source.basis}): ${example.title}: ${status}`);
  if (example.unchecked !== undefined) lines.push(`  ${example.unchecked}`);
  if (example.note !== undefined) lines.push(`  ${example.note}`);
  for (const c of comparisons.filter((x) => !x.agrees))
    lines.push(
      `  ${c.label}: printed ${c.expected}, computed ${Number.isNaN(c.actual) ? "nothing (not in the knowledge)" : c.actual.toPrecision(6)}` +
        (c.disagreement === null ? "" : `; ${c.disagreement}`),
    );
}
process.stdout.write(`${lines.join("\n")}\n`);
