import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { beforeAll, describe, expect, it } from "vitest";
import type { RuleRunner } from "../../src/inference/index.ts";
import { type Engine, openEngine } from "../../src/main.ts";
import { searchMethods } from "../../src/methods/search.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { judge } from "../../src/recommendation/judge.ts";
import { judgedMethods, ranged, ranking } from "../../src/recommendation/ranking.ts";
import { expectRelative } from "../expect-relative.ts";
import { INVENTED_BRIEFS } from "../recommendation/invented-briefs.ts";
import { DEFAULTS } from "./campaign.ts";
import { runCoverage } from "./coverage.ts";
import { runMetamorphic } from "./metamorphic.ts";
import { runPerturbation } from "./perturbation.ts";
import { perturbedKnowledge } from "./perturbed-knowledge.ts";
import { randomBrief, SAMPLE_KINDS } from "./random-brief.ts";
import { runRobustnessCampaign } from "./robustness.ts";
import { ruleEffects } from "./rule-effects.ts";
import { workList, workThrough } from "./work-list.ts";

const SEED = DEFAULTS.seed;
let engine: Engine;
beforeAll(async () => {
  engine = await openEngine();
});

describe("randomBrief", () => {
  it("draws a brief from seed and index alone, and another one from another seed", () => {
    expect(randomBrief(SEED, 7)).toEqual(randomBrief(SEED, 7));
    expect(randomBrief(SEED, 7)).not.toEqual(randomBrief(SEED + 1, 7));
  });
  it("draws briefs that can be read, of every family, with every kind of laboratory", () => {
    const briefs = Array.from({ length: 500 }, (_, index) => randomBrief(SEED, index));
    const tasks = briefs.map((brief) => readBrief(brief, engine.knowledge));
    for (const family of new Set(SAMPLE_KINDS.map((kind) => kind.family)))
      expect(briefs.filter(({ title }) => title.includes(`(${family},`)).length, family).toBeGreaterThan(20);
    expect(tasks.filter(({ analytes }) => analytes.length > 1).length).toBeGreaterThan(30);
    expect(tasks.filter(({ laboratory }) => !laboratory.heating).length).toBeGreaterThan(20);
    expect(tasks.filter(({ laboratory }) => laboratory.available !== null).length).toBeGreaterThan(20);
    expect(new Set(tasks.map(({ laboratory }) => laboratory.buretteML))).toEqual(new Set([10, 25, 50]));
    const percents = tasks.map(({ requirementPercent }) => requirementPercent);
    expect(Math.min(...percents)).toBeGreaterThanOrEqual(0.3);
    expect(Math.max(...percents)).toBeLessThanOrEqual(3);
  });
});

describe("workList", () => {
  it("shares the work without a gap and without doing anything twice", () => {
    const options = { ...DEFAULTS, generated: 10 };
    const whole = workList(options);
    const parts = [1, 2].flatMap((part) => workList({ ...options, share: { part, parts: 2 } }));
    expect(parts.map(({ id }) => id).sort()).toEqual(whole.map(({ id }) => id).sort());
    expect(workList({ ...options, from: 44, count: 2 })).toEqual(whole.slice(44, 46));
  });
});

describe("workThrough", () => {
  it("goes on after what its file holds", async () => {
    const folder = mkdtempSync(join(tmpdir(), "campaign-"));
    const out = join(folder, "done.jsonl");
    const asked: number[] = [];
    const work = (items: readonly { readonly position: number; readonly id: string }[]) =>
      workThrough(
        items,
        { out, print: () => undefined },
        (index) => {
          asked.push(items[index]!.position);
          return Promise.resolve(items[index]!.position * 2);
        },
        () => -1,
      );
    const items = [0, 1, 2].map((position) => ({ position, id: `brief ${position}` }));
    await work(items.slice(0, 2));
    const done = await work(items);
    expect(asked).toEqual([0, 1, 2]);
    expect(done.map(({ result }) => result)).toEqual([0, 2, 4]);
    expect(readFileSync(out, "utf8").trim().split("\n")).toHaveLength(3);
    rmSync(folder, { recursive: true });
  });
});

describe("runMetamorphic", () => {
  const zinc = { position: 0, id: "zinc", brief: INVENTED_BRIEFS.zinc };
  it("finds no fault in the engine on a small sample", async () => {
    const { figures, holds, lines } = await runMetamorphic([zinc], DEFAULTS);
    expect(lines).toEqual([]);
    expect(holds).toBe(true);
    expect(figures["answers"]).toBeGreaterThan(7);
  });
  it("reports an answer that depends on the order of the rows, with its margin", async () => {
    const document = await engine.recommend(zinc.brief);
    expect(document.methods.length).toBeGreaterThan(1);
    const swapped = { ...document, methods: [...document.methods].reverse() };
    const first = zinc.brief.matrix![0]!.component;
    const { holds, lines } = await runMetamorphic([zinc], DEFAULTS, (brief) =>
      Promise.resolve((brief as typeof zinc.brief).matrix?.[0]?.component === first ? document : swapped),
    );
    expect(holds).toBe(false);
    expect(lines?.join("\n")).toMatch(
      /zinc: the order of the rows says nothing: ranking: .* points, .* becomes .* points/,
    );
  });
});

