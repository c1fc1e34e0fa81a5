import { describe, expect, it } from "vitest";
import type { KineticRecord, Knowledge } from "../../src/constants/knowledge.ts";
import { inertMetals, metalKinetics } from "../../src/methods/kinetics.ts";
import { KNOWLEDGE } from "./invented.ts";

const kinetics = (ion: string, titrant = "EDTA") => {
  const { class: speed, needs } = metalKinetics(KNOWLEDGE, ion, titrant);
  return [speed, needs];
};

/** A knowledge that holds one invented metal with this water exchange (1/s) and nothing else about rates. */
const exchanging = (waterExchangePerS: number): Knowledge => {
  const record: KineticRecord = {
    ion: "M",
    titrant: null,
    indicator: null,
    statement: "invented",
    consequences: ["none"],
    temperatureC: null,
    pH: null,
    waterExchangePerS,
    provenance: { source: "invented", basis: "computed", confidence: "low" },
  };
  return { ...KNOWLEDGE, kinetics: [record] };
};

describe("metalKinetics", () => {
  it("calls aluminium slow with EDTA: it wants boiling", () => expect(kinetics("Al3+")).toEqual(["slow", "boil"]));
  it("lets aluminium stand with CDTA instead of heating it", () => {
    expect(kinetics("Al3+", "CDTA")).toEqual(["slow", "wait"]);
  });
  it.each(["Cr3+", "Rh3+"])("calls %s inert: only boiling brings it to react", (ion) => {
    expect(kinetics(ion)).toEqual(["inert", "boil"]);
  });
  it.each(["Fe3+", "Zn2+", "Ca2+", "Mg2+", "Ni2+", "Cu2+", "Pb2+"])("calls %s fast", (ion) => {
    expect(kinetics(ion)).toEqual(["fast", "none"]);
  });
  it("calls zirconium slow for its polymers, although no rate is on record", () => {
    expect(kinetics("Zr4+")).toEqual(["slow", "boil"]);
  });
  it.each([
    [0.0099, "inert"],
    [0.01, "slow"],
    [49.9, "slow"],
    [50, "fast"],
  ])("draws its lines by water exchange: %d /s is %s", (rate, speed) => {
    expect(metalKinetics(exchanging(rate), "M", "EDTA").class).toBe(speed);
  });
  it("names the records that decided", () => {
    expect(metalKinetics(KNOWLEDGE, "Cr3+", "EDTA").records[0]?.waterExchangePerS).toBe(0.0000024);
    expect(metalKinetics(KNOWLEDGE, "Zn2+", "EDTA").records).toEqual([]);
  });
});

describe("inertMetals", () => {
  const inert = (pH: number, hot: boolean) =>
    [...inertMetals(KNOWLEDGE, ["Al3+", "Cr3+", "Fe3+", "Zn2+"], "EDTA", pH, hot)].sort();
  it("leaves chromium out at any pH, aluminium only in acid, where a record says that it stands aside", () => {
    expect(inert(2, false)).toEqual(["Al3+", "Cr3+"]);
    expect(inert(5.5, false)).toEqual(["Cr3+"]);
  });
  it("leaves none out of a boiled solution", () => expect(inert(2, true)).toEqual([]));
});
