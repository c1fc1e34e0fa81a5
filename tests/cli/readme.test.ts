import { existsSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import { presentAnswer, readmeExample } from "./readme-example.ts";

const ROOT = fileURLToPath(new URL("../..", import.meta.url));
const read = (file: string): string => readFileSync(`${ROOT}/${file}`, "utf8");
/** Verdict and first method: what a reader of the example takes away. Figures may move in their last place with the data. */
const heart = (answer: string): string =>
  answer
    .split("\n\n")
    .slice(1)
    .find((part) => part.startsWith("Method")) ?? "no method";
const verdict = (answer: string): string => /^(NOT FIT|FIT, WITH RESERVATIONS|FIT)/m.exec(answer)?.[1] ?? "no verdict";

describe("README.md", () => {
  it("prints the verdict and the method that the program gives for its example", async () => {
    const answer = await presentAnswer();
    const printed = readmeExample().answer;
    expect([verdict(printed), heart(printed)]).toEqual([verdict(answer), heart(answer)]);
    expect(heart(printed)).toContain("Titrate");
  });
  it.each(["README.md", "DEVELOPERS.md"])("%s names only folders and files that exist", (file) => {
    const paths = [...read(file).matchAll(/`((?:src|rules|views|tests)\/[\w./-]+)`/g)].map(([, path]) => path ?? "");
    expect(paths.length).toBeGreaterThan(5);
    expect(paths.filter((path) => !existsSync(`${ROOT}/${path}`))).toEqual([]);
  });
  it.each(["README.md", "DEVELOPERS.md"])("%s names only scripts that exist", (file) => {
    const { scripts } = JSON.parse(read("package.json")) as { scripts: Record<string, string> };
    const named = [...read(file).matchAll(/npm run ([a-z]+)/g)].map(([, script]) => script ?? "");
    expect(named.filter((script) => !(script in scripts))).toEqual([]);
  });
});
