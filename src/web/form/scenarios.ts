import type { BriefInput } from "../../recommendation/contract.ts";

/** A worked demo: a question we made up, to try the program with. */
export interface Scenario {
  readonly id: string;
  readonly teaser: string; // what the case is about, one sentence
  readonly brief: BriefInput;
}

const mmol = (value: number): { value: number; unit: "mmol/L" } => ({ value, unit: "mmol/L" });
const mg = (value: number): { value: number; unit: "mg/L" } => ({ value, unit: "mg/L" });

/** Invented samples from invented places; no measured data stand behind them. */
export const SCENARIOS: readonly Scenario[] = [
  {
    id: "zinc-rinse",
    teaser: "Zinc beside some iron and aluminium, and a laboratory that keeps no cyanide.",
    brief: {
      title: "Zinc in the rinse behind a passivation tank",
      analytes: [{ ion: "Zn2+", concentration: mmol(3.2) }],
      matrix: [
        { component: "Fe3+", concentration: mmol(0.15) },
        { component: "Al3+", concentration: mmol(0.4) },
        { component: "NO3-", concentration: mmol(9) },
      ],
      portion: { volumeML: 50, titrationVolumeML: 100 },
      requirement: { relativeExpandedUncertaintyPercent: 1 },
      laboratory: { avoid: ["cyanide"] },
    },
  },
  {
    id: "hard-brine",
    teaser: "Calcium beside more than three times as much magnesium, in much salt.",
    brief: {
      title: "Calcium in the brine of a solar pond",
      analytes: [{ ion: "Ca2+", concentration: mmol(11) }],
      matrix: [
        { component: "Mg2+", concentration: mmol(38) },
        { component: "Na+", concentration: mmol(800) },
        { component: "Cl-", concentration: mmol(890) },
        { component: "SO4^2-", concentration: mmol(4) },
      ],
      portion: { volumeML: 10, titrationVolumeML: 100 },
      requirement: { relativeExpandedUncertaintyPercent: 2 },
      laboratory: { buretteML: 25 },
    },
  },
  {
    id: "feed-water",
    teaser: "Calcium and magnesium as one sum, with traces of copper and iron that may hold the dye.",
    brief: {
      title: "Hardness of a laundry's feed water before the softener",
      analytes: [
        { ion: "Ca2+", concentration: mg(82), report: "sum" },
        { ion: "Mg2+", concentration: mg(17), report: "sum" },
      ],
      matrix: [
        { component: "HCO3-", concentration: mg(240) },
        { component: "Cu2+", concentration: mg(0.2) },
        { component: "Fe3+", concentration: mg(0.3) },
        { component: "Cl-", concentration: mg(40) },
      ],
      portion: { volumeML: 50, titrationVolumeML: 60 },
      requirement: { relativeExpandedUncertaintyPercent: 1.5 },
    },
  },
  {
    id: "anodising-aluminium",
    teaser: "Aluminium beside phosphate, where nothing may be heated.",
    brief: {
      title: "Aluminium in an anodising bath with phosphate, no hot plate",
      analytes: [{ ion: "Al3+", concentration: mmol(9) }],
      matrix: [
        { component: "PO4^3-", concentration: mmol(2) },
        { component: "SO4^2-", concentration: mmol(60) },
        { component: "Na+", concentration: mmol(60) },
      ],
      portion: { volumeML: 20, titrationVolumeML: 100 },
      requirement: { relativeExpandedUncertaintyPercent: 1.5 },
      laboratory: { heating: false },
    },
  },
  {
    id: "nickel-citrate",
    teaser: "Nickel in a bath that carries citrate, which competes with the titrant.",
    brief: {
      title: "Nickel in the drag-out of a bright-nickel line with citrate",
      analytes: [{ ion: "Ni2+", concentration: mmol(14) }],
      matrix: [
        { component: "citrate", concentration: mmol(3) },
        { component: "SO4^2-", concentration: mmol(16) },
        { component: "NH4+", concentration: mmol(8) },
      ],
      portion: { volumeML: 10, titrationVolumeML: 100 },
      requirement: { relativeExpandedUncertaintyPercent: 0.8 },
    },
  },
  {
    id: "frit-lead",
    teaser: "Lead beside zinc and a little iron in a nitric digest.",
    brief: {
      title: "Lead in the digest of a ceramic frit",
      analytes: [{ ion: "Pb2+", concentration: mmol(5) }],
      matrix: [
        { component: "Zn2+", concentration: mmol(1.2) },
        { component: "Fe3+", concentration: mmol(0.3) },
        { component: "NO3-", concentration: mmol(110) },
      ],
      portion: { volumeML: 25, titrationVolumeML: 100 },
      requirement: { relativeExpandedUncertaintyPercent: 1 },
    },
  },
];