describe("perturbedKnowledge", () => {
  it("moves all records of a reaction by one deviate of their own uncertainty, and leaves the original", () => {
    const moved = perturbedKnowledge(engine.knowledge, SEED, 3);
    const deviates = [...engine.knowledge.reactions].map(([id, { records }]) => {
      const shifts = records.map((r, i) => (moved.reactions.get(id)!.records[i]!.log10K - r.log10K) / r.uncertainty);
      for (const shift of shifts) expect(Math.abs(shift - shifts[0]!)).toBeLessThan(1e-9);
      return shifts[0]!;
    });
    const mean = deviates.reduce((a, b) => a + b) / deviates.length;
    const variance = deviates.reduce((sum, d) => sum + d * d, 0) / deviates.length;
    // A mean of n standard normal deviates is below 4 / root n in all but one case in 16,000.
    expect(Math.abs(mean)).toBeLessThan(4 / Math.sqrt(deviates.length));
    expectRelative(variance, 1, 4 * Math.sqrt(2 / deviates.length));
    expect(perturbedKnowledge(engine.knowledge, SEED, 3).reactions).toEqual(moved.reactions);
    expect(perturbedKnowledge(engine.knowledge, SEED, 4).reactions).not.toEqual(moved.reactions);
  });
});

describe("runPerturbation", () => {
  it("counts draws and changes for each brief", async () => {
    const { figures, lines } = await runPerturbation([{ id: "aluminium", brief: INVENTED_BRIEFS.aluminium }], {
      ...DEFAULTS,
      draws: 3,
    });
    expect(figures).toMatchObject({ briefs: 1, draws: 3, modeChanged: 0 });
    expect(lines?.[1]).toMatch(/^aluminium +3 +0 .* back /);
  });
});

describe("ruleEffects", () => {
  it("ranks without a rule as the rules without it would", async () => {
    const { knowledge, rules } = engine;
    const { aluminium } = INVENTED_BRIEFS;
    const task = readBrief(aluminium, knowledge);
    const firstWith = async (runner: RuleRunner): Promise<string | undefined> => {
      const judged = await judgedMethods(task, searchMethods(task, knowledge).methods, knowledge, runner);
      const { shown } = await ranking(judged, (m) => judge(task, ranged(task, m, knowledge), knowledge, runner));
      return shown[0]?.method.id;
    };
    const without = (rule: string): RuleRunner => ({
      ...rules,
      run: async (scope, facts) => (await rules.run(scope, facts)).filter((finding) => finding.rule !== rule),
      runAll: async (questions) =>
        (await rules.runAll(questions)).map((findings) => findings.filter((finding) => finding.rule !== rule)),
    });
    const effects = await ruleEffects(aluminium, knowledge, rules);
    const base = await firstWith(rules);
    const asked = Object.keys(effects).filter((rule) => effects[rule]!.first === 1);
    for (const rule of [...asked, "mode/back"].slice(0, 3))
      expect(Number((await firstWith(without(rule))) !== base), rule).toBe(effects[rule]!.first);
  });
});

describe("runCoverage", () => {
  it("counts what fires and what decides, and names what is idle", async () => {
    const items = [INVENTED_BRIEFS.zinc, INVENTED_BRIEFS.magnesium].map((brief, position) => ({
      position,
      id: brief.title,
      brief,
    }));
    const { figures, holds, lines } = await runCoverage(items, DEFAULTS);
    expect(holds).toBe(false); // two briefs cannot make every rule speak
    const { rules, fired, decides, idle } = figures as {
      rules: number;
      fired: number;
      decides: number;
      idle: string[];
    };
    expect([rules, fired + idle.length]).toEqual([engine.ruleBase.rules.length, engine.ruleBase.rules.length]);
    expect(decides).toBeGreaterThan(0);
    expect(idle).not.toContain("safety/cyanide-used");
    expect(lines?.find((line) => line.startsWith("safety/cyanide-used"))).toMatch(/decides|weighs only/);
  });
});

describe("robustness", () => {
  it("comes to the same probability after few draws and after many, and counts the methods that are compiled", async () => {
    const briefs = (["zinc", "calcium", "magnesium"] as const).map((id) => ({ id, brief: INVENTED_BRIEFS[id] }));
    const options = { seed: SEED, out: null, print: () => undefined };
    const { figures, holds, lines } = await runRobustnessCampaign(briefs, { few: 300, many: 1500 }, options, 1);
    expect(figures["briefs"]).toBe(3);
    expect(Number(figures["methods"])).toBeGreaterThan(0);
    expect(lines).toHaveLength(Number(figures["methods"]));
    expect(Number(figures["worstDifference"])).toBeLessThan(0.06);
    expect(holds).toBe(Number(figures["worstDifference"]) <= 0.02);
    // Fewer methods than are asked for prove nothing.
    expect((await runRobustnessCampaign([], { few: 300, many: 1500 }, options)).holds).toBe(false);
  });
});
