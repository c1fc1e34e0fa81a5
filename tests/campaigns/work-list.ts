import { appendFileSync, existsSync, readFileSync } from "node:fs";
import { z } from "zod";
import type { LooseBrief } from "../recommendation/invented-briefs.ts";
import type { CampaignOptions } from "./campaign.ts";
import { randomBrief } from "./random-brief.ts";

/** One brief of a campaign. */
export interface WorkItem {
  readonly position: number; // in the whole list
  readonly id: string; // of the acceptance case, or seed and index
  readonly brief: LooseBrief;
}

/** What a campaign reads of an acceptance case; the files say more. */
const acceptanceSchema = z.array(
  z.looseObject({ id: z.string(), difficulty: z.string(), brief: z.looseObject({ title: z.string() }) }),
);

/** Ids, difficulties and briefs of the acceptance cases: of the copy of the tests, or of the file that is named. */
export function acceptanceCases({ practice }: Pick<CampaignOptions, "practice">): z.output<typeof acceptanceSchema> {
  const file = practice ?? new URL("../practice/cases.json", import.meta.url);
  return acceptanceSchema.parse(JSON.parse(readFileSync(file, "utf8")));
}

/** The briefs that these options ask for: acceptance briefs, then generated ones, cut to the part asked for. */
export function workList(options: CampaignOptions): WorkItem[] {
  const cases = acceptanceCases(options);
  const visible = cases.map(({ id, brief }) => ({ id, brief: brief as unknown as LooseBrief }));
  const generated = Array.from({ length: options.generated }, (_, index) => ({
    id: `seed ${options.seed} index ${index}`,
    brief: randomBrief(options.seed, index),
  }));
  const end = options.count === null ? Number.POSITIVE_INFINITY : options.from + options.count;
  return [...visible, ...generated]
    .map((item, position) => ({ ...item, position }))
    .filter(({ position }) => position >= options.from && position < end)
    .filter(({ position }) => position % options.share.parts === options.share.part - 1);
}

/** What came of one item, as it stands in the file. */
export interface Done<T> {
  readonly position: number;
  readonly id: string;
  readonly result: T;
}

/**
 * Works through items one after another, says how far it is, and writes a line each; what the file holds already is taken from there.
 * An item whose work throws has `onError` for its result.
 */
export async function workThrough<T>(
  items: readonly { readonly position: number; readonly id: string }[],
  options: Pick<CampaignOptions, "out" | "print">,
  work: (index: number) => Promise<T>,
  onError: (error: unknown) => T,
): Promise<Done<T>[]> {
  const before = readDone<T>(options.out);
  const out: Done<T>[] = [];
  const started = performance.now();
  const todo = items.filter(({ id }) => !before.has(id)).length;
  let worked = 0;
  for (const [index, { position, id }] of items.entries()) {
    const known = before.get(id);
    if (known !== undefined) {
      out.push(known);
      continue;
    }
    const result = await work(index).catch(onError);
    const done: Done<T> = { position, id, result };
    out.push(done);
    if (options.out !== null) appendFileSync(options.out, `${JSON.stringify(done)}\n`);
    worked++;
    const perItem = (performance.now() - started) / worked / 60_000;
    options.print(`${worked} of ${todo} (${id}), about ${((todo - worked) * perItem).toFixed(1)} min left`);
  }
  return out;
}

function readDone<T>(file: string | null): ReadonlyMap<string, Done<T>> {
  if (file === null || !existsSync(file)) return new Map();
  const lines = readFileSync(file, "utf8")
    .split("\n")
    .filter((line) => line !== "");
  return new Map(lines.map((line) => JSON.parse(line) as Done<T>).map((done) => [done.id, done]));
}
