import { describe, expect, it } from "vitest";
import { hazardTagsOf as tagsInBottle } from "../../src/constants/index.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { cautionTexts, hazardTagsOf, reagentsOf, SAID_BY } from "../../src/recommendation/reagents.ts";
import { backPlan, inventedPlan, KNOWLEDGE } from "../methods/invented.ts";

/** Ways in which a reagent can stand in a plan: as mask, as auxiliary, as buffer, as titrant, as back titrant, as chelate. */
const mask = (agent: string, pH: number, preparation: readonly string[] = []): StagePlan =>
  inventedPlan({
    pH,
    preparation,
    masking: [{ agent, masks: ["Cu2+"], via: "complexation", molPerL: 0.05, basis: "equilibrium" }],
  });
const auxiliary = (id: string, pH: number): StagePlan =>
  inventedPlan({ pH, auxiliary: [{ id, molPerL: 0.05, purpose: "invented" }] });
const buffered = (id: string, pH: number, preparation: readonly string[] = []): StagePlan =>
  inventedPlan({ pH, buffer: { id, molPerL: 0.1 }, preparation });
const said = (...plans: StagePlan[]): string => cautionTexts(plans, [], KNOWLEDGE).join("\n");

/** Every reagent of the shelf with a hazard in its bottle, in every place where a plan can hold it. */
const HAZARDOUS: readonly (readonly [id: string, plans: readonly StagePlan[]])[] = [
  ...[...KNOWLEDGE.agents.values()]
    .filter((agent) => agent.id !== "hydroxide")
    .map(({ id, pH }) => [id, [mask(id, pH[0]), mask(id, pH[1]), auxiliary(id, pH[1])]] as const),
  ...[...KNOWLEDGE.buffers.values()].map(({ id, workingPH }) => [id, [buffered(id, workingPH[0])]] as const),
  ...[...KNOWLEDGE.titrants.keys()].map((id) => [id, [inventedPlan({ titrant: { id, molPerL: 0.01 } })]] as const),
  ...[...KNOWLEDGE.metalTitrants.keys()].map(
    (ion) =>
      [
        ion,
        [
          backPlan({ backTitrant: { id: ion, molPerL: 0.01 } }),
          inventedPlan({ chelate: { metal: ion, ligand: "EDTA", molPerL: 1e-4 } }),
        ],
      ] as const,
  ),
  ...[...KNOWLEDGE.indicators.keys()].map((id) => [id, [inventedPlan({ indicator: { id, molPerL: 1e-5 } })]] as const),
];

describe("cautionTexts over the whole shelf", () => {
  it.each(HAZARDOUS)("tells every hazard in the bottle of %s, wherever the plan holds it", (id, plans) => {
    const tags = [...tagsInBottle(id, KNOWLEDGE)];
    for (const plan of plans) {
      const always = KNOWLEDGE.cautions.filter((c) => c.when === "always" && tags.includes(c.tag));
      expect(always.map((c) => c.tag).sort()).toEqual([...tags].sort());
      const texts = cautionTexts([plan], [], KNOWLEDGE);
      // "Toxic" is not said once more of a bottle whose own caution says how it kills.
      const own = always.filter((c) => !(SAID_BY[c.tag] ?? []).some((by) => always.some((other) => other.tag === by)));
      expect(own.length === 0).toBe(always.length === 0);
      for (const caution of own)
        expect(
          texts.filter((text) => text.endsWith(caution.text)),
          caution.tag,
        ).toHaveLength(1);
      expect(new Set(texts).size).toBe(texts.length);
      expect(reagentsOf(plan)).toContain(id);
      for (const tag of tags) expect(hazardTagsOf([plan], KNOWLEDGE)).toContain(tag);
    }
  });
  it("has hazards to tell: cyanide, sulfide, fluoride, mercury and perchlorate are among the bottles", () => {
    const told = new Set(HAZARDOUS.flatMap(([id]) => [...tagsInBottle(id, KNOWLEDGE)]));
    for (const tag of ["cyanide", "sulfide", "fluoride", "mercury", "perchlorate", "strong-acid"] as const)
      expect(told).toContain(tag);
  });
});

