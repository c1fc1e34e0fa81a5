import { describe, expect, it } from "vitest";
import type { Knowledge } from "../../src/constants/knowledge.ts";
import { LEFT_BEHIND } from "../../src/methods/detour-account.ts";
import { detourSkeletons } from "../../src/methods/detours.ts";
import { bareStage } from "../../src/methods/develop.ts";
import { evaluateStage, type StageEvaluation } from "../../src/methods/evaluate-stage.ts";
import { searchMethods } from "../../src/methods/search.ts";
import { shelfOf } from "../../src/methods/shelf.ts";
import { wayRound } from "../../src/methods/way-round.ts";
import { countedIn, type Task } from "../../src/methods/types.ts";
import { expectRelative } from "../expect-relative.ts";
import { inventedTask, KNOWLEDGE } from "./invented.ts";

/** The first way round of this record with this dye, evaluated without its blank. */
function evaluated(task: Task, id: string, dye: string, knowledge: Knowledge = KNOWLEDGE): StageEvaluation {
  const analyte = task.analytes[0]!.component;
  const skeleton = detourSkeletons(task, [analyte], knowledge, shelfOf(task, knowledge, true)).find(
    (s) => s.plan.detour?.id === id && s.plan.indicator?.id === dye,
  );
  if (!skeleton) throw new Error(`no ${id} with ${dye}`);
  return withBlankUndone(bareStage(task, skeleton, knowledge, shelfOf(task, knowledge, true)).bare);
}
/** The evaluation before the blank of its metal was taken off. */
const withBlankUndone = (e: StageEvaluation): StageEvaluation => ({
  ...e,
  biasFraction: e.uncancelledBiasFraction,
  ledger: e.ledger.filter((l) => l.source !== "standardised alike"),
});
const line = (e: StageEvaluation, source: string): number =>
  e.ledger.filter((l) => l.source.startsWith(source)).reduce((sum, l) => sum + l.fraction, 0);
const SEARCH_LINES = 1e-6; // lines below 1e-7 are left out

/** log10 activity coefficient of charge z at 25 C by the Davies equation. */
const davies = (z: number, I: number): number => -0.509 * z ** 2 * (Math.sqrt(I) / (1 + Math.sqrt(I)) - 0.3 * I);

describe("the stoichiometry of ways round", () => {
  // Titres by hand: 25 mL of the sample; mmol over the ratio over the strength.
  it("binds 4 cyanide a nickel: 0.19 mmol Ni less 0.5/4 mmol is 13.0 mL of 0.005 mol/L EDTA", () => {
    const e = evaluated(inventedTask({ cyanide: 0.02 }, { "Na+": 0.03 }), "cyanide-nickel-surplus", "murexide");
    expect(e.model.plan.detour?.reagent.molPerL).toBe(0.0019);
    expectRelative(e.endPointML, 13.0, 0.006);
  });

  it.each([
    ["Ag+", "silver-nickel-cyanide-exchange", 12.5],
    ["chloride", "chloride-silver-nickel-cyanide-exchange", 12.5],
    ["bromide", "bromide-silver-nickel-cyanide-exchange", 12.5],
    ["thiocyanate", "thiocyanate-silver-nickel-cyanide-exchange", 12.5],
  ])("counts 2 %s a nickel: 0.25 mmol are 12.5 mL of 0.01 mol/L EDTA", (analyte, id, byHand) => {
    const e = evaluated(inventedTask({ [analyte]: 0.01 }), id, "murexide");
    expect(e.model.plan.titrant.molPerL).toBe(0.01);
    expectRelative(e.endPointML, byHand, 0.006);
  });

  it("counts 1 palladium a nickel: 0.125 mmol are 12.5 mL of 0.01 mol/L EDTA", () => {
    const e = evaluated(inventedTask({ "Pd2+": 0.005 }), "palladium-tetracyanonickelate", "murexide");
    expectRelative(e.endPointML, 12.5, 0.006);
  });

  it("counts 4 EDTA a potassium: 0.05 mmol less what stays dissolved are 20 mL of 0.01 mol/L zinc", () => {
    const e = evaluated(inventedTask({ "K+": 0.002 }), "potassium-tetraphenylborate-mercury", "mordant-black-11");
    expectRelative(e.endPointML, 20 * (1 + line(e, LEFT_BEHIND)), 0.003);
  });

  it("finds phosphate from the magnesium of its precipitate: what EDTA and back titre leave is 1 to 1", () => {
    const e = evaluated(inventedTask({ phosphate: 0.005 }), "phosphate-magnesium-ammonium", "mordant-black-11");
    const { plan, volumeL } = e.model;
    const foundMol = plan.excessTitrantMolPerL * volumeL - (plan.backTitrant!.molPerL * e.endPointML) / 1000;
    expectRelative(foundMol, 0.125e-3, 0.005);
  });
});

