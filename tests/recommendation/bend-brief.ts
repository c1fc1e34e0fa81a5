import type { LooseBrief } from "./invented-briefs.ts";

type Row = NonNullable<LooseBrief["matrix"]>[number];

/** The same brief with its rows in the opposite order. */
export const reversed = (brief: LooseBrief): LooseBrief => ({
  ...brief,
  analytes: [...brief.analytes].reverse(),
  matrix: [...(brief.matrix ?? [])].reverse(),
});

/** The same brief with every amount of substance in another unit of the same, and every mass in another unit of mass. */
export const inSmallUnits = (brief: LooseBrief): LooseBrief => {
  const units: Readonly<Record<string, readonly [factor: number, unit: string]>> = {
    "mol/L": [1e6, "umol/L"],
    "mmol/L": [1e3, "umol/L"],
    "mg/L": [1e3, "ug/L"],
  };
  const level = <T extends Pick<Row, "concentration">>(row: T): T => {
    const [factor, unit] = units[row.concentration.unit] ?? [];
    return factor === undefined || unit === undefined
      ? row
      : { ...row, concentration: { ...row.concentration, value: row.concentration.value * factor, unit } };
  };
  return { ...brief, analytes: brief.analytes.map(level), matrix: (brief.matrix ?? []).map(level) };
};

/** The same brief with every row of the matrix written as two halves. */
export const halved = (brief: LooseBrief): LooseBrief => ({
  ...brief,
  matrix: (brief.matrix ?? []).flatMap((row) => {
    const half = { ...row, concentration: { ...row.concentration, value: row.concentration.value / 2 } };
    return [half, half];
  }),
});

/** The brief with one more component in it, at a level in mol/L. */
export const beside = (brief: LooseBrief, component: string, molPerL: number): LooseBrief => ({
  ...brief,
  matrix: [...(brief.matrix ?? []), { component, concentration: { value: molPerL, unit: "mol/L" } }],
});

/** The brief of a laboratory that will not have this reagent. */
export const without = (brief: LooseBrief, id: string): LooseBrief => ({
  ...brief,
  laboratory: { ...brief.laboratory, avoid: [...(brief.laboratory?.avoid ?? []), id] },
});

/** The brief with the requirement times `factor`. */
export const asking = (brief: LooseBrief, factor: number): LooseBrief => ({
  ...brief,
  requirement: {
    relativeExpandedUncertaintyPercent: factor * (brief.requirement?.relativeExpandedUncertaintyPercent ?? 1),
  },
});
