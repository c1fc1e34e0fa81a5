import { open } from "node:fs/promises";
import { InputError } from "../errors.ts";
import { parseBriefText } from "../recommendation/brief-text.ts";
import { BRIEF_LIMITS } from "../recommendation/contract.ts";

/**
 * Reads a JSON file, or standard input for "-". Never holds more than the limit of a brief in memory.
 * Throws InputError when the file cannot be read, is too large, is not UTF-8 or is not JSON.
 */
export async function readJsonFile(file: string, standardInput: AsyncIterable<Uint8Array>): Promise<unknown> {
  const bytes = file === "-" ? await gather(standardInput) : await readFile(file);
  try {
    return parseBriefText(new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes));
  } catch (error) {
    if (error instanceof InputError) throw error;
    throw new InputError([{ path: "$", expected: "a text in UTF-8", found: "bytes that are not" }]);
  }
}

async function readFile(file: string): Promise<Uint8Array> {
  try {
    const handle = await open(file, "r");
    try {
      return await gather(handle.createReadStream({ autoClose: false }) as AsyncIterable<Uint8Array>);
    } finally {
      await handle.close();
    }
  } catch (error) {
    if (error instanceof InputError) throw error;
    throw new InputError([{ path: file, expected: "a file that can be read", found: reason(error) }]);
  }
}

async function gather(source: AsyncIterable<Uint8Array>): Promise<Uint8Array> {
  const parts: Uint8Array[] = [];
  let bytes = 0;
  for await (const part of source) {
    parts.push(part);
    bytes += part.length;
    if (bytes > BRIEF_LIMITS.textBytes)
      throw new InputError([{ path: "$", expected: `at most ${BRIEF_LIMITS.textBytes} bytes`, found: "more" }]);
  }
  return Buffer.concat(parts);
}

function reason(error: unknown): string {
  const code = error instanceof Error && "code" in error ? error.code : undefined;
  if (code === "ENOENT") return "no such file";
  if (code === "EISDIR") return "a folder";
  if (code === "EACCES") return "no permission to read it";
  return error instanceof Error ? error.message : "an unknown fault";
}
