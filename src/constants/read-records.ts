import { z } from "zod";
import { DataError } from "../errors.ts";

/** Gives the text of a data file by its name ("buffers.json"); throws when there is none. */
export type ReadFile = (name: string) => string;

/**
 * Reads one data file and validates it: the value the schema describes. Throws a DataError that names the file and the JSON
 * path of the first fault ("$[3].pH[1]"), and says how many more there are.
 */
export function readRecords<T>(readFile: ReadFile, name: string, schema: z.ZodType<T>): T {
  let parsed: unknown;
  try {
    parsed = JSON.parse(readFile(name));
  } catch (cause) {
    throw new DataError(name, "$", cause instanceof Error ? cause.message : "cannot be read", cause);
  }
  const result = schema.safeParse(parsed);
  if (result.success) return result.data;
  const [first] = result.error.issues;
  const more = result.error.issues.length - 1;
  const path = (first?.path ?? []).map((key) => (typeof key === "number" ? `[${key}]` : `.${String(key)}`)).join("");
  throw new DataError(
    name,
    `$${path}`,
    `${first?.message ?? "invalid"}${more > 0 ? ` (and ${more} more faults)` : ""}`,
  );
}
