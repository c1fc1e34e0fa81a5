import type { Knowledge } from "../constants/knowledge.ts";
import { criterionOf } from "../methods/criterion.ts";
import { electrodeOf } from "../methods/electrode-potential.ts";
import type { StageEvaluation } from "../methods/evaluate-stage.ts";
import { colourOf } from "../methods/read-photometer.ts";
import type { VesselState } from "../methods/stage-model.ts";

/** What the instrument of a titration shows against the volume; null where a point has no value. */
export interface ReadingSeries {
  readonly kind: "potential" | "absorbance";
  readonly name: string; // the electrode, or what is measured where
  readonly volumeML: readonly number[];
  /** Potential in mV against that at the end point, or absorbance against that of the full colour, corrected for dilution. */
  readonly values: readonly (number | null)[];
  readonly endPoint: {
    readonly volumeML: number;
    readonly low: number;
    readonly high: number;
    readonly value: number;
  } | null;
  /** The two straight branches of an absorbance as they are drawn: through the end point and beyond. */
  readonly branches: readonly (readonly [from: readonly [number, number], to: readonly [number, number]])[];
}

const ML_PER_L = 1000;

/** The curve that the electrode or the photometer of a titration shows; null for one that is seen by eye. */
export function readingSeries(
  evaluation: StageEvaluation,
  volumeML: readonly number[],
  knowledge: Knowledge,
): ReadingSeries | null {
  const { model, photometric, electrode } = evaluation;
  const { plan } = model;
  const drawn = (of: (state: VesselState) => number, volumes: readonly number[]): (number | null)[] =>
    volumes.map((v) => {
      const state = model.at(v / ML_PER_L);
      const value = of(state);
      return state.ok && Number.isFinite(value) ? value : null;
    });
  const endPoint = (value: number): ReadingSeries["endPoint"] =>
    evaluation.status === "failed"
      ? null
      : { volumeML: evaluation.endPointML, low: evaluation.bandML[0], high: evaluation.bandML[1], value };
  if (electrode !== null) {
    const { potentialMV } = electrodeOf(model, knowledge);
    const atEnd = potentialMV(model.at(evaluation.endPointML / ML_PER_L));
    return {
      kind: "potential",
      name: electrode.name,
      volumeML,
      values: drawn((state) => potentialMV(state) - atEnd, volumeML),
      endPoint: endPoint(0),
      branches: [],
    };
  }
  if (photometric === null) return null;
  const colour = colourOf(model, criterionOf(model, new Set(plan.determines), plan.backTitrant !== null), knowledge);
  const { steep, level, wavelengthNm } = photometric;
  const last = volumeML.at(-1) ?? 0;
  const along = (branch: typeof steep, mL: number): readonly [number, number] => [
    mL,
    branch.intercept + (branch.slopePerL * mL) / ML_PER_L,
  ];
  const end = evaluation.endPointML;
  /** Where the steep branch has this share of the colour. */
  const reach = (share: number): number => (ML_PER_L * (share - steep.intercept)) / steep.slopePerL;
  return {
    kind: "absorbance",
    name: wavelengthNm ? `absorbance at ${wavelengthNm[0]} to ${wavelengthNm[1]} nm` : "absorbance",
    volumeML,
    values: drawn(colour, volumeML),
    endPoint: endPoint(along(level, end)[1]),
    branches: [
      [along(steep, reach(1)), along(steep, reach(0))],
      plan.backTitrant === null && plan.indicator !== null
        ? [along(level, 0.85 * end), along(level, last)]
        : [
            along(level, plan.backTitrant === null ? 0.85 * end : 0),
            along(level, plan.backTitrant === null ? last : 1.15 * end),
          ],
    ],
  };
}
