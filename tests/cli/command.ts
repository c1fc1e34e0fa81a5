import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import type { CommandIO } from "../../src/cli/doors.ts";
import { main } from "../../src/main.ts";

/** What one run of the command left behind. */
export interface Run {
  readonly code: number;
  readonly out: string;
  readonly err: string;
  readonly lines: readonly string[]; // of standard error
}

/** Runs the command in this process, with its own streams. */
export async function run(argv: readonly string[], standardInput: string | Uint8Array = ""): Promise<Run> {
  const { io, written } = recorder(standardInput);
  const code = await main(argv, io);
  const { out, err } = written();
  return { code, out, err, lines: err.split("\n").filter((line) => line !== "") };
}

/** Streams that remember. */
export function recorder(
  standardInput: string | Uint8Array = "",
  environment: Readonly<Record<string, string | undefined>> = {},
): { readonly io: CommandIO; readonly written: () => { readonly out: string; readonly err: string } } {
  let out = "";
  let err = "";
  return {
    io: {
      out: (text) => {
        out += text;
      },
      err: (text) => {
        err += text;
      },
      standardInput: once(Buffer.from(standardInput)),
      environment,
      onStop: () => () => undefined,
    },
    written: () => ({ out, err }),
  };
}

async function* once(bytes: Uint8Array): AsyncGenerator<Uint8Array> {
  await Promise.resolve();
  for (let at = 0; at < bytes.length; at += 65_536) yield bytes.subarray(at, at + 65_536);
}

/** Runs `use` with the path of a file that holds `content`; the file is gone afterwards. */
export async function withFile<T>(content: string | Uint8Array, use: (path: string) => Promise<T>): Promise<T> {
  const folder = mkdtempSync(join(tmpdir(), "chelwright-"));
  try {
    const path = join(folder, "input.json");
    writeFileSync(path, content);
    return await use(path);
  } finally {
    rmSync(folder, { recursive: true });
  }
}
