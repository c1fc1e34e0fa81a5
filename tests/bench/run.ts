/** `npm run bench -- [NAME] [--count N] [--brief ID,ID]`: every bench in turn. What cannot be measured here is said on a line of its own and in the last line. */
import { parseArgs } from "node:util";
import type { Bench } from "./bench.ts";
import { equilibriumBench } from "./equilibrium.ts";
import { componentsBench } from "./components.ts";
import { curveBench } from "./curve.ts";
import { memoryBench } from "./memory.ts";
import { monteCarloBench } from "./monte-carlo.ts";
import { recommendBench } from "./recommend.ts";

/** The benches there are, in the order in which they run. */
export const benches: readonly Bench[] = [
  equilibriumBench,
  curveBench,
  componentsBench,
  recommendBench,
  monteCarloBench,
  memoryBench,
];

const { positionals, values } = parseArgs({
  allowPositionals: true,
  options: { count: { type: "string" }, brief: { type: "string" } },
});
const only = positionals[0];
const options = {
  ...(values.count === undefined ? {} : { count: Number(values.count) }),
  ...(values.brief === undefined ? {} : { brief: values.brief }),
};
const chosen = benches.filter(({ name }) => only === undefined || name === only);
if (chosen.length === 0 || (options.count !== undefined && !(Number.isInteger(options.count) && options.count > 0))) {
  console.error(`usage: npm run bench -- [${benches.map(({ name }) => name).join(" | ")}] [--count N] [--brief ID,ID]`);
  process.exit(2);
}
const missing: string[] = [];
const failures: string[] = [];
const missed: string[] = [];
for (const bench of chosen) {
  console.log(`== ${bench.name}`);
  const report = await bench.run(options);
  for (const line of report.lines) console.log(line);
  missing.push(...report.missing);
  failures.push(...report.failures);
  missed.push(...report.missed);
}
for (const line of missing) console.log(`!! NOT MEASURED: ${line}`);
for (const line of missed) console.log(`!! BAR MISSED: ${line}`);
for (const line of failures) console.log(`!! WRONG: ${line}`);
if (failures.length + missed.length > 0) process.exitCode = 1;
