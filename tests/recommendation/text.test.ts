import { describe, expect, it } from "vitest";
import type { Recommendation, RecommendedMethod, StageDocument } from "../../src/recommendation/contract.ts";
import { PREPARATION_STEPS } from "../../src/recommendation/contract.ts";
import { recommendationText } from "../../src/recommendation/text.ts";
import { stepsOf } from "../../src/recommendation/text-steps.ts";
import { figures, listed, percent, reagentWords, signedPercent } from "../../src/recommendation/text-words.ts";
import { DOCUMENT, METHOD, STAGE } from "./example-document.ts";

const withStages = (...stages: readonly StageDocument[]): RecommendedMethod => ({ ...METHOD, stages });
const steps = (method: RecommendedMethod): readonly string[] => stepsOf(method, DOCUMENT.brief);
const textWith = (change: Partial<Recommendation>): string => recommendationText({ ...DOCUMENT, ...change });
const position = (list: readonly string[], words: string): number => list.findIndex((step) => step.includes(words));

describe("recommendationText", () => {
  const text = recommendationText(DOCUMENT);
  it("says the verdict with both figures before anything else", () => {
    expect(text.split("\n").slice(0, 4)).toEqual([
      DOCUMENT.brief.title,
      "=".repeat(DOCUMENT.brief.title.length),
      "",
      "FIT: 0.31 % is predicted, 0.5 % is required (relative expanded uncertainty, k = 2).",
    ]);
  });
  it("tells the parts in the order in which a chemist needs them", () => {
    const order = [
      "FIT",
      "Method",
      "Cautions",
      "At the bench",
      "Steps",
      "Error of one",
      "Masking",
      "Why",
      "What the components",
      "Rivals",
      "Rejected",
      "Notes",
      "Knowledge",
    ];
    const places = order.map((title) => text.indexOf(title));
    expect(places).toEqual([...places].sort((a, b) => a - b));
    expect(places).not.toContain(-1);
  });
  it("says every statement, caution and source of the document", () => {
    const flat = text.replace(/\s+/g, " ");
    const { because, cautions, summary } = METHOD;
    const said = [
      summary,
      ...cautions,
      ...because.map((b) => b.statement),
      ...DOCUMENT.findings.map((f) => f.statement),
    ];
    for (const words of [...said, ...DOCUMENT.notes, DOCUMENT.decidedBy?.statement ?? "", DOCUMENT.knowledge.hash])
      expect(flat).toContain(words);
  });
  it("keeps its lines within 100 characters and ends with one line break", () => {
    expect(Math.max(...text.split("\n").map((line) => line.length))).toBeLessThanOrEqual(100);
    expect(text).toMatch(/[^\n]\n$/);
  });
  it("says plainly that nothing was found, and what the nearest lacks", () => {
    expect(textWith({ verdict: "not-fit", methods: [], decidedBy: null })).toContain("NOT FIT: no method");
    expect(textWith({ verdict: "not-fit" })).toContain(
      "NOT FIT: nothing found meets the requirement of 0.5 % (k = 2). The nearest is shown: 0.31 %.",
    );
  });
  it("names the reservations beside the verdict", () => {
    const methods = [{ ...METHOD, reservations: ["The end point rests on an empirical record."] }];
    expect(textWith({ verdict: "fit-with-reservations", methods })).toMatch(
      /FIT, WITH RESERVATIONS: .*\n {2}- The end point rests/s,
    );
  });
  it("tells weighed reasons under Why, cautions under To mind, and neither hazards nor reservations twice", () => {
    const spoken = (rule: string, statement: string) =>
      ({ ...METHOD.because[0]!, rule, effect: "cautions", statement }) as const;
    const because = [
      ...METHOD.because,
      spoken("indicator/fades", "The dye fades."),
      spoken("safety/acid", "Mind the acid."),
      spoken("masking/record", "The mask is reported only."),
    ];
    const text = textWith({ methods: [{ ...METHOD, because, reservations: ["The mask is reported only."] }] });
    const mind = text.slice(text.indexOf("To mind"), text.indexOf("Error of one"));
    expect(mind).toContain("The dye fades.");
    expect(text).not.toContain("Mind the acid.");
    expect(text.match(/The mask is reported only/g)).toHaveLength(1);
    expect(text.slice(text.indexOf("\nWhy"))).not.toContain("The dye fades.");
  });
  const cause = (source: string, percent: number, uncancelledPercent = percent) =>
    ({ source, percent, uncancelledPercent, kind: "interferent", by: null, titration: null }) as const;
  it("leaves out parts of bias and uncertainty that change no figure, and limits that are far away", () => {
    const predicted = {
      ...METHOD.predicted,
      biasBySource: [cause("Na+", 0.0002), cause("Cd2+", 0.02)],
    };
    const tolerance = [
      { component: "Na+", limitMolPerL: 0.5, presentMolPerL: 0.001, withMasking: true, endsBy: "requirement" } as const,
    ];
    const flat = textWith({ methods: [{ ...METHOD, predicted, tolerance }] }).replace(/\s+/g, " ");
    expect(flat).toContain("Bias +0.04 % (-0.02 % before the standardisation takes its part back): Cd2+ +0.02 %.");
    expect(flat).toContain("Na+: 1 mmol/L is there, more than a hundred times as much is borne");
  });
  it("says a rejected reason once, and what told most between the first two", () => {
    const text = textWith({ rejected: [...DOCUMENT.rejected, ...DOCUMENT.rejected] });
    expect(text.match(/Aluminium blocks mordant black 11/g)).toHaveLength(1);
    expect(text).toContain("  - 3 against 0: A direct titration has the fewest steps.");
  });
  it("says where ionic strength leaves the model", () => {
    const stage = { ...STAGE, ionicStrength: { molPerL: 0.8, outOfModelRange: true } };
    expect(textWith({ methods: [withStages(stage)] })).toContain("0.8 mol/L, beyond the range of the model");
  });
});