describe("the loss of ways round", () => {
  it("of barium sulfate agrees with a hand calculation from pKsp 8.81, at 0.1 mol/L sodium chloride", () => {
    // pKsp 8.81 at 0.1 mol/L and 25 C: SRD 46 record 175693; pKa(HSO4) 1.99 at zero ionic strength: CRC Handbook (recalled), Davies.
    const e = evaluated(
      inventedTask({ sulfate: 0.004 }, { "Na+": 0.4, chloride: 0.4 }),
      "sulfate-barium-surplus",
      "phthalein-purple",
    );
    const hydrogen = 10 ** (-2.5 - davies(1, 0.1));
    const pKa = 1.99 + davies(2, 0.1); // the coefficients of H and HSO4 cancel
    const dissolved = (10 ** -8.81 / 0.5e-3) * (1 + hydrogen * 10 ** pKa);
    expectRelative(-line(e, LEFT_BEHIND), dissolved / 1e-3, 0.1);
  });

  it("of potassium tetraphenylborate agrees with pKsp 7.65 in the volume of precipitation", () => {
    const way = wayRound(
      {
        id: "potassium-tetraphenylborate-mercury",
        metal: "Zn2+",
        analytePerMetal: 0.25,
        reagent: { id: "sodium-tetraphenylborate", molPerL: 2.5e-3 },
        precipitant: null,
      },
      new Map([["K+", 0.5e-3]]),
      { temperatureC: 25, volumeRatio: 0.5 },
      KNOWLEDGE,
    );
    // 1 mmol/L K with 5 mmol/L reagent in half the volume: 4 mmol/L left over, I about 0.005.
    const dissolved = 10 ** (-7.65 - 2 * davies(1, 0.005)) / 4e-3;
    expectRelative(1e-3 - way.collected[0]!.molPerL / 0.5, dissolved, 0.05);
  });

  it("grows when less of the reagent is there", () => {
    const loss = (molPerL: number): number => {
      const task = inventedTask({ sulfate: 0.004 });
      const plan = detourSkeletons(task, ["sulfate"], KNOWLEDGE, shelfOf(task, KNOWLEDGE, false)).find(
        (s) => s.plan.indicator?.id === "phthalein-purple" && s.plan.backTitrant === null,
      )!.plan;
      const detour = { ...plan.detour!, reagent: { id: "Ba2+", molPerL } };
      return -line(evaluateStage(task, { ...plan, detour }, KNOWLEDGE), LEFT_BEHIND);
    };
    expect(loss(1.2e-3)).toBeGreaterThan(1.5 * loss(2e-3));
  });
});

describe("the account of ways round", () => {
  const tasks: [string, Task, string, string][] = [
    [
      "sulfate",
      inventedTask({ sulfate: 0.004 }, { "Ca2+": 4e-5, "Mg2+": 4e-5 }),
      "sulfate-barium-surplus",
      "phthalein-purple",
    ],
    [
      "chloride",
      inventedTask({ chloride: 0.01 }, { bromide: 5e-4 }),
      "chloride-silver-nickel-cyanide-exchange",
      "murexide",
    ],
    ["cyanide", inventedTask({ cyanide: 0.02 }, { "Ca2+": 1e-3 }), "cyanide-nickel-surplus", "murexide"],
    [
      "phosphate",
      inventedTask({ phosphate: 0.005 }, { sulfate: 0.01 }),
      "phosphate-magnesium-ammonium",
      "mordant-black-11",
    ],
  ];
  it.each(tasks)("of %s adds up to its bias", (_name, task, id, dye) => {
    const e = evaluated(task, id, dye);
    expect(e.status).toBe("converged");
    const sum = e.ledger.reduce((s, l) => s + l.fraction, 0);
    expect(Math.abs(sum - e.biasFraction)).toBeLessThan(SEARCH_LINES);
  });

  it("takes calcium of the sample from the sulfate, one for one: 1 % of it is 1 % low", () => {
    const e = evaluated(
      inventedTask({ sulfate: 0.004 }, { "Ca2+": 4e-5 }),
      "sulfate-barium-surplus",
      "phthalein-purple",
    );
    expectRelative(line(e, "Ca2+"), -0.01, 0.01);
  });

  it("counts bromide as chloride, one for one", () => {
    const e = evaluated(
      inventedTask({ chloride: 0.01 }, { bromide: 5e-4 }),
      "chloride-silver-nickel-cyanide-exchange",
      "murexide",
    );
    expectRelative(line(e, "also precipitated"), 0.05, 0.01);
  });

  it("loses nothing to carbonate that was driven off, and does where it was not", () => {
    const task = inventedTask({ sulfate: 0.004 }, { carbonate: 0.004 });
    const plan = detourSkeletons(task, ["sulfate"], KNOWLEDGE, shelfOf(task, KNOWLEDGE, false)).find(
      (s) => s.plan.indicator?.id === "phthalein-purple" && s.plan.backTitrant === null,
    )!.plan;
    expect(plan.preparation).toContain("remove-carbonate");
    const without = evaluateStage(task, plan, KNOWLEDGE);
    expect(without.model.held.some((h) => h.component === "carbonate" && h.by === "remove-carbonate")).toBe(true);
    const kept = { ...plan, preparation: plan.preparation.filter((p) => p !== "remove-carbonate") };
    expect(evaluateStage(task, kept, KNOWLEDGE).model.held.some((h) => h.by === "remove-carbonate")).toBe(false);
  });
});

