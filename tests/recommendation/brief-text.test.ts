import { describe, expect, it } from "vitest";
import { InputError } from "../../src/errors.ts";
import { parseBriefText } from "../../src/recommendation/brief-text.ts";

function faultsOf(text: string): readonly string[] {
  try {
    parseBriefText(text);
  } catch (error) {
    if (error instanceof InputError)
      return error.faults.map((f) => `${f.path}: expected ${f.expected}, found ${f.found}`);
    throw error;
  }
  return [];
}

describe("parseBriefText", () => {
  it.each(['{"a":[1,-2.5e-3,true,null,"x\\u00b5\\n"]}', " [] ", '"text"', "0", '{"":{}}'])(
    "reads %s as JSON does",
    (text) => {
      expect(parseBriefText(text)).toEqual(JSON.parse(text));
    },
  );
  it("passes over a byte-order mark", () => {
    expect(parseBriefText('\uFEFF{"a":1}')).toEqual({ a: 1 });
  });
  it.each([
    ["a missing comma", '{\n "a": 1\n "b": 2\n}', '$: expected "," or "}", found "\\"b\\":" at line 3, column 2'],
    ["NaN", '{"a": {"b": [1, NaN]}}', "at line 1, column 17"],
    ["a trailing comma", '{"a": 1,}', '$: expected a field name between double quotes, found "}" at line 1, column 9'],
    ["single quotes", "{'a': 1}", "$: expected a field name between double quotes, found \"'a':\" at line 1, column 2"],
    ["a text that stops", '{"a": [1, 2', '$.a: expected "," or "]", found the end of the text at line 1, column 12'],
    ["nothing at all", "", "found the end of the text at line 1, column 1"],
    ["two documents", "{} {}", "$: expected the end of the text"],
    ["a number with a leading zero", '{"a": 01}', "$.a: expected a value"],
    ["a comment", '{"a": 1 /* x */}', '$: expected "," or "}"'],
    ["a raw line break in a text", '{"a": "x\ny"}', "$.a: expected a text between double quotes"],
  ])("says where %s stands", (_what, text, expected) => {
    const faults = faultsOf(text);
    expect(faults).toHaveLength(1);
    expect(faults[0]).toContain(expected);
  });
  it("names the place of a value, list index and all", () => {
    expect(faultsOf('{"matrix": [1, {"x": oops}]}')[0]).toMatch(
      /^\$\.matrix\[1\]\.x: expected a value .* found "oops"/,
    );
  });
  it("reports a field that stands twice, of which JSON would keep the last", () => {
    expect(faultsOf('{"title": "a", "title": "b", "x": {"y": 1, "y": 2}}')).toEqual([
      "$.title: expected each field once, found it again at line 1, column 16",
      "$.x.y: expected each field once, found it again at line 1, column 44",
    ]);
  });
  it("refuses a nesting that no brief needs, without exhausting the stack", () => {
    expect(faultsOf("[".repeat(200_000))[0]).toContain("at most 40 levels");
    expect(faultsOf(`${"[".repeat(30)}1${"]".repeat(30)}`)).toEqual([]);
  });
  it("refuses 5 MB and takes what is just within the limit", () => {
    expect(faultsOf(JSON.stringify({ title: "x".repeat(5_000_000) }))[0]).toMatch(/expected at most 262144 bytes/);
    expect(faultsOf(JSON.stringify("x".repeat(262_142)))).toEqual([]);
    expect(faultsOf(JSON.stringify("x".repeat(262_143)))).toHaveLength(1);
  });
});
