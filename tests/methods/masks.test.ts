import { describe, expect, it } from "vitest";
import { benchAmount, maskSets, pairHasConstants } from "../../src/methods/masks.ts";
import { shelfOf } from "../../src/methods/shelf.ts";
import type { Threat } from "../../src/methods/threats.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const threat = (component: string, molPerL = 1e-4, change: Partial<Threat> = {}): Threat => ({
  component,
  titrates: true,
  blocks: false,
  holdsAnalyte: false,
  biasFraction: 0.05,
  molPerL,
  ...change,
});
const everything = shelfOf(inventedTask({ "Mg2+": 0.008 }), KNOWLEDGE, true);
const setsFor = (threats: readonly Threat[], plan: StagePlan, shelf = everything) =>
  maskSets(threats, plan, KNOWLEDGE, shelf);
const agentsOf = (sets: ReturnType<typeof setsFor>) => sets.map((set) => set.steps.map((step) => step.agent));

describe("maskSets", () => {
  it("needs nothing against nothing", () => {
    expect(setsFor([], magnesiumPlan())).toEqual([{ steps: [], unanswered: [], burden: 0 }]);
  });
  it("gives the least burden first, and hazards weigh", () => {
    const sets = setsFor([threat("Al3+"), threat("Ni2+")], magnesiumPlan());
    const burdens = sets.map((set) => set.burden);
    expect(burdens.length).toBeGreaterThan(3);
    expect(burdens).toEqual([...burdens].sort((a, b) => a - b));
    expect(new Set(agentsOf(sets).map((agents) => [...new Set(agents)].sort().join("+"))).size).toBe(sets.length);
  });
  it("leaves cyanide to the last where something milder is on the shelf", () => {
    const sets = setsFor([threat("Cu2+")], magnesiumPlan());
    const cyanide = sets.findIndex((set) => set.steps.some((step) => step.agent === "cyanide"));
    expect(cyanide).toBeGreaterThan(0);
    expect(sets[cyanide]!.burden).toBeGreaterThan(sets[0]!.burden);
  });
  it("answers every threat that it does not name as unanswered, by a step that is for it", () => {
    const threats = [threat("Al3+"), threat("Cu2+"), threat("Ca2+")];
    const sets = setsFor(threats, magnesiumPlan());
    expect(sets.length).toBeGreaterThan(0);
    for (const { steps, unanswered } of sets) {
      const masked = new Set(steps.flatMap((step) => step.masks));
      expect([...masked, ...unanswered.map((t) => t.component)].sort()).toEqual(["Al3+", "Ca2+", "Cu2+"]);
    }
  });
  it("names what nothing serves against", () => {
    const nothing = setsFor([threat("Al3+"), threat("Ni2+")], magnesiumPlan(), (id) => id === "triethanolamine");
    expect(agentsOf(nothing)).toEqual([["triethanolamine"]]);
    expect(nothing[0]!.unanswered.map((t) => t.component)).toEqual(["Ni2+"]);
    const bare = setsFor([threat("Ni2+")], magnesiumPlan(), () => false);
    expect(bare).toMatchObject([{ steps: [], burden: 0, unanswered: [{ component: "Ni2+" }] }]);
  });
  it("refuses an agent that what it masks would use up: two for each metal must fit its usual maximum", () => {
    const fluoride = KNOWLEDGE.agents.get("fluoride")!;
    const only = (molPerL: number) =>
      agentsOf(setsFor([threat("Al3+", molPerL)], inventedPlan(), (id) => id === "fluoride"));
    expect(only(0.999 * (fluoride.usualMaxMolPerL / 2))).toEqual([["fluoride"]]);
    expect(only(1.001 * (fluoride.usualMaxMolPerL / 2))).toEqual([]);
  });
  it("adds up what several metals take from one agent", () => {
    const half = 0.7 * (KNOWLEDGE.agents.get("cyanide")!.usualMaxMolPerL / 2);
    const cyanide = (id: string) => id === "cyanide";
    expect(setsFor([threat("Ni2+", half)], magnesiumPlan(), cyanide)).toHaveLength(1);
    expect(setsFor([threat("Ni2+", half), threat("Zn2+", half)], magnesiumPlan(), cyanide)).toEqual([]);
  });
  it.each([
    ["cyanide", "Ni2+", 9.5],
    ["sulfide", "Cu2+", 9],
  ])("never offers %s against %s below pH %d, not by a hundredth", (agent, ion, lowest) => {
    const at = (pH: number) =>
      setsFor([threat(ion, 1e-6)], magnesiumPlan({ pH }), (id) => id === agent).filter((set) => set.steps.length > 0);
    expect(at(lowest - 0.01)).toEqual([]);
    expect(at(lowest + 0.6)).toHaveLength(1);
  });
  it("does not mask with an agent that takes the analyte, the back titrant or the metal of a chelate", () => {
    const cyanide = (plan: StagePlan) => setsFor([threat("Ni2+")], plan, (id) => id === "cyanide")[0]?.steps.length;
    expect(cyanide(magnesiumPlan())).toBe(1);
    expect(cyanide(magnesiumPlan({ determines: ["Zn2+"] }))).toBe(0);
    expect(cyanide(magnesiumPlan({ mode: "back", backTitrant: { id: "Zn2+", molPerL: 0.01 } }))).toBe(0);
    expect(cyanide(magnesiumPlan({ chelate: { metal: "Zn2+", ligand: "EDTA", molPerL: 1e-4 } }))).toBe(0);
  });
  it("takes special agents only from a shelf that holds them", () => {
    const usual = shelfOf(inventedTask({ "Mg2+": 0.008 }), KNOWLEDGE, false);
    const bottles = (shelf: typeof usual) => agentsOf(setsFor([threat("Cu2+")], magnesiumPlan(), shelf)).flat();
    expect(bottles(everything)).toContain("dimercaprol");
    expect(bottles(usual)).not.toContain("dimercaprol");
  });
  it("gives each step an amount that a bench uses, at least the usual and at most the maximum", () => {
    for (const molPerL of [1e-6, 1e-4, 5e-3]) {
      const [set] = setsFor([threat("Al3+", molPerL)], inventedPlan(), (id) => id === "fluoride");
      const { usualMolPerL, usualMaxMolPerL } = KNOWLEDGE.agents.get("fluoride")!;
      expect(set!.steps[0]!.molPerL).toBeGreaterThanOrEqual(usualMolPerL);
      expect(set!.steps[0]!.molPerL).toBeLessThanOrEqual(usualMaxMolPerL);
    }
  });
});

describe("benchAmount", () => {
  it("rounds up to 1, 1.5, 2, 3, 5 or 8 times a power of ten", () => {
    const given = [0.001, 0.00101, 0.0151, 0.021, 0.31, 0.51, 0.81, 0];
    expect(given.map(benchAmount)).toEqual([0.001, 0.0015, 0.02, 0.03, 0.5, 0.8, 1, 0]);
  });
});

describe("pairHasConstants", () => {
  const has = (agent: string, ion: string, via: "complexation" | "precipitation") =>
    pairHasConstants(KNOWLEDGE, KNOWLEDGE.agents.get(agent)!, ion, via);
  it("knows soluble complexes and solids apart", () => {
    expect(has("cyanide", "Ni2+", "complexation")).toBe(true);
    expect(has("sulfate", "Ba2+", "precipitation")).toBe(true);
    expect(has("ascorbic-acid", "Fe3+", "complexation")).toBe(false);
    expect(has("hydroxide", "Mg2+", "precipitation")).toBe(true);
    expect(has("hydroxide", "EDTA", "precipitation")).toBe(false);
  });
});
