import { describe, expect, it } from "vitest";
import { separationOf, separationsOf } from "../../src/methods/separation.ts";
import { KNOWLEDGE } from "./invented.ts";

const ids = (removed: string[], determines: string[]): string[] =>
  separationOf(removed, determines, KNOWLEDGE).steps.map((s) => `${s.takes} ${s.record.id}`);

describe("separationOf", () => {
  // Common practice of steel analysis: nickel is taken out as dimethylglyoximate, away from iron, manganese and chromium at once.
  it("takes the analyte out where one step parts it from everything", () => {
    expect(ids(["Fe3+", "Mn2+", "Cr3+"], ["Ni2+"])).toEqual(["analyte nickel-dimethylglyoxime"]);
  });

  it("takes an interferent out where it leaves the analyte", () => {
    expect(ids(["Fe3+"], ["Al3+"])).toEqual(["interferents iron-ketone-extraction"]);
  });

  it("needs a step for each where no single one parts all, and names what no step on record parts", () => {
    const { steps, unknown } = separationOf(["Fe3+", "Hf4+"], ["Zr4+"], KNOWLEDGE);
    expect(steps).toHaveLength(1);
    expect(unknown).toEqual(["Hf4+"]);
  });

  it("does not call a step a separation when the analyte goes along", () => {
    for (const { record } of separationOf(["Fe3+"], ["Ga3+"], KNOWLEDGE).steps)
      expect([...record.removes, ...record.takesAlong].includes("Ga3+") && record.removes.includes("Fe3+")).toBe(false);
  });
});

describe("separationsOf", () => {
  const both = (...partings: { removed: string[]; determines: string[] }[]): string[][] =>
    separationsOf(partings, KNOWLEDGE).map((s) => s.steps.map((step) => `${step.takes} ${step.record.id}`));

  // Hillebrand & Lundell 1953: lead goes as its sulfate, zinc and copper stay in the filtrate, where they are determined.
  it("is one step where one metal is determined in the precipitate and the other in the filtrate", () => {
    expect(
      both({ removed: ["Zn2+", "Cu2+"], determines: ["Pb2+"] }, { removed: ["Pb2+"], determines: ["Zn2+"] }),
    ).toEqual([["analyte lead-sulfate"], ["interferents lead-sulfate"]]);
  });

  it("names no step for a titration that needs none", () => {
    expect(both({ removed: [], determines: ["Mg2+"] }, { removed: ["Fe3+"], determines: ["Al3+"] })[0]).toEqual([]);
  });

  it("gives each what it would have alone where nothing is shared", () => {
    const pair = both({ removed: ["Fe3+"], determines: ["Al3+"] }, { removed: ["Mn2+"], determines: ["Ni2+"] });
    expect(pair).toEqual([["interferents iron-ketone-extraction"], ["analyte nickel-dimethylglyoxime"]]);
  });
});

describe("separation records", () => {
  it("name their source, a step, and no ion on both sides", () => {
    for (const record of KNOWLEDGE.separations) {
      expect(KNOWLEDGE.sources.has(record.provenance.source)).toBe(true);
      expect(record.removes.filter((ion) => record.takesAlong.includes(ion))).toEqual([]);
    }
  });
});
