/** The steepest place of a computed curve. */

export interface Steepest {
  readonly volumeL: number;
  readonly slopePerL: number; // signed
  /** The curve is steepest where it was looked at first or last: it has no inflection in between. */
  readonly atEdge: boolean;
}

/** Volumes, in parts of the expected one, between which an inflection is looked for, and in how many steps. */
const FROM = 0.3;
const TO = 2.6;
const STEPS = 24;
const SPLIT = 8;
/** A step is split until it is this part of the expected volume: a tenth of what a burette reads. */
const FINEST = 4e-5;

/**
 * Finds where `curve` (mV against L) is steepest, from chords: the steepest chord and its neighbours are split until it is short.
 * @param expectedL where the end is expected, L, > 0
 */
export function steepestOf(curve: (volumeL: number) => number, expectedL: number): Steepest {
  let low = FROM * expectedL;
  let high = TO * expectedL;
  let steps = STEPS;
  let first = true;
  let atEdge = false;
  for (;;) {
    const width = (high - low) / steps;
    const values = Array.from({ length: steps + 1 }, (_, i) => curve(low + i * width));
    let best = 0;
    let slope = 0;
    for (let i = 0; i < steps; i++) {
      const chord = (values[i + 1]! - values[i]!) / width;
      if (Number.isFinite(chord) && Math.abs(chord) > Math.abs(slope)) {
        best = i;
        slope = chord;
      }
    }
    if (first) atEdge = best === 0 || best === steps - 1;
    if (atEdge || width <= FINEST * expectedL) return { volumeL: low + (best + 0.5) * width, slopePerL: slope, atEdge };
    const from = low + Math.max(0, best - 0.5) * width;
    high = low + Math.min(steps, best + 1.5) * width;
    low = from;
    steps = SPLIT;
    first = false;
  }
}
