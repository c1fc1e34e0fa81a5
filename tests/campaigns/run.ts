/** Long campaigns: `npm run campaign -- NAME [options]`, options in DEVELOPERS.md. Each prints its figures; a broken bound ends with exit code 1. */
import { parseArgs } from "node:util";
import { type Campaign, type CampaignOptions, DEFAULTS } from "./campaign.ts";
import { coverageCampaign } from "./coverage.ts";
import { metamorphicCampaign } from "./metamorphic.ts";
import { perturbationCampaign } from "./perturbation.ts";
import { robustnessCampaign } from "./robustness.ts";
import { solverCampaign } from "./solver.ts";
import { turningCampaign } from "./turning-points.ts";

/** The campaigns there are; one file each, listed here. */
const campaigns: readonly Campaign[] = [
  solverCampaign,
  metamorphicCampaign,
  perturbationCampaign,
  coverageCampaign,
  turningCampaign,
  robustnessCampaign,
];

function refuse(why: string): never {
  console.error(`${why}\nusage: npm run campaign -- ${campaigns.map((c) => c.name).join(" | ")} [options]`);
  process.exit(2);
}

function integer(text: string | undefined, otherwise: number, name: string): number {
  const value = text === undefined ? otherwise : Number(text);
  return Number.isSafeInteger(value) && value >= 0 ? value : refuse(`--${name}: expected an integer from 0`);
}

function readOptions(): { readonly campaign: Campaign; readonly options: CampaignOptions } {
  const { positionals, values } = parseArgs({
    allowPositionals: true,
    options: {
      seed: { type: "string" },
      from: { type: "string" },
      count: { type: "string" },
      generated: { type: "string" },
      share: { type: "string" },
      practice: { type: "string" },
      out: { type: "string" },
      draws: { type: "string" },
    },
  });
  const campaign = campaigns.find(({ name }) => name === positionals[0]) ?? refuse("no campaign of this name");
  const [part, parts] = (values.share ?? "1/1").split("/").map(Number);
  if (!part || !parts || part > parts) refuse("--share: expected PART/PARTS, as 1/2");
  return {
    campaign,
    options: {
      seed: integer(values.seed, DEFAULTS.seed, "seed"),
      from: integer(values.from, DEFAULTS.from, "from"),
      count: values.count === undefined ? null : integer(values.count, 0, "count"),
      generated: integer(values.generated, DEFAULTS.generated, "generated"),
      share: { part, parts },
      practice: values.practice ?? null,
      out: values.out ?? null,
      draws: integer(values.draws, DEFAULTS.draws, "draws"),
      print: (line) => console.error(line),
    },
  };
}

const { campaign, options } = readOptions();
console.log(`${campaign.name}: ${campaign.about} (seed ${options.seed})`);
const started = performance.now();
const { figures, holds, lines = [] } = await campaign.run(options);
for (const line of lines) console.log(line);
console.log(JSON.stringify(figures, null, 2));
const minutes = (performance.now() - started) / 60_000;
console.log(`${holds ? "all bounds hold" : "A BOUND IS BROKEN"} (${minutes.toFixed(1)} min)`);
if (!holds) process.exitCode = 1;