describe("stepsOf", () => {
  it("adds fluoride, cyanide and sulfide only when the buffer has set the pH, other agents before", () => {
    for (const agent of ["fluoride", "cyanide", "sulfide"]) {
      const masking = [
        { ...STAGE.masking[0]!, agent },
        { ...STAGE.masking[0]!, agent: "triethanolamine" },
      ];
      const list = steps(withStages({ ...STAGE, masking }));
      const buffer = position(list, "Bring to pH");
      expect(position(list, `add ${agent}`)).toBeGreaterThan(buffer);
      expect(position(list, "Add triethanolamine")).toBeLessThan(buffer);
    }
  });
  it("adds an excess of titrant before the buffer where that is asked for, and after it otherwise", () => {
    const added = [{ id: "EDTA", molPerL: 0.003, purpose: "titrant, in excess" }];
    const early = steps(withStages({ ...STAGE, added, preparation: ["excess-titrant-first", "boil"] }));
    expect(position(early, "Add EDTA")).toBeLessThan(position(early, "Bring to pH"));
    expect(position(early, "Boil")).toBeGreaterThan(position(early, "Bring to pH"));
    const late = steps(withStages({ ...STAGE, added }));
    expect(position(late, "Add EDTA")).toBeGreaterThan(position(late, "Bring to pH"));
  });
  it("lets hexamine wait until what was boiled is cool, and looks at ammonia again", () => {
    const heated = { ...STAGE, preparation: ["boil", "cool"] } as const;
    const list = steps(withStages(heated));
    const order = ["Bring near pH 5", "Boil", "Cool", "with hexamine", "Add xylenol orange"];
    expect(order.map((words) => position(list, words))).toEqual(
      [...order.map((words) => position(list, words))].sort((a, b) => a - b),
    );
    expect(position(list, "with hexamine")).toBeGreaterThan(position(list, "Cool"));
    const ammonia = steps(withStages({ ...heated, buffer: { id: "ammonia", molPerL: 0.1 } }));
    expect(position(ammonia, "with ammonia")).toBeLessThan(position(ammonia, "Boil"));
    expect(position(ammonia, "Check the pH again")).toBeGreaterThan(position(ammonia, "Cool"));
  });
  it("measures an excess in mL: exactly for a back titration, roughly and stronger before a release", () => {
    // 0.003 mol/L in 100 mL is 0.3 mmol: 30 mL of 0.01 mol/L.
    const added = [{ id: "EDTA", molPerL: 0.003, purpose: "titrant in excess" }];
    const vessel = { ...STAGE.vessel, excessTitrantMolPerL: 0.003 };
    const back = steps({ ...withStages({ ...STAGE, mode: "back", added, vessel }) });
    expect(back).toContain("Add 30 mL of 0.01 mol/L EDTA, measured exactly: titrant in excess (0.003 mol/L).");
    const much = {
      ...STAGE,
      mode: "displacement",
      added: [{ ...added[0]!, molPerL: 0.02 }],
      vessel: { ...vessel, release: { agent: "fluoride", molPerL: 0.1 } },
    } as const;
    expect(steps(withStages(much)).join(" ")).toContain("Add about 40 mL of 0.05 mol/L EDTA");
  });
  it("says what an agent takes in mmol and g, and pours nothing that is in the vessel already", () => {
    const amounts = [{ id: "fluoride", mmol: 10, grams: 0.37, bottle: "ammonium fluoride" }];
    const first = { ...STAGE, amounts };
    expect(steps(withStages(first)).join(" ")).toContain(
      "add fluoride to 0.1 mol/L (10 mmol, 0.37 g of ammonium fluoride)",
    );
    const thinned = { ...first, masking: [{ ...STAGE.masking[0]!, molPerL: 0.083 }] };
    const turns = (mode: "successive" | "portions"): number =>
      steps({ ...withStages(first, thinned), mode }).filter((step) => step.includes("fluoride")).length;
    expect([turns("successive"), turns("portions")]).toEqual([1, 2]);
  });
  it("titrates back with the back titrant", () => {
    const back = { ...withStages({ ...STAGE, mode: "back" }), backTitrant: { id: "Zn2+", molPerL: 0.01 } };
    expect(steps(back).at(-1)).toMatch(
      /^Titrate back with 0\.01 mol\/L Zn2\+ until the colour has changed from red-violet to yellow/,
    );
  });
  it("titrates a direct stage with the titrant, whatever another stage is titrated back with", () => {
    const mixed: RecommendedMethod = {
      ...withStages(STAGE, { ...STAGE, mode: "back" }),
      mode: "successive",
      backTitrant: { id: "Cu2+", molPerL: 0.01 },
    };
    const endings = steps(mixed).filter((step) => step.startsWith("Titrate"));
    expect(endings).toEqual([
      expect.stringMatching(/^Titrate with 0\.01 mol\/L EDTA/),
      expect.stringMatching(/^Titrate back with 0\.01 mol\/L Cu2\+/),
    ]);
    const text = textWith({ methods: [mixed] });
    expect(text.match(/Back titrant/g)).toHaveLength(1);
  });
  it("titrates what a release sets free, which is no back titration", () => {
    const release = { ...withStages({ ...STAGE, mode: "displacement" }), backTitrant: { id: "Zn2+", molPerL: 0.01 } };
    expect(steps(release).at(-1)).toMatch(/^Titrate with 0\.01 mol\/L Zn2\+/);
  });
  it("looks at pH and dye again where a titration of the same vessel goes on alike, and makes them anew in another portion", () => {
    const pair = withStages(STAGE, STAGE);
    const going = steps({ ...pair, mode: "successive" });
    expect(position(going, "Check that the pH is still 5.5")).toBeGreaterThan(position(going, "Go on with the same"));
    expect(going.filter((step) => step.startsWith("Add xylenol orange"))).toHaveLength(1);
    const apart = steps({ ...pair, mode: "portions" });
    expect(apart.filter((step) => step.startsWith("Bring to pH 5.5"))).toHaveLength(2);
    expect(apart.filter((step) => step.startsWith("Add xylenol orange"))).toHaveLength(2);
  });
  it("discards a reading that determines nothing, goes on with one solution, and takes a second portion", () => {
    const twice = [{ ...STAGE, determines: [] }, STAGE];
    const successive = steps({ ...withStages(...twice), mode: "successive" });
    expect(position(successive, "Discard this reading")).toBeGreaterThan(0);
    expect(position(successive, "Go on with the same solution")).toBeGreaterThan(0);
    expect(position(steps({ ...withStages(...twice), mode: "difference" }), "Take another portion")).toBeGreaterThan(0);
  });
  it("has words for every preparation step, and says each once", () => {
    for (const step of PREPARATION_STEPS) {
      if (step === "excess-titrant-first") continue; // said by adding the titrant early
      const list = steps(withStages({ ...STAGE, preparation: [step] }));
      expect(list, step).toHaveLength(steps(withStages(STAGE)).length + 1);
    }
  });
  it("says what a separation has to take away, under both its names", () => {
    const separation = [
      {
        kind: "precipitation",
        step: "precipitate it",
        takes: "interferents",
        ions: ["Fe3+"],
        source: "s",
        basis: "memory",
      },
    ] as const;
    const vessel = { ...STAGE.vessel, removed: ["Fe3+", "Cu2+"], separation, separationUnknown: ["Cu2+"] };
    const list = (step: "separate" | "precipitate-and-filter") =>
      steps(withStages({ ...STAGE, vessel, preparation: [step] }));
    expect(list("separate")[1]).toBe(
      "Take Fe3+ out (precipitation): precipitate it. Separate Cu2+: no step for it is on record here.",
    );
    expect(list("precipitate-and-filter")[1]).toBe("Let Fe3+ and Cu2+ precipitate, and filter it off.");
  });
  it("reads an electrode instead of a colour where there is no indicator", () => {
    const list = steps(withStages({ ...STAGE, detection: "electrode", indicator: null }));
    expect(list.at(-1)).toContain("the end is where the potential changes fastest");
  });
});

describe("words and figures", () => {
  it.each([
    [0, "0"],
    [0.0123456, "0.0123"],
    [2e-5, "2e-5"],
    [1.236e-7, "1.24e-7"],
    [20.1, "20.1"],
    [123456, "1.23e+5"],
    [-0.0456, "-0.0456"],
  ])("writes %d as %s", (value, text) => {
    expect(figures(value)).toBe(text);
  });
  it("signs a bias and never an uncertainty", () => {
    expect([signedPercent(0.04), signedPercent(-0.04), signedPercent(0), percent(0.306), percent(12.34)]).toEqual([
      "+0.04 %",
      "-0.04 %",
      "0 %",
      "0.31 %",
      "12.3 %",
    ]);
  });
  it("joins words as a sentence does", () => {
    expect([listed([]), listed(["a"]), listed(["a", "b"]), listed(["a", "b", "c"])]).toEqual([
      "",
      "a",
      "a and b",
      "a, b and c",
    ]);
  });
  it("leaves ions and chelates as they are written", () => {
    expect(["xylenol-orange", "Mg-EDTA", "Zn2+", "PAN"].map(reagentWords)).toEqual([
      "xylenol orange",
      "Mg-EDTA",
      "Zn2+",
      "PAN",
    ]);
  });
});
