import { beforeAll, describe, expect, it } from "vitest";
import { type Engine, openEngine } from "../../src/main.ts";
import type { Recommendation } from "../../src/recommendation/contract.ts";
import { INVENTED_BRIEFS, type LooseBrief } from "./invented-briefs.ts";
import { ownFaults, reagentIdsOf, RELATIONS } from "./metamorphic.ts";

let engine: Engine;
const documents = new Map<LooseBrief, Recommendation>();
beforeAll(async () => {
  engine = await openEngine();
  for (const brief of Object.values(INVENTED_BRIEFS)) documents.set(brief, await engine.recommend(brief));
});

const BRIEFS = Object.entries<LooseBrief>(INVENTED_BRIEFS);

describe.each(RELATIONS)("recommend: $name", ({ faults }) => {
  it.each(BRIEFS)("for %s", async (_name, brief) => {
    const document = documents.get(brief)!;
    expect(document.methods.length).toBeGreaterThan(0);
    expect(await faults(brief, (bent) => engine.recommend(bent), document)).toEqual([]);
  });
});

describe("recommend", () => {
  it("proposes nothing that the laboratory does not have", () => {
    for (const [name, brief] of BRIEFS) {
      const available = [...(brief.laboratory?.available ?? []), ...brief.analytes.map((row) => row.ion)];
      for (const method of documents.get(brief)!.methods)
        for (const id of reagentIdsOf(method)) expect(available, `${name}: ${method.id}`).toContain(id);
    }
  });
  it("boils aluminium with the titrant in excess and titrates back", () => {
    const [first] = documents.get(INVENTED_BRIEFS.aluminium)!.methods;
    expect([first?.mode, first?.backTitrant?.id]).toEqual(["back", "Zn2+"]);
    expect(first?.stages[0]?.preparation).toEqual(["excess-titrant-first", "boil", "cool"]);
  });
  it("titrates bismuth in acid and then lead in the same portion", () => {
    const [first] = documents.get(INVENTED_BRIEFS.bismuthAndLead)!.methods;
    expect(first?.mode).toBe("successive");
    const [bismuth, lead] = first!.stages;
    expect([bismuth?.determines, lead?.determines]).toEqual([["Bi3+"], ["Pb2+"]]);
    expect(bismuth!.pH.target).toBeLessThan(2.5);
    expect(lead!.pH.target).toBeGreaterThan(4.5);
    expect(lead?.vessel.carried?.metals).toEqual(["Bi3+"]);
  });
  it("never proposes cyanide below pH 9.5, nor heats where nothing may be heated", async () => {
    const cold = {
      ...INVENTED_BRIEFS.aluminium,
      laboratory: { ...INVENTED_BRIEFS.aluminium.laboratory, heating: false },
    };
    const unheated = await engine.recommend(cold);
    for (const { stages } of unheated.methods)
      for (const { preparation } of stages)
        expect(preparation.filter((step) => ["warm", "heat", "boil"].includes(step))).toEqual([]);
    const withCyanide = documents
      .get(INVENTED_BRIEFS.magnesium)!
      .methods.flatMap(({ stages }) =>
        stages.filter(({ masking }) => masking.some((step) => step.agent === "cyanide")),
      );
    expect(withCyanide.length).toBeGreaterThan(0);
    for (const { pH } of withCyanide) expect(Math.min(pH.target, pH.low)).toBeGreaterThanOrEqual(9.5);
  });
  it("says that nothing fits where nothing is on the shelf", async () => {
    const bare = { ...INVENTED_BRIEFS.zinc, laboratory: { available: ["hexamine"] } };
    const { verdict, methods, decidedBy } = await engine.recommend(bare);
    expect([verdict, methods, decidedBy]).toEqual(["not-fit", [], null]);
  });
});

describe("ownFaults", () => {
  it("sees causes that do not add up to the bias, and a budget that is not its quantities", () => {
    const document = documents.get(INVENTED_BRIEFS.zinc)!;
    const [first, ...rest] = document.methods;
    const [result] = first!.predicted.perAnalyte;
    const off = { ...result!, biasPercent: result!.biasPercent + 0.01 };
    const wrong = { ...first!, predicted: { ...first!.predicted, perAnalyte: [off] } };
    expect(ownFaults({ ...document, methods: [wrong, ...rest] }).join()).toMatch(/^method 1: causes of Zn2\+/);
    const fewer = { ...first!, budget: { ...first!.budget, rows: first!.budget.rows.slice(1) } };
    expect(ownFaults({ ...document, methods: [fewer, ...rest] }).join()).toMatch(/^method 1: quantities/);
  });
  it("sees a target outside its range, a verdict against the figures and a broken shape", () => {
    const document = documents.get(INVENTED_BRIEFS.zinc)!;
    const [first, ...rest] = document.methods;
    const stage = { ...first!.stages[0]!, pH: { target: 9, low: 5, high: 6, drop: 0 } };
    expect(ownFaults(document)).toEqual([]);
    expect(ownFaults({ ...document, methods: [{ ...first!, stages: [stage] }, ...rest] })).toEqual([
      "method 1: pH 9 outside 5 to 6",
    ]);
    expect(ownFaults({ ...document, verdict: "not-fit" })).toEqual(["verdict not-fit"]);
    expect(ownFaults({ ...document, notes: [""], methods: [{ ...first!, rank: 2 }, ...rest] })).toEqual([
      "schema: notes.0",
      "method 1: rank 2",
    ]);
  });
});
