/** `npm run bench [NAME]`: every bench in turn. What cannot be measured here is said on a line of its own and in the last line. */
import type { Bench } from "./bench.ts";
import { equilibriumBench } from "./equilibrium.ts";
import { componentsBench } from "./components.ts";
import { curveBench } from "./curve.ts";
import { recommendBench } from "./recommend.ts";

/** The benches there are, in the order in which they run. */
export const benches: readonly Bench[] = [equilibriumBench, curveBench, componentsBench, recommendBench];

const only = process.argv[2];
const chosen = benches.filter(({ name }) => only === undefined || name === only);
if (chosen.length === 0) {
  console.error(`usage: npm run bench -- [${benches.map(({ name }) => name).join(" | ")}]`);
  process.exit(2);
}
const missing: string[] = [];
const failures: string[] = [];
for (const bench of chosen) {
  console.log(`== ${bench.name}`);
  const report = await bench.run();
  for (const line of report.lines) console.log(line);
  missing.push(...report.missing);
  failures.push(...report.failures);
}
for (const line of missing) console.log(`!! NOT MEASURED: ${line}`);
for (const line of failures) console.log(`!! WRONG: ${line}`);
if (failures.length > 0) process.exitCode = 1;
