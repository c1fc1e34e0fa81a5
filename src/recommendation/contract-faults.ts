import { z } from "zod";
import type { Fault } from "../errors.ts";

/** Writes a place in a JSON document: `$.matrix[2].concentration.unit`; names that are no identifiers stand in brackets. */
export function jsonPath(path: readonly PropertyKey[]): string {
  let written = "$";
  for (const step of path) {
    if (typeof step === "number") written += `[${step}]`;
    else if (/^[A-Za-z_]\w*$/.test(String(step))) written += `.${String(step)}`;
    else written += `[${JSON.stringify(shorten(String(step)))}]`;
  }
  return written;
}

/** Says in a few words what a JSON value is, so that a fault can show it without printing a whole document. */
export function describeFound(value: unknown): string {
  if (value === undefined) return "nothing";
  if (typeof value === "string") return value === "" ? "an empty text" : JSON.stringify(shorten(value));
  if (typeof value === "number")
    return Number.isFinite(value) ? String(value) : `a number too large to hold (${String(value)})`;
  if (Array.isArray(value)) return value.length === 0 ? "an empty list" : `a list of ${value.length}`;
  if (typeof value === "boolean") return String(value);
  return value === null ? "null" : "an object";
}

/** One fault for each thing in which `input` does not keep `schema`; empty when it keeps it. Unknown fields are faults that name the known ones. */
export function shapeFaults(schema: z.ZodType, input: unknown): readonly Fault[] {
  const parsed = schema.safeParse(input);
  return parsed.success ? [] : parsed.error.issues.flatMap((issue) => issueFaults(issue, schema, input));
}

function issueFaults(issue: z.core.$ZodIssue, schema: z.ZodType, input: unknown): readonly Fault[] {
  const found = valueAt(input, issue.path);
  if (issue.code === "unrecognized_keys") {
    const known = fieldsAt(schema, issue.path);
    return issue.keys.map((key) => ({
      path: jsonPath([...issue.path, key]),
      expected: known.length > 0 ? `one of the fields ${known.join(", ")}` : "no such field",
      found: `an unknown field ${JSON.stringify(shorten(key))}`,
    }));
  }
  return [{ path: jsonPath(issue.path), expected: expectedBy(issue), found: describeFound(found) }];
}

function expectedBy(issue: z.core.$ZodIssue): string {
  if (issue.code === "invalid_type") return ARTICLES[issue.expected] ?? issue.expected;
  if (issue.code === "invalid_value") return `one of ${issue.values.map(String).join(", ")}`;
  if (issue.code === "too_small") return sized(issue.origin, "at least", Number(issue.minimum));
  if (issue.code === "too_big") return sized(issue.origin, "at most", Number(issue.maximum));
  return issue.message;
}

const ARTICLES: Readonly<Record<string, string>> = {
  number: "a number",
  int: "a whole number",
  string: "a text",
  boolean: "true or false",
  array: "a list",
  object: "an object",
  record: "an object",
};

function sized(origin: string, bound: string, limit: number): string {
  if (origin === "string")
    return limit === 1 && bound === "at least" ? "a text that is not empty" : `${bound} ${limit} characters`;
  if (origin === "array") return `a list of ${bound} ${limit}`;
  return `a number of ${bound} ${limit}`;
}

function valueAt(input: unknown, path: readonly PropertyKey[]): unknown {
  let value = input;
  for (const step of path) {
    if (typeof value !== "object" || value === null || !Object.hasOwn(value, step)) return undefined;
    value = (value as Record<PropertyKey, unknown>)[step];
  }
  return value;
}

/** The field names that the schema knows at a place; empty where it has none. */
function fieldsAt(schema: z.ZodType, path: readonly PropertyKey[]): readonly string[] {
  let current: z.core.$ZodType | undefined = unwrap(schema);
  for (const step of path) {
    if (current instanceof z.ZodArray) current = unwrap(current.element);
    else if (current instanceof z.ZodObject)
      current = unwrap(
        Object.entries(current.shape as Record<string, z.core.$ZodType>).find(([name]) => name === step)?.[1],
      );
    else return [];
  }
  return current instanceof z.ZodObject ? Object.keys(current.shape) : [];
}

function unwrap(schema: z.core.$ZodType | undefined): z.core.$ZodType | undefined {
  if (schema instanceof z.ZodDefault || schema instanceof z.ZodOptional || schema instanceof z.ZodNullable)
    return unwrap(schema.unwrap());
  return schema;
}

const SHOWN_CHARACTERS = 60;
const shorten = (text: string): string =>
  text.length > SHOWN_CHARACTERS ? `${text.slice(0, SHOWN_CHARACTERS)}…` : text;
