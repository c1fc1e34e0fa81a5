import { type Fault, InputError } from "../errors.ts";
import { BRIEF_LIMITS } from "./contract-brief.ts";
import { jsonPath } from "./contract-faults.ts";

/** Deeper than any brief or calculator file; a limit, so that no text can exhaust the stack. */
const DEEPEST = 40;

/**
 * Reads a text as JSON. Faults (InputError) name line and column: malformed text, a field written twice in one object
 * (JSON would silently keep the last), too many bytes, too deep a nesting. A byte-order mark at the start is passed over.
 */
export function parseBriefText(text: string): unknown {
  const bytes = Buffer.byteLength(text);
  if (bytes > BRIEF_LIMITS.textBytes)
    throw new InputError([{ path: "$", expected: `at most ${BRIEF_LIMITS.textBytes} bytes`, found: `${bytes} bytes` }]);
  const json = text.startsWith("\uFEFF") ? text.slice(1) : text;
  const scan: Scan = { json, at: 0, path: [], twice: [] };
  value(scan);
  space(scan);
  if (scan.at < json.length) throw fault(scan, "the end of the text");
  if (scan.twice.length > 0) throw new InputError(scan.twice);
  return JSON.parse(json);
}

interface Scan {
  readonly json: string;
  at: number;
  readonly path: PropertyKey[];
  readonly twice: Fault[];
}

function value(scan: Scan): void {
  space(scan);
  const next = scan.json[scan.at];
  if (scan.path.length > DEEPEST) throw fault(scan, `at most ${DEEPEST} levels`);
  if (next === "{") object(scan);
  else if (next === "[") list(scan);
  else if (next === '"') take(scan, STRING, "a text between double quotes");
  else take(scan, LITERAL, "a value (a text, a number, true, false, null, a list or an object)");
}

function object(scan: Scan): void {
  const seen = new Set<string>();
  scan.at += 1;
  space(scan);
  if (accept(scan, "}")) return;
  for (;;) {
    space(scan);
    const start = scan.at;
    const key = JSON.parse(take(scan, STRING, "a field name between double quotes")) as string;
    scan.path.push(key);
    if (seen.has(key))
      scan.twice.push({
        path: jsonPath(scan.path),
        expected: "each field once",
        found: `it again at ${place(scan.json, start)}`,
      });
    seen.add(key);
    space(scan);
    if (!accept(scan, ":")) throw fault(scan, '":"');
    value(scan);
    scan.path.pop();
    space(scan);
    if (accept(scan, "}")) return;
    if (!accept(scan, ",")) throw fault(scan, '"," or "}"');
  }
}

function list(scan: Scan): void {
  scan.at += 1;
  space(scan);
  if (accept(scan, "]")) return;
  for (let index = 0; ; index += 1) {
    scan.path.push(index);
    value(scan);
    scan.path.pop();
    space(scan);
    if (accept(scan, "]")) return;
    if (!accept(scan, ",")) throw fault(scan, '"," or "]"');
  }
}

// The control characters are excluded as JSON excludes them.
const STRING = /"(?:[^"\\\u0000-\u001f]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/y;
const LITERAL = /(?:-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?|true|false|null)(?![\w.+-])/y;
const SPACE = /[ \t\r\n]*/y;

function take(scan: Scan, pattern: RegExp, expected: string): string {
  pattern.lastIndex = scan.at;
  const match = pattern.exec(scan.json);
  if (match === null) throw fault(scan, expected);
  scan.at = pattern.lastIndex;
  return match[0];
}

function space(scan: Scan): void {
  SPACE.lastIndex = scan.at;
  SPACE.exec(scan.json);
  scan.at = SPACE.lastIndex;
}

function accept(scan: Scan, sign: string): boolean {
  if (scan.json[scan.at] !== sign) return false;
  scan.at += 1;
  return true;
}

function fault(scan: Scan, expected: string): InputError {
  const rest = scan.json.slice(scan.at, scan.at + 24).split(/[\s,}\]]/)[0];
  const sign = rest === undefined || rest === "" ? scan.json[scan.at] : rest;
  const found = sign === undefined ? "the end of the text" : JSON.stringify(sign);
  return new InputError([{ path: jsonPath(scan.path), expected, found: `${found} at ${place(scan.json, scan.at)}` }]);
}

function place(json: string, at: number): string {
  const before = json.slice(0, at).split("\n");
  return `line ${before.length}, column ${(before.at(-1) ?? "").length + 1}`;
}
