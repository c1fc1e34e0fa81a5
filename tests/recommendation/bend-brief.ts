import type { LooseBrief } from "./invented-briefs.ts";

type Row = NonNullable<LooseBrief["matrix"]>[number];

/** The same brief with its rows in the opposite order. */
export const reversed = (brief: LooseBrief): LooseBrief => ({ ...brief, matrix: [...(brief.matrix ?? [])].reverse() });

/** The same brief with every amount of substance in another unit of the same. */
export const inMicromol = (brief: LooseBrief): LooseBrief => {
  const factors: Readonly<Record<string, number>> = { "mol/L": 1e6, "mmol/L": 1e3 };
  const level = <T extends Pick<Row, "concentration">>(row: T): T => {
    const factor = factors[row.concentration.unit];
    return factor === undefined
      ? row
      : { ...row, concentration: { value: row.concentration.value * factor, unit: "umol/L" } };
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
