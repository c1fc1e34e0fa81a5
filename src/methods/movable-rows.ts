import { debyeHueckelA } from "../chemistry/activity.ts";
import type { PreparedSpecies } from "../chemistry/types.ts";
import type { Knowledge } from "../constants/knowledge.ts";

/** Rows of a system with what each constant is made of, flat: places of parameters and factors, and how it goes with the Davies term. */
export interface MovableRows {
  readonly lnBeta: Float64Array;
  readonly start: Int32Array;
  readonly parameter: Int32Array;
  readonly factor: Float64Array; // ln units for one log10 unit of the parameter
  readonly slope: Float64Array; // ln units for one of the Davies term
}

/** Writes ln beta of every row at a draw: shifts of the parameters in log10 units, `term` the change of the Davies term. */
export function move(
  { lnBeta, start, parameter, factor, slope }: MovableRows,
  shifts: Float64Array,
  term: number,
  to: Float64Array,
): void {
  for (let row = 0; row < to.length; row++) {
    let ln = lnBeta[row]! + slope[row]! * term;
    const end = start[row + 1]!;
    for (let p = start[row]!; p < end; p++) ln += factor[p]! * shifts[parameter[p]!]!;
    to[row] = ln;
  }
}

/**
 * Compiles the constants of species or solids of a system.
 * @param lnBeta their constants as they are
 * @param index place of each parameter, by "constant" and reaction
 */
export function movableRows(
  species: readonly PreparedSpecies[],
  lnBeta: Float64Array,
  temperatureC: number,
  index: ReadonlyMap<string, number>,
  knowledge: Knowledge,
): MovableRows {
  const start = [0];
  const parameter: number[] = [];
  const factor: number[] = [];
  const slope = new Float64Array(species.length);
  const perDeltaZ2 = debyeHueckelA(temperatureC) * Math.LN10;
  species.forEach(({ evidence }, row) => {
    for (const use of evidence) {
      slope[row] = slope[row]! + use.factor * knowledge.reactions.get(use.reaction)!.deltaZ2 * perDeltaZ2;
      const at = index.get(`constant ${use.reaction}`);
      if (at === undefined) continue;
      parameter.push(at);
      factor.push(use.factor * Math.LN10);
    }
    start.push(parameter.length);
  });
  return {
    lnBeta: lnBeta.slice(),
    start: Int32Array.from(start),
    parameter: Int32Array.from(parameter),
    factor: Float64Array.from(factor),
    slope,
  };
}
