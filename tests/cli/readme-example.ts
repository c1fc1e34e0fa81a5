// The worked example of README.md: its brief, the answer printed there, and the answer given now.
//   node --import tsx tests/cli/readme-example.ts --write    puts the present answer into the file
import { readFileSync, writeFileSync } from "node:fs";
import { openEngine } from "../../src/main.ts";
import { recommendationText } from "../../src/recommendation/text.ts";

const README = new URL("../../README.md", import.meta.url);
const BRIEF = /<!-- brief -->\n```json\n(.*?)```/s;
const ANSWER = /(<!-- answer: .*?-->\n```text\n)(.*?)(```)/s;

/** The example as README.md prints it: the brief as JSON text, and the answer in words. */
export function readmeExample(): { readonly brief: string; readonly answer: string } {
  const text = readFileSync(README, "utf8");
  const [brief, answer] = [BRIEF.exec(text)?.[1], ANSWER.exec(text)?.[2]];
  if (brief === undefined || answer === undefined) throw new Error("README.md has lost its worked example");
  return { brief, answer };
}

/** The answer that the program gives to the example's brief now. */
export async function presentAnswer(): Promise<string> {
  const engine = await openEngine();
  return recommendationText(await engine.recommend(JSON.parse(readmeExample().brief)));
}

if (process.argv.includes("--write")) {
  const answer = await presentAnswer();
  const text = readFileSync(README, "utf8").replace(
    ANSWER,
    (_, start: string, _old: string, end: string) => start + answer + end,
  );
  writeFileSync(README, text);
}
