import { seededRandom } from "../../src/numerics/seeded-random.ts";
import type { LooseBrief } from "../recommendation/invented-briefs.ts";

/** Metals that are asked for, and what may stand beside them: common ones, so that most briefs have an answer. */
const ANALYTES = ["Ca2+", "Mg2+", "Zn2+", "Pb2+", "Cd2+", "Cu2+", "Ni2+", "Al3+", "Fe3+", "Bi3+", "Mn2+", "Ba2+"];
const BESIDE = [...ANALYTES, "Co2+", "Cr3+", "SO4^2-", "Cl-", "PO4^3-", "F-", "citrate", "tartrate", "NH4+", "Na+"];
const PORTIONS = [
  { volumeML: 10, titrationVolumeML: 100 },
  { volumeML: 25, titrationVolumeML: 100 },
  { volumeML: 50, titrationVolumeML: 100 },
];

/** Draws an invented brief: one or two analytes at 2 to 20 mmol/L, up to four other components over four decades, 0.5 to 3 % asked for. */
export function randomBrief(seed: number, index: number): LooseBrief {
  const random = seededRandom(seed, index);
  const oneOf = <T>(list: readonly T[]): T => list[random.integerBelow(list.length)]!;
  const between = (low: number, high: number): number =>
    Number((low * (high / low) ** random.uniform()).toPrecision(3));
  const analytes = new Set([oneOf(ANALYTES)]);
  if (random.uniform() < 0.2) analytes.add(oneOf(ANALYTES));
  const matrix = new Set<string>();
  for (let n = random.integerBelow(5); n > 0; n--) matrix.add(oneOf(BESIDE));
  return {
    title: `Invented: sample ${index} of seed ${seed}`,
    analytes: [...analytes].map((ion) => ({ ion, concentration: { value: between(2, 20), unit: "mmol/L" } })),
    matrix: [...matrix]
      .filter((component) => !analytes.has(component))
      .map((component) => ({ component, concentration: { value: between(0.002, 20), unit: "mmol/L" } })),
    portion: oneOf(PORTIONS),
    requirement: { relativeExpandedUncertaintyPercent: between(0.5, 3) },
  };
}