describe("detourSkeletons", () => {
  const ids = (task: Task, special = true): Set<string | undefined> =>
    new Set(
      detourSkeletons(task, [task.analytes[0]!.component], KNOWLEDGE, shelfOf(task, KNOWLEDGE, special)).map(
        (s) => s.plan.detour?.id,
      ),
    );
  const laboratory = inventedTask({}).laboratory;

  it("takes a further record as it stands: a new way round is a change of data only", () => {
    const record = KNOWLEDGE.detours.get("sulfate-barium-surplus")!;
    const knowledge = { ...KNOWLEDGE, detours: new Map([["another", { ...record, id: "another" }]]) };
    const e = evaluated(inventedTask({ sulfate: 0.004 }), "another", "phthalein-purple", knowledge);
    expect(e.status).toBe("converged");
  });

  it("uses no special reagent before the special shelf is open", () => {
    expect(ids(inventedTask({ "Ag+": 0.01 }), false).size).toBe(0);
    expect(ids(inventedTask({ "Ag+": 0.01 })).size).toBe(1);
  });

  it("takes nothing that the laboratory avoids, a cyanide complex where it avoids cyanide", () => {
    expect(ids(inventedTask({ sulfate: 0.004 }, {}, { laboratory: { ...laboratory, avoid: ["Ba2+"] } }))).toEqual(
      new Set(["sulfate-lead-precipitate"]),
    );
    expect(ids(inventedTask({ chloride: 0.01 }, {}, { laboratory: { ...laboratory, avoid: ["cyanide"] } })).size).toBe(
      0,
    );
  });

  it("needs the metal of the way in a list of what is available", () => {
    const available = ["EDTA", "murexide", "ammonia", "Ni2+"];
    const task = inventedTask({ cyanide: 0.02 }, {}, { laboratory: { ...laboratory, available } });
    expect(ids(task)).toEqual(new Set(["cyanide-nickel-surplus"]));
    const none = { ...laboratory, available: available.slice(0, 3) };
    expect(ids(inventedTask({ cyanide: 0.02 }, {}, { laboratory: none })).size).toBe(0);
  });

  it("counts the metal of the way, in the pH of its record", () => {
    for (const record of KNOWLEDGE.detours.values()) {
      const task = inventedTask({ [record.analyte]: 0.005 });
      const made = detourSkeletons(task, [record.analyte], KNOWLEDGE, shelfOf(task, KNOWLEDGE, true)).filter(
        (s) => s.plan.detour?.id === record.id,
      );
      expect(made.length, record.id).toBeGreaterThan(0);
      for (const { plan } of made) {
        expect(countedIn(plan)).toEqual([record.metal]);
        expect(plan.determines).toEqual([record.analyte]);
        expect(plan.pH).toBeGreaterThanOrEqual(record.finish.pH[0]);
        expect(plan.pH).toBeLessThanOrEqual(record.finish.pH[1]);
      }
    }
  });
});

describe("searchMethods", () => {
  it("opens the special shelf for silver, which EDTA hardly binds, and not for zinc", () => {
    expect(searchMethods(inventedTask({ "Ag+": 0.01 }), KNOWLEDGE).specialOpened).toBe(true);
    expect(searchMethods(inventedTask({ "Zn2+": 0.01 }), KNOWLEDGE).specialOpened).toBe(false);
  });
});
