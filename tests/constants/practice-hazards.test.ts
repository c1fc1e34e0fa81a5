import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { cautionsFor } from "../../src/constants/hazards.ts";
import { loadPractice } from "../../src/constants/load-practice.ts";
import { contractIdsSchema } from "../../src/constants/practice-schema.ts";
import { readRecords } from "../../src/constants/read-records.ts";

const read = (name: string) => readFileSync(new URL(`../../src/constants/data/${name}`, import.meta.url), "utf8");
const practice = loadPractice(read);
const ids = readRecords(read, "contract-ids.json", contractIdsSchema);
const knowledge = { cautions: practice.cautions, reagents: new Map(practice.reagents.map((r) => [r.id, r])) };
const vocabulary = [
  ...new Set([
    ...ids.titrants,
    ...ids.metalTitrants,
    ...ids.buffers,
    ...ids.agents,
    ...ids.preparation,
    "Hg2+",
    "UO2^2+",
  ]),
];
const tags = (reagents: string[], pH: number, hot: boolean) =>
  new Set(cautionsFor(reagents, { pH, hot }, knowledge).map((c) => c.tag));

describe("cautionsFor, over the whole vocabulary", () => {
  const expectedFor: [string, string[]][] = [
    ["cyanide", ["cyanide", "ferrocyanide", "tetracyanonickelate-exchange"]],
    ["sulfide", ["sulfide"]],
    ["fluoride", ["fluoride", "fluoride-release"]],
    ["mercury", ["Hg2+"]],
    ["perchlorate", ["perchloric-acid"]],
    ["lead", ["Pb2+"]],
    ["thorium-uranium", ["Th4+", "UO2^2+"]],
    ["formaldehyde", ["formaldehyde"]],
    ["strong-alkali", ["hydroxide", "sodium-hydroxide", "potassium-hydroxide"]],
    ["heat-sensitive", ["hydroxylamine"]],
  ];
  test.each(expectedFor)(
    "%s is told of exactly where it is in the bottle, at any pH and temperature",
    (tag, reagents) => {
      for (const pH of [0, 2, 5, 6.9, 8, 10, 13])
        for (const hot of [true, false])
          for (const id of vocabulary) {
            const told = tags([id], pH, hot).has(tag as never);
            if (reagents.includes(id)) expect(told, `${id} at pH ${pH}`).toBe(true);
            else if (tag !== "strong-alkali" && tag !== "heat-sensitive") expect(told, `${id} at pH ${pH}`).toBe(false);
          }
    },
  );

  test("fluoride in acid, cyanide and sulfide too low are told of just below the limit and not at it", () => {
    expect(tags(["fluoride"], 6.99, false)).toContain("fluoride-in-acid");
    expect(tags(["fluoride"], 7, false)).not.toContain("fluoride-in-acid");
    expect(tags(["cyanide"], 9.49, false)).toContain("cyanide-in-acid");
    expect(tags(["cyanide"], 9.5, false)).not.toContain("cyanide-in-acid");
    expect(tags(["sulfide"], 8.99, false)).toContain("sulfide-in-acid");
    expect(tags(["sulfide"], 9, false)).not.toContain("sulfide-in-acid");
  });

  test("hot acid is told of the solution, whatever made it acid, and only when it is hot and acid", () => {
    for (const id of vocabulary) {
      expect(tags([id], 1, true), id).toContain("hot-acid");
      expect(tags([id], 1, false), id).not.toContain("hot-acid");
      expect(tags([id], 5, true), id).not.toContain("hot-acid");
    }
  });

  test("heat adds the explosion warning to perchloric acid", () => {
    const texts = (hot: boolean) => cautionsFor(["perchloric-acid"], { pH: 1, hot }, knowledge).map((c) => c.text);
    expect(texts(true).some((t) => t.includes("explodes"))).toBe(true);
    expect(texts(false).some((t) => t.includes("explodes"))).toBe(false);
  });

  test("names the reagents each caution is about, and gives none for harmless ones", () => {
    const cautions = cautionsFor(["EDTA", "cyanide", "ascorbic-acid"], { pH: 10, hot: false }, knowledge);
    expect(cautions.find((c) => c.tag === "cyanide")?.reagents).toEqual(["cyanide"]);
    expect(cautionsFor(["EDTA", "ascorbic-acid"], { pH: 10, hot: false }, knowledge)).toEqual([]);
  });

  test("defers to local rules for what a laboratory may not decide alone", () => {
    for (const tag of ["cyanide", "mercury", "thorium-uranium", "perchlorate", "lead"]) {
      const own = practice.cautions.filter((c) => c.tag === tag);
      expect(
        own.some((c) => /local rules|rules and licences/i.test(c.text)),
        tag,
      ).toBe(true);
    }
  });

  test("every hazard tag that a reagent carries has a caution", () => {
    const told = new Set(practice.cautions.map((c) => c.tag));
    for (const reagent of practice.reagents)
      for (const tag of reagent.hazardTags) expect(told, reagent.id).toContain(tag);
  });
});
