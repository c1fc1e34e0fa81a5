import { describe, expect, it } from "vitest";
import type { RecommendedMethod, StageDocument } from "../../src/recommendation/contract.ts";
import { DOCUMENT, METHOD, STAGE } from "../recommendation/example-document.ts";
import type { AcceptedMethod, AcceptedStage, PracticeCase, WrongMethod } from "./cases.ts";
import { breach, difference, judge, wrongBy } from "./judge.ts";
import { lastLine, tallies, tallyLine } from "./tally.ts";

const WANTED_STAGE: AcceptedStage = {
  determines: ["Zn2+"],
  titrants: [],
  pH: [5, 6],
  indicators: ["xylenol-orange"],
  detections: [],
  buffers: [],
  masking: {},
  preparation: [],
  anyOf: [],
};
const WANTED: AcceptedMethod = { modes: ["direct"], titrants: ["EDTA"], backTitrants: [], stages: [WANTED_STAGE] };
const CASE: PracticeCase = {
  id: "zinc",
  topic: "metals",
  difficulty: "interference",
  sources: [{ citation: "an invented source", basis: "memory" }],
  brief: { title: "t" },
  accepts: [WANTED],
  rejects: [],
  flags: [],
  notFlags: [],
  verdicts: ["fit"],
  notes: "",
};
const NOT_MEANT: WrongMethod = {
  modes: [],
  titrants: [],
  backTitrants: [],
  indicators: [],
  unmasked: [],
  without: [],
  why: "wrong",
};
const stage = (change: Partial<StageDocument>): StageDocument => ({ ...STAGE, ...change });
const method = (...stages: readonly StageDocument[]): RecommendedMethod => ({ ...METHOD, stages });
const wantedStage = (change: Partial<AcceptedStage>): AcceptedMethod => ({
  ...WANTED,
  stages: [{ ...WANTED_STAGE, ...change }],
});

describe("difference", () => {
  it("is none for the method that is wanted", () => {
    expect(difference(METHOD, WANTED)).toBeNull();
  });
  it.each([
    ["mode", { ...WANTED, modes: ["back"] }],
    ["titrant", { ...WANTED, titrants: ["CDTA"] }],
    ["back titrant", { ...WANTED, backTitrants: ["Zn2+"] }],
    ["number of stages", { ...WANTED, stages: [WANTED_STAGE, WANTED_STAGE] }],
    ["determines", wantedStage({ determines: ["Pb2+"] })],
    ["titrant", wantedStage({ titrants: ["EGTA"] })],
    ["pH", wantedStage({ pH: [5.6, 6] })],
    ["indicator", wantedStage({ indicators: ["PAN"] })],
    ["detection", wantedStage({ indicators: [] })],
    ["detection", wantedStage({ detections: ["photometric"] })],
    ["buffer", wantedStage({ buffers: ["acetate"] })],
    ["masking Al3+", wantedStage({ masking: { "Al3+": ["none"] } })],
    ["masking Fe3+", wantedStage({ masking: { "Fe3+": ["fluoride"] } })],
    ["preparation warm", wantedStage({ preparation: ["warm"] })],
    ["auxiliary tartrate/citrate", wantedStage({ anyOf: [["tartrate", "citrate"]] })],
  ] as const)("names %s", (what, wanted) => {
    expect(difference(METHOD, wanted as unknown as AcceptedMethod)).toBe(what);
  });
  it.each([
    ["masking by one of the accepted agents", wantedStage({ masking: { "Al3+": ["acetylacetone", "fluoride"] } })],
    ["an ion that may stay unmasked", wantedStage({ masking: { "Fe3+": ["none"] } })],
    ["a detection that is asked for", wantedStage({ detections: ["visual"] })],
    ["an agent that serves as mask", wantedStage({ anyOf: [["fluoride"]] })],
  ])("is none for %s", (_what, wanted) => {
    expect(difference(METHOD, wanted)).toBeNull();
  });
  it("takes a separation for a mask where separation is accepted, under both its names", () => {
    const wanted = wantedStage({ masking: { "Al3+": ["separate"] }, preparation: ["separate"] });
    expect(difference(method(stage({ masking: [], preparation: ["precipitate-and-filter"] })), wanted)).toBeNull();
    expect(difference(method(stage({ masking: [] })), wanted)).toBe("masking Al3+");
  });
  it("counts no discarded reading as a titration", () => {
    expect(difference(method(stage({ determines: [] }), STAGE), WANTED)).toBeNull();
  });
  it("keeps the order of a successive titration, and of no other mode", () => {
    const lead = stage({ determines: ["Pb2+"] });
    const wanted = (mode: "successive" | "portions"): AcceptedMethod => ({
      ...WANTED,
      modes: [mode],
      stages: [WANTED_STAGE, { ...WANTED_STAGE, determines: ["Pb2+"] }],
    });
    const reversed = (mode: "successive" | "portions"): RecommendedMethod => ({ ...method(lead, STAGE), mode });
    expect(difference(reversed("portions"), wanted("portions"))).toBeNull();
    expect(difference(reversed("successive"), wanted("successive"))).not.toBeNull();
  });
  it("reads SO42- and SO4^2- as one ion, but not VO2^+ and VO2+", () => {
    const of = (determines: string[], wanted: string[]) =>
      difference(method(stage({ determines })), wantedStage({ determines: wanted }));
    expect(of(["SO42-"], ["SO4^2-"])).toBeNull();
    expect(of(["VO2^+"], ["VO2+"])).toBe("determines");
  });
});

