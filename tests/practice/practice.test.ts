import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { beforeAll, describe, expect, it } from "vitest";
import { openEngine } from "../../src/main.ts";
import { type Recommendation, recommendationSchema } from "../../src/recommendation/contract.ts";
import { practiceCases } from "./cases.ts";
import { judge } from "./judge.ts";
import { lastLine, type Outcome, tallies } from "./tally.ts";

const ROOT = fileURLToPath(new URL("../..", import.meta.url));
const CASES = practiceCases();
/** Agreement with published practice below which something has gone backwards. */
const LEAST = { plainFirst: 11, allFirst: 26, forbiddenFirst: 2 };

const documents = new Map<string, Recommendation>();
const outcomes: Outcome[] = [];
beforeAll(async () => {
  const engine = await openEngine();
  for (const testCase of CASES) {
    const document = await engine.recommend(testCase.brief);
    documents.set(testCase.id, document);
    outcomes.push({ testCase, judgement: judge(document, testCase) });
  }
}, 600_000);

describe("the recommendations for the acceptance cases", () => {
  const tally = (group: string) => {
    const found = tallies(outcomes).get(group);
    if (found === undefined) throw new Error(`no case is ${group}`);
    return found;
  };

  it("answer every brief with a document that keeps the contract", () => {
    for (const [id, document] of documents) {
      const parsed = recommendationSchema.safeParse(JSON.parse(JSON.stringify(document)));
      expect(parsed.success ? [] : parsed.error.issues.map((issue) => issue.path.join(".")), id).toEqual([]);
    }
    expect(documents.size).toBe(CASES.length);
  });
  it("rank their methods from 1 in order, each with an id of its own", () => {
    for (const [id, { methods }] of documents) {
      expect(
        methods.map((method) => method.rank),
        id,
      ).toEqual(methods.map((_, index) => index + 1));
      expect(new Set(methods.map((method) => method.id)).size, id).toBe(methods.length);
    }
  });
  it("put a method that practice supports first in enough of the plain cases", () => {
    expect(tally("plain").first, lastLine(tally("all"))).toBeGreaterThanOrEqual(LEAST.plainFirst);
  });
  it("put a method that practice supports first in enough of all cases", () => {
    expect(tally("all").first, lastLine(tally("all"))).toBeGreaterThanOrEqual(LEAST.allFirst);
  });
  it("hardly ever put first what practice forbids", () => {
    expect(tally("all").forbidden, lastLine(tally("all"))).toBeLessThanOrEqual(LEAST.forbiddenFirst);
  });
});

describe("the engine and its knowledge", () => {
  const known = [...CASES.map((testCase) => testCase.id), ...CASES.map((testCase) => testCase.brief.title)];
  const namesIn = (text: string): readonly string[] => known.filter((name) => text.includes(name));

  it("name no acceptance case", () => {
    const files = ["src", "rules", "views"].flatMap((folder) =>
      readdirSync(join(ROOT, folder), { recursive: true, withFileTypes: true })
        .filter((entry) => entry.isFile())
        .map((entry) => join(entry.parentPath, entry.name)),
    );
    expect(files.length).toBeGreaterThan(50);
    const named = files.flatMap((file) => namesIn(readFileSync(file, "utf8")).map((name) => `${file}: ${name}`));
    expect(named).toEqual([]);
  });
  it("would be caught if they named one", () => {
    const [first] = CASES;
    expect(namesIn(`if (task.title === "${first?.brief.title ?? ""}") return`)).toHaveLength(1);
  });
});
