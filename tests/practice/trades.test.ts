import { beforeAll, describe, expect, it } from "vitest";
import { openEngine } from "../../src/main.ts";
import { practiceCases } from "./cases.ts";
import { acceptedWay, ionPractice, plainBrief } from "./ion-practice.ts";
import { difference, judge } from "./judge.ts";
import { tallies, type Outcome } from "./tally.ts";

// Against standard methods and handbooks, recalled (sources stand with each brief and each way): every sixth of the trade briefs, and plain solutions.

const SAMPLE = practiceCases("trade-briefs").filter((_, index) => index % 6 === 0);
/** The whole set stands at nine in ten; `npm run practice -- --trades` goes through it. */
const LEAST_FIRST_FRACTION = 0.7;
const PLAIN = ["Zn2+", "Cd2+", "Pb2+", "Bi3+", "Ni2+", "Co2+", "La3+", "Th4+", "Fe3+", "Al3+"];

let engine: Awaited<ReturnType<typeof openEngine>>;
beforeAll(async () => {
  engine = await openEngine();
});

describe("invented briefs of the trades", () => {
  it("get first what standard methods would choose, in most of the sample", async () => {
    const outcomes: Outcome[] = [];
    for (const testCase of SAMPLE)
      outcomes.push({ testCase, judgement: judge(await engine.recommend(testCase.brief), testCase) });
    const all = tallies(outcomes).get("all")!;
    expect(all.cases).toBeGreaterThanOrEqual(10);
    expect(all.first / all.cases).toBeGreaterThanOrEqual(LEAST_FIRST_FRACTION);
    expect(all.forbidden).toBe(0);
  });
  it("would notice a wrong answer: no brief accepts a titration of another ion", async () => {
    const zinc = SAMPLE.find((testCase) => testCase.brief.title.includes("Zinc"))!;
    const document = await engine.recommend(plainBrief(ionPractice().find((row) => row.ion === "Bi3+")!));
    expect(judge(document, zinc).first).toBe(false);
  });
});

describe("a metal alone in a plain solution", () => {
  it.each(PLAIN)("%s is titrated first in one of the usual ways of handbooks (recalled)", async (ion) => {
    const row = ionPractice().find((r) => r.ion === ion)!;
    const [first] = (await engine.recommend(plainBrief(row))).methods;
    const misses = row.ways.map((way) => difference(first!, acceptedWay(ion, way)));
    expect(misses).toContain(null);
  });
});
