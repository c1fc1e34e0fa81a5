import { execFile } from "node:child_process";
import { fileURLToPath } from "node:url";
import { promisify } from "node:util";
import { describe, expect, it } from "vitest";
import { GOOD_BRIEF } from "./bad-briefs.ts";
import { withFile } from "./command.ts";

const execute = promisify(execFile);
const ROOT = fileURLToPath(new URL("../..", import.meta.url));
const LAUNCHER = "src/cli/chelwright.mjs";

/** Runs node in a process of its own; resolves also when it fails. */
async function node(...argv: readonly string[]): Promise<{ code: number; stdout: string; stderr: string }> {
  try {
    return { code: 0, ...(await execute(process.execPath, argv, { cwd: ROOT, maxBuffer: 1 << 26 })) };
  } catch (error) {
    const { code, stdout, stderr } = error as { code: number; stdout: string; stderr: string };
    return { code, stdout, stderr };
  }
}

describe("the launcher", () => {
  it("hands the exit code and both streams of a faulty brief to the shell", async () => {
    const { code, stdout, stderr } = await withFile('{"title": "t"}', (path) =>
      node(LAUNCHER, "recommend", path, "--json"),
    );
    expect({ code, stdout, stderr }).toEqual({
      code: 2,
      stdout: "",
      stderr: "$.analytes: expected a list, found nothing\n",
    });
  });
  it("prints a whole document to a pipe", async () => {
    const { code, stdout, stderr } = await withFile(JSON.stringify(GOOD_BRIEF), (path) =>
      node(LAUNCHER, "recommend", path, "--json"),
    );
    expect({ code, stderr }).toEqual({ code: 0, stderr: "" });
    expect((JSON.parse(stdout) as { contract: number }).contract).toBe(1);
  });
  it("does not load the web server to answer a brief, and does load it to serve", async () => {
    const script = (argv: string): string => `
      import { register } from "tsx/esm/api"; import { Module } from "node:module"; register();
      const { main } = await import("./src/main.ts");
      await main(${argv}, { out() {}, err() {}, standardInput: process.stdin, environment: { PORT: "0" } });
      process.stdout.write(String(Object.keys(Module._cache).some((path) => path.includes("node_modules/express/"))));
      process.exit(0);`;
    await withFile(JSON.stringify(GOOD_BRIEF), async (path) => {
      const answered = await node("--input-type=module", "-e", script(JSON.stringify(["recommend", path])));
      const served = await node("--input-type=module", "-e", script('["serve"]'));
      expect([answered.stdout, served.stdout]).toEqual(["false", "true"]);
    });
  });
});
