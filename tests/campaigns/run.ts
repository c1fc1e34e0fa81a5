/** Long campaigns: `npm run campaign -- NAME [SEED]`. Each prints its figures; a failed bound ends with exit code 1. */
import { runBalances, runOracle, runSolids } from "./solver.ts";

/** One campaign: prints nothing itself, returns figures and whether its bounds hold. */
export interface Campaign {
  readonly name: string;
  readonly about: string;
  readonly run: (seed: number) => { readonly figures: Readonly<Record<string, unknown>>; readonly holds: boolean };
}

/** The campaigns there are; one file each, listed here. */
export const campaigns: readonly Campaign[] = [
  {
    name: "solver",
    about: "10,000 random systems; 50 against a 50-digit oracle; 500 with one to three solids, 500 with up to eight",
    run: (seed) => {
      const balances = runBalances(seed, 10_000);
      const oracle = runOracle(seed + 1, 50);
      const solids = runSolids(seed + 2, 500);
      const manySolids = runSolids(seed + 3, 500, 8);
      const solidsHold = [solids, manySolids].every(
        (s) =>
          s.notConverged === 0 &&
          s.worstResidual <= 1e-12 &&
          s.worstSupersaturationLog10 <= 1e-9 &&
          s.worstIndexOfPresentLog10 <= 1e-9 &&
          s.mostNegativeMolPerL === 0,
      );
      const holds =
        balances.notConverged === 0 &&
        balances.worstResidual <= 1e-12 &&
        oracle.worstErrorPerCondition <= 1e-9 &&
        solidsHold;
      return { figures: { balances, oracle, solids, manySolids }, holds };
    },
  },
];

const [name, seedText] = process.argv.slice(2);
const chosen = campaigns.filter((campaign) => name === undefined || campaign.name === name);
const seed = seedText === undefined ? 20261201 : Number(seedText);
if (chosen.length === 0 || !Number.isSafeInteger(seed)) {
  console.error(`usage: npm run campaign -- [${campaigns.map((c) => c.name).join(" | ")}] [seed]`);
  process.exit(2);
}
for (const campaign of chosen) {
  console.log(`${campaign.name}: ${campaign.about} (seed ${seed})`);
  const started = performance.now();
  const { figures, holds } = campaign.run(seed);
  console.log(JSON.stringify(figures, null, 2));
  console.log(
    `${holds ? "all bounds hold" : "A BOUND IS BROKEN"} (${((performance.now() - started) / 1000).toFixed(1)} s)`,
  );
  if (!holds) process.exitCode = 1;
}
