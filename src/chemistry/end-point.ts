import type { EndPointModel } from "../constants/knowledge.ts";

/**
 * Where the eye stops, as the share of the dye that is still (or already) bound to metal.
 * Two-colour, direct: the last of the bound colour gone, 92 % free (practice: 90 to 95 %);
 * back titration and release: the first bound colour that stays, 15 % bound (practice: 10 to 20 %).
 * Common practice of visual complexometric end points; half free is only a reference point.
 */
export const PRACTISED_BOUND_FRACTION = { direct: 0.08, back: 0.15 } as const;

/** Concentration of a coloured complex that the eye still sees in a beaker, mol/L (common practice: 2 to 3e-6). */
export const VISIBLE_COMPLEX_MOL_PER_L = 2.5e-6;

/** Share of the dye still held 5 % past equivalence from which an end point counts as blocked. */
export const BLOCKED_BOUND_FRACTION = 0.1;

/**
 * Half-width in pM that is added where an end point rests on an empirical record and is taken at equivalence: dyes that can be
 * calculated mostly turn within 0.7 pM of it (a few within 1.5), so an unknown one is given a band of about that width.
 */
export const EMPIRICAL_EXTRA_BAND_PM = 0.4;

/**
 * The log10 of bound over free dye at which the observer stops.
 * @param model kind of end point
 * @param mode "direct" (colour of the metal disappears) or "back" (it appears)
 * @param dyeMolPerL total of the dye in the titrated solution, mol/L, > 0
 */
export function practisedLog10Ratio(model: EndPointModel, mode: "direct" | "back", dyeMolPerL: number): number {
  // One colour: the coloured complex is seen down to an absolute concentration, whatever the share of the dye.
  const bound =
    model === "one-colour" ? Math.min(0.5, VISIBLE_COMPLEX_MOL_PER_L / dyeMolPerL) : PRACTISED_BOUND_FRACTION[mode];
  return Math.log10(bound / (1 - bound));
}

/**
 * Shift from a published half-way transition pM to the practised point: the metal must be this much scarcer, in pM.
 * Both in a direct and in a back titration the practised point lies on the side of the free dye.
 */
export function shiftFromHalf(model: EndPointModel, mode: "direct" | "back", dyeMolPerL: number): number {
  return -practisedLog10Ratio(model, mode, dyeMolPerL);
}

/**
 * pM at half change from a published table at this pH, by linear interpolation; null outside the table (no extrapolation).
 * @param points [pH, pM] pairs in rising pH
 */
export function transitionPM(points: readonly (readonly [number, number])[], pH: number): number | null {
  for (let i = 0; i + 1 < points.length; i++) {
    const [pH0, pM0] = points[i]!;
    const [pH1, pM1] = points[i + 1]!;
    if (pH >= pH0 && pH <= pH1) return pM0 + ((pM1 - pM0) * (pH - pH0)) / (pH1 - pH0);
  }
  return null;
}
