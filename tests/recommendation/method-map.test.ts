import { beforeAll, describe, expect, test } from "vitest";
import { expectRelative } from "../expect-relative.ts";
import { openEngine, type Engine } from "../../src/main.ts";
import { methodMapSchema, ionMapSchema, type IonMap } from "../../src/recommendation/contract.ts";
import { mapBrief, mapIon, mapIons } from "../../src/recommendation/method-map.ts";
import { neededLog10K } from "../../src/recommendation/needed-constant.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { methodMapText } from "../../src/recommendation/method-map-text.ts";

let engine: Engine;
beforeAll(async () => {
  engine = await openEngine();
});
const workedOut = new Map<string, Promise<IonMap>>();
/** The map of an ion, worked out once for all tests. */
const map = (ion: string): Promise<IonMap> => {
  const known = workedOut.get(ion) ?? mapIon(ion, engine.knowledge, engine.rules);
  workedOut.set(ion, known);
  return known;
};
const mode = (ion: IonMap, name: string) => ion.modes.find((m) => m.mode === name)!;

describe("mapIon", () => {
  // Open and closed as handbooks have it, e.g. Schwarzenbach and Flaschka, Complexometric Titrations (1969): zinc direct;
  // chromium(III) only back, after boiling; the alkali metals not at all by their own complex (from memory).
  test("finds zinc open directly with several titrants, each with values that keep the requirement", async () => {
    const zinc = await map("Zn2+");
    expect(ionMapSchema.safeParse(zinc).error).toBeUndefined();
    const direct = mode(zinc, "direct");
    expect(direct.status).toBe("open");
    expect(direct.reasons).toEqual([]);
    expect(direct.methods.map((m) => m.titrant.id)).toEqual(expect.arrayContaining(["EDTA", "CDTA"]));
    for (const method of zinc.modes.flatMap((m) => m.methods)) {
      expect(method.relativeExpandedUncertaintyPercent).toBeLessThanOrEqual(1);
      expect(method.relativeExpandedUncertaintyPercent).toBeGreaterThanOrEqual(2 * 0.1);
    }
  });

  test("finds chromium(III) too slow for a direct titration and open by back titration after boiling", async () => {
    const chromium = await map("Cr3+");
    expect(mode(chromium, "direct").reasons.map((r) => r.kind)).toEqual(["reacts-slowly"]);
    expect(mode(chromium, "back").status).toMatch(/^open/);
    expect(mode(chromium, "back").methods[0]?.preparation).toContain("boil");
  });

  test("finds sodium too weakly bound, and says by how much", async () => {
    const sodium = await map("Na+");
    expect(sodium.status).not.toMatch(/^open/);
    const weak = mode(sodium, "back").reasons.find((r) => r.kind === "too-weak");
    // log K(NaEDTA) is 1.86 at 0.1 mol/L (Martell and Smith, Critical Stability Constants; from memory).
    expect(weak?.facts["log10ConditionalK"]).toBeGreaterThan(1);
    expect(weak?.facts["log10ConditionalK"]).toBeLessThan(2.5);
  });

  test("closes a mode that rules exclude with their words, each naming its rule", async () => {
    const beryllium = await map("Be2+");
    const back = mode(beryllium, "back");
    expect(back.status).toBe("closed");
    expect(back.methods).toEqual([]);
    const ids = new Set(engine.ruleBase.rules.map((r) => r.id));
    const rules = back.reasons.filter((r) => r.kind === "rule");
    expect(rules.length).toBeGreaterThan(0);
    for (const reason of rules) expect(ids).toContain(reason.rule);
  });

  test("does not call closed what it has no constants for", async () => {
    const { knowledge, rules } = engine;
    const species = knowledge.species.filter(
      (s) => !(s.components["Zn2+"] && [...knowledge.titrants.keys()].some((t) => s.components[t])),
    );
    const zinc = await mapIon("Zn2+", { ...knowledge, species }, rules);
    expect(mode(zinc, "direct")).toMatchObject({ status: "unknown", methods: [], nearest: null });
    expect(mode(zinc, "direct").reasons.map((r) => r.kind)).toEqual(["no-constants"]);
    expect(zinc.status).toBe("unknown");
  });

  test("gives the same map twice", async () => {
    expect(await mapIon("Cr3+", engine.knowledge, engine.rules)).toEqual(await map("Cr3+"));
  });

  test.each(["Zn2+", "Bi3+"])("leads from each method of %s to an answer that holds the method", async (ion) => {
    // Of two published pH values of one kind of method an answer shows the better one with the reagents of its brief.
    const kind = (id: string): string => id.split("|").toSpliced(5, 2).join("|");
    for (const method of (await map(ion)).modes.flatMap((m) => m.methods)) {
      const answer = await engine.recommend(method.brief);
      expect(
        answer.methods.map((m) => kind(m.id)),
        method.id,
      ).toContain(kind(method.id));
    }
  });

  test("agrees with the recommendation for the same question about what comes first", async () => {
    for (const ion of ["Zn2+", "Bi3+"]) {
      const first = (await engine.recommend(mapBrief(ion, engine.knowledge))).methods[0]!;
      const mapped = await map(ion);
      expect(mapped.modes.flatMap((m) => m.methods).map((m) => `${m.titrant.id} ${m.indicator}`)).toContain(
        `${first.titrant.id} ${first.stages[0]?.indicator?.id}`,
      );
    }
  });
});

test("the map speaks of every metal component, and of at least 45", () => {
  const metals = [...engine.knowledge.components.values()].filter((c) => c.kind === "metal");
  expect(mapIons(engine.knowledge)).toEqual(metals.map((c) => c.id));
  expect(metals.length).toBeGreaterThanOrEqual(45);
});

test("1 % of 2 mmol/L unbound asks for log K' 6.69", () => {
  // By hand: K' = 0.99 / (0.01^2 * 0.002) = 4.95e6.
  const task = readBrief(mapBrief("Zn2+", engine.knowledge), engine.knowledge);
  expectRelative(neededLog10K(task), Math.log10(4.95e6), 1e-12);
});

test("the text of a map says each standing in signs and words", async () => {
  const ions = [await map("Zn2+"), await map("Na+")];
  const whole = {
    contract: 1 as const,
    knowledge: { version: "1", hash: "x" },
    total: 2,
    done: 2,
    failed: [],
    severalAnalytes: {},
    ions,
  };
  expect(methodMapSchema.safeParse(whole).success).toBe(true);
  expect(methodMapText(whole)).toMatch(/^Zn2\+ +\+ .*EDTA, pH/m);
  expect(methodMapText({ ...whole, ions: ions.slice(1) })).toMatch(/back: closed[\s\S]*log K' is/);
});
