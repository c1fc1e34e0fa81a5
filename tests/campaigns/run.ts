/** Long campaigns: `npm run campaign -- [NAME] [SEED]`. Each prints its figures; a broken bound ends with exit code 1. */
import type { Campaign } from "./campaign.ts";
import { metamorphicCampaign } from "./metamorphic.ts";
import { solverCampaign } from "./solver.ts";

/** The campaigns there are; one file each, listed here. */
export const campaigns: readonly Campaign[] = [solverCampaign, metamorphicCampaign];

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
  const { figures, holds } = await campaign.run(seed);
  console.log(JSON.stringify(figures, null, 2));
  console.log(
    `${holds ? "all bounds hold" : "A BOUND IS BROKEN"} (${((performance.now() - started) / 1000).toFixed(1)} s)`,
  );
  if (!holds) process.exitCode = 1;
}
