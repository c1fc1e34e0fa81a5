import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { InputError } from "../../src/errors.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { parseBriefText } from "../../src/recommendation/brief-text.ts";
import { GOOD_BRIEF } from "../cli/bad-briefs.ts";

const KNOWLEDGE = loadKnowledge();
const SEED = 20261201;

/** What reading a brief comes to: a task, faults, or something that must never happen. */
function outcome(read: () => unknown): "read" | "faults" | "broken" {
  try {
    read();
    return "read";
  } catch (error) {
    if (!(error instanceof InputError)) return "broken";
    const whole = error.faults.every(
      (fault) => fault.path.startsWith("$") && fault.expected !== "" && fault.found !== "",
    );
    return error.faults.length > 0 && whole ? "faults" : "broken";
  }
}

/** Every place in a JSON value, as paths. */
function places(value: unknown, path: readonly (string | number)[] = []): readonly (readonly (string | number)[])[] {
  if (typeof value !== "object" || value === null) return [path];
  const entries = Array.isArray(value) ? value.map((v, i) => [i, v] as const) : Object.entries(value);
  return [path, ...entries.flatMap(([key, inner]) => places(inner, [...path, key]))];
}

function replaced(value: unknown, path: readonly (string | number)[], by: unknown): unknown {
  const [step, ...rest] = path;
  if (step === undefined) return by;
  if (Array.isArray(value)) return value.map((inner: unknown, i) => (i === step ? replaced(inner, rest, by) : inner));
  return Object.fromEntries(
    Object.entries(value as object).map(([key, inner]) => [key, key === step ? replaced(inner, rest, by) : inner]),
  );
}

describe("readBrief on anything at all", () => {
  it("reads it or gives faults with place, expectation and finding", () => {
    const seen = new Set<string>();
    fc.assert(
      fc.property(fc.jsonValue(), (json) => {
        const result = outcome(() => readBrief(json, KNOWLEDGE));
        seen.add(result);
        expect(result).not.toBe("broken");
      }),
      { seed: SEED, numRuns: 500 },
    );
    expect(seen).toContain("faults");
  });
  it("does so when any one place of a good brief holds anything else", () => {
    const seen = new Set<string>();
    const stranger = fc.oneof(
      fc.jsonValue({ maxDepth: 1 }),
      fc.string({ unit: "grapheme" }),
      fc.double(),
      fc.constant(undefined),
    );
    fc.assert(
      fc.property(fc.constantFrom(...places(GOOD_BRIEF)), stranger, (path, by) => {
        const result = outcome(() => readBrief(replaced(GOOD_BRIEF, path, by), KNOWLEDGE));
        seen.add(result);
        expect(result).not.toBe("broken");
      }),
      { seed: SEED, numRuns: 2000 },
    );
    expect(seen).toEqual(new Set(["read", "faults"]));
  });
});

describe("parseBriefText on anything at all", () => {
  it("accepts what JSON accepts, and gives one place where it does not", () => {
    const text = JSON.stringify(GOOD_BRIEF);
    fc.assert(
      fc.property(fc.nat(text.length), fc.nat(3), fc.string({ maxLength: 2 }), (at, cut, insert) => {
        const damaged = text.slice(0, at) + insert + text.slice(at + cut);
        const result = outcome(() => parseBriefText(damaged));
        const isJson = outcome(() => {
          try {
            JSON.parse(damaged);
          } catch {
            throw new InputError([{ path: "$", expected: "JSON", found: "none" }]);
          }
        });
        // Two fields of one name are JSON, and yet a fault.
        expect(isJson === "read" ? ["read", "faults"] : ["faults"]).toContain(result);
      }),
      { seed: SEED, numRuns: 3000 },
    );
  });
});