describe("breach", () => {
  const inLaboratory = (laboratory: object): PracticeCase => ({ ...CASE, brief: { title: "t", laboratory } });
  it.each([
    ["an avoided agent", { avoid: ["fluoride"] }, STAGE, "uses fluoride, to be avoided"],
    [
      "an unavailable buffer",
      { available: ["EDTA", "xylenol-orange", "fluoride"] },
      STAGE,
      "uses hexamine, not available",
    ],
    [
      "heat where there is none",
      { heating: false },
      stage({ preparation: ["boil"] }),
      "heats where nothing may be heated",
    ],
    ["a detection not offered", { detection: ["electrode"] }, STAGE, "detection visual not offered"],
    [
      "cyanide in acid",
      {},
      stage({ auxiliary: [{ id: "cyanide", molPerL: 0.1, purpose: "x" }] }),
      "cyanide or sulfide below pH 9",
    ],
  ])("is named for %s", (_what, laboratory, of, why) => {
    expect(breach(method(of), inLaboratory(laboratory))).toBe(why);
  });
  it("is none where the brief is kept", () => {
    const available = ["EDTA", "xylenol-orange", "fluoride", "hexamine"];
    expect(breach(METHOD, inLaboratory({ avoid: ["cyanide"], available, heating: false }))).toBeNull();
  });
});

describe("wrongBy", () => {
  it.each([
    ["its mode", { modes: ["direct"] }, { modes: ["back"] }],
    ["its indicator", { indicators: ["xylenol-orange"] }, { indicators: ["PAN"] }],
    ["its pH", { pH: [5, 6] }, { pH: [9, 10] }],
    ["an ion left unmasked", { unmasked: ["Fe3+"] }, { unmasked: ["Al3+"] }],
    ["a step left out", { without: ["warm"] }, { titrants: ["CDTA"], without: ["warm"] }],
  ] as const)("forbids a method by %s, and only then", (_what, hits, misses) => {
    const by = (pattern: object) => wrongBy(METHOD, { ...CASE, rejects: [{ ...NOT_MEANT, ...pattern }] })?.why;
    expect(by(hits)).toBe("wrong");
    expect(by(misses)).toBeUndefined();
  });
  it("spares a method that does the step, or that separates what it leaves unmasked", () => {
    const careful = method(stage({ preparation: ["warm", "separate"] }));
    const by = (pattern: object) => wrongBy(careful, { ...CASE, rejects: [{ ...NOT_MEANT, ...pattern }] });
    expect(by({ without: ["warm"] })).toBeUndefined();
    expect(by({ unmasked: ["Fe3+"] })).toBeUndefined();
  });
});

describe("judge", () => {
  it("finds nothing to say against an accepted first method", () => {
    expect(judge(DOCUMENT, CASE)).toMatchObject({ first: true, three: true, forbidden: null, verdict: true });
  });
  it("sees an accepted method in second place", () => {
    const wanted = { ...CASE, accepts: [{ ...WANTED, modes: ["back" as const] }] };
    expect(judge(DOCUMENT, wanted)).toMatchObject({ first: false, three: true, differences: ["mode"] });
  });
  it("takes an honest no for an answer where the case allows one, whatever stands first", () => {
    const impossible = { ...CASE, accepts: [], verdicts: ["not-fit" as const] };
    expect(judge({ ...DOCUMENT, verdict: "not-fit" }, impossible)).toMatchObject({ first: true, verdict: true });
    expect(judge(DOCUMENT, impossible)).toMatchObject({ first: false, verdict: false });
  });
  it("counts flags that are missing and flags that are false alarms", () => {
    const flag = (component: string) => ({ component, as: "blocks-indicator" as const });
    expect(judge(DOCUMENT, { ...CASE, flags: [flag("Al3+"), flag("Fe3+")], notFlags: [flag("Al3+")] })).toMatchObject({
      notFlagged: ["Fe3+ blocks-indicator"],
      falseAlarms: ["Al3+ blocks-indicator"],
    });
  });
});

describe("tallies", () => {
  it("count over all cases and over each difficulty, an unanswered case included", () => {
    const outcomes = [
      { testCase: CASE, judgement: judge(DOCUMENT, CASE) },
      { testCase: { ...CASE, difficulty: "plain" as const }, judgement: null },
    ];
    const all = tallies(outcomes).get("all");
    expect(tallies(outcomes).get("plain")).toMatchObject({ cases: 1, answered: 0, first: 0 });
    expect(all).toMatchObject({ cases: 2, answered: 1, first: 1, three: 1, forbidden: 0, verdict: 1 });
    expect(all && lastLine(all)).toBe("practice: first 50.0 %, among three 50.0 %, forbidden first 0 of 2");
    expect(all && tallyLine("all", all)).toContain("flags -");
  });
});