describe("cautionTexts, each once", () => {
  it("says a general hazard only where no own caution says it, in words that carry it", () => {
    const words = { toxic: /toxic|fatal|lethal/i, carcinogen: /carcinogenic/i, corrosive: /corrosive|eye damage/i };
    for (const [tag, by] of Object.entries(SAID_BY))
      for (const other of by) {
        const text = KNOWLEDGE.cautions.find((c) => c.tag === other && c.when === "always")?.text;
        expect(text, other).toMatch(words[tag as keyof typeof words]);
      }
  });
  it("names a reagent of two titrations once, and no bottle's fire hazard for a dilute sample", () => {
    const two = cautionTexts([buffered("hexamine", 5.5), buffered("hexamine", 6)], ["Cd2+", "Ag+"], KNOWLEDGE);
    expect(two.filter((text) => text.includes("Flammable"))).toHaveLength(1);
    expect(two.filter((text) => text.includes("Cadmium"))).toHaveLength(1);
    expect(two.join()).not.toContain("Oxidiser");
    expect(cautionTexts([backPlan({ backTitrant: { id: "Ag+", molPerL: 0.01 } })], [], KNOWLEDGE).join()).toContain(
      "Oxidiser",
    );
  });
});

describe("cautionTexts by conditions", () => {
  it("warns of hydrogen cyanide below pH 9.5 and of hydrogen sulfide below 9, and of the poison at any pH", () => {
    expect(said(mask("cyanide", 10))).toMatch(/Cyanide: fatal/);
    expect(said(mask("cyanide", 10))).not.toMatch(/sets hydrogen cyanide free/);
    expect(said(mask("cyanide", 9.4))).toMatch(/sets hydrogen cyanide free/);
    expect(said(mask("sulfide", 8.9))).toMatch(/not alkaline sets hydrogen sulfide free/);
    expect(said(mask("sulfide", 9))).not.toMatch(/not alkaline sets hydrogen sulfide free/);
  });
  it("warns of hydrofluoric acid where fluoride stands in acid, of its vapour where that is hot", () => {
    expect(said(mask("fluoride", 5.5))).toMatch(/in part hydrofluoric acid/);
    expect(said(mask("fluoride", 10))).not.toMatch(/in part hydrofluoric acid/);
    expect(said(mask("fluoride", 5.5, ["boil"]))).toMatch(/gives off hydrogen fluoride/);
    expect(said(mask("fluoride", 5.5, ["warm"]))).not.toMatch(/gives off hydrogen fluoride/);
  });
  it("warns of hot acid whichever acid it is, of hot perchloric acid by name", () => {
    expect(said(buffered("nitric-acid", 1, ["boil"]))).toMatch(/Hot acid/);
    expect(said(buffered("chloroacetate", 2, ["heat"]))).toMatch(/Hot acid/);
    expect(said(buffered("nitric-acid", 1))).not.toMatch(/Hot acid/);
    expect(said(buffered("perchloric-acid", 1, ["boil"]))).toMatch(/must not be heated with organic matter/);
    expect(said(buffered("perchloric-acid", 1))).not.toMatch(/must not be heated with organic matter/);
  });
  it("counts what the sample itself brings", () => {
    const plan = inventedPlan();
    expect(cautionTexts([plan], ["Hg2+"], KNOWLEDGE).join("\n")).toMatch(/Mercury: fatal/);
    expect(cautionTexts([plan], [], KNOWLEDGE).join("\n")).not.toMatch(/Mercury/);
  });
  it("says each caution once for a method of several titrations, and takes the worst of them", () => {
    const texts = cautionTexts([mask("cyanide", 10), mask("cyanide", 9.4)], [], KNOWLEDGE);
    expect(new Set(texts).size).toBe(texts.length);
    expect(texts.join("\n")).toMatch(/sets hydrogen cyanide free/);
  });
});
