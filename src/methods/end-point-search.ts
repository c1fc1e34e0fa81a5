/** Finding where a titration ends: a monotone criterion of the burette volume, bracketed upwards, then halved by secants. */

export interface EndPointSearch {
  readonly found: boolean;
  readonly volumeL: number; // 0 where not found
  readonly evaluations: number;
}

/** Relative precision of an end-point volume: a thousandth of what any burette reads, so that no figure shown is the search's. */
const VOLUME_TOLERANCE = 2e-7;
const MAX_STEPS = 60;

/** Burette volumes, in parts of the expected one, at which the criterion is first looked at. */
const SCAN = [0.3, 0.9, 0.99, 1.003, 1.03, 1.12, 1.35, 1.8, 2.6, 4];

/**
 * The first volume at which `criterion` turns from negative to not negative.
 * @param criterion continuous in the volume (L); negative before the end point
 * @param expectedL where the end is expected, L, > 0
 */
export function firstCrossing(criterion: (volumeL: number) => number, expectedL: number): EndPointSearch {
  let evaluations = 0;
  const f = (v: number): number => {
    evaluations++;
    return criterion(v);
  };
  let low = 0;
  let fLow = Number.NaN;
  for (const part of SCAN) {
    const v = part * expectedL;
    const value = f(v);
    if (!Number.isFinite(value)) continue;
    if (value >= 0) {
      if (Number.isNaN(fLow)) return { found: false, volumeL: 0, evaluations }; // over before a third of it went in
      return { ...refine(f, low, fLow, v, value, expectedL), evaluations };
    }
    low = v;
    fLow = value;
  }
  return { found: false, volumeL: 0, evaluations };
}

/** What a vessel says of an end point: the criterion there, negative before, and about how far the burette still has to run, L. */
export interface Outlook {
  readonly criterion: number;
  readonly remainingL: number;
}

const PREDICTIONS = 25;
/** Volumes, in parts of the expected one, beyond which no end is looked for. */
const FARTHEST = 4;

/**
 * The same crossing as `firstCrossing`, found from what each vessel foretells: the volume that is left to run is nearly straight in the
 * volume, so chords of it close in within a few vessels. Null where the foretelling does not help (over at the first look, or not a number).
 * @param look what the vessel says at a volume, L
 * @param fromL a volume before the end, L
 * @param tolerance of the volume, relative to the expected one
 */
export function foretoldCrossing(
  look: (volumeL: number) => Outlook,
  fromL: number,
  expectedL: number,
  tolerance = VOLUME_TOLERANCE,
): EndPointSearch | null {
  const farthestL = FARTHEST * expectedL;
  const first = look(fromL);
  if (!(first.criterion < 0) || !(first.remainingL > 0)) return null;
  let evaluations = 1;
  let low = fromL;
  let high = Infinity;
  let before = fromL;
  let hBefore = -first.remainingL;
  let v = Math.min(fromL + first.remainingL, farthestL);
  for (; evaluations < PREDICTIONS; evaluations++) {
    const { criterion, remainingL } = look(v);
    if (!Number.isFinite(criterion) || Number.isNaN(remainingL)) return null;
    if (criterion >= 0) high = Math.min(high, v);
    else if (v >= farthestL) return { found: false, volumeL: 0, evaluations };
    else low = Math.max(low, v);
    const h = -remainingL;
    const slope = (h - hBefore) / (v - before);
    const step = slope > 0 ? -h / slope : Number.NaN;
    if (high < Infinity || h === 0) {
      if (h === 0 || Math.abs(step) <= tolerance * expectedL || high - low <= tolerance * expectedL)
        return { found: true, volumeL: v, evaluations };
    }
    before = v;
    hBefore = h;
    const next = v + step;
    if (next > low && next < high && next <= farthestL) v = next;
    else v = high < Infinity ? (low + high) / 2 : Math.min(farthestL, low + (low - 0.5 * fromL));
  }
  return null;
}

/** When a chord moves the edge of a band by less than this part of its distance from the end point, it has met it to a thousandth. */
const EDGE_TOLERANCE = 1e-2;
const EDGE_STEPS = 8;

/**
 * The edge of an observer's band beside a known end point, by the same foretelling; null where it does not close in.
 * @param look what the vessel says of the shifted criterion at a volume, L
 */
export function foretoldEdge(look: (volumeL: number) => Outlook, fromL: number, scaleL: number): number | null {
  let before = fromL;
  let hBefore = -look(fromL).remainingL;
  let v = fromL - hBefore;
  for (let step = 0; step < EDGE_STEPS; step++) {
    if (!(v > 0 && v < fromL + FARTHEST * scaleL)) return null;
    const h = -look(v).remainingL;
    const next = v - (h * (v - before)) / (h - hBefore);
    if (!Number.isFinite(next)) return null;
    if (Math.abs(next - v) <= EDGE_TOLERANCE * Math.abs(next - fromL)) return next;
    before = v;
    hBefore = h;
    v = next;
  }
  return null;
}

/** False position with the Illinois modification, kept inside the bracket. */
function refine(
  f: (v: number) => number,
  lowStart: number,
  fLowStart: number,
  highStart: number,
  fHighStart: number,
  scaleL: number,
): { found: true; volumeL: number } {
  let low = lowStart;
  let high = highStart;
  let fLow = fLowStart;
  let fHigh = fHighStart;
  let side = 0;
  for (let step = 0; step < MAX_STEPS && high - low > VOLUME_TOLERANCE * scaleL; step++) {
    let v = step % 3 === 2 ? (low + high) / 2 : (low * fHigh - high * fLow) / (fHigh - fLow);
    if (!(v > low && v < high)) v = (low + high) / 2;
    const value = f(v);
    if (!Number.isFinite(value)) break;
    if (value >= 0) {
      high = v;
      fHigh = value;
      if (side === 1) fLow /= 2;
      side = 1;
    } else {
      low = v;
      fLow = value;
      if (side === -1) fHigh /= 2;
      side = -1;
    }
  }
  return { found: true, volumeL: (low + high) / 2 };
}

/**
 * The crossing next to a known end point, walking away from it in growing steps; null when none is met within the scale.
 * @param criterion shifted criterion, negative before its crossing
 * @param direction -1 to look at smaller volumes, 1 at larger ones
 */
export function nearCrossing(
  criterion: (volumeL: number) => number,
  fromL: number,
  direction: -1 | 1,
  scaleL: number,
): number | null {
  let near = fromL;
  let fNear = criterion(fromL);
  for (let step = 3e-4 * scaleL; step < 4 * scaleL; step *= 4) {
    const far = Math.max(0, fromL + direction * step);
    const fFar = criterion(far);
    if (!Number.isFinite(fFar) || !Number.isFinite(fNear)) return null;
    if (direction === -1 ? fFar < 0 : fFar >= 0) return edge(criterion, near, fNear, far, fFar);
    if (far === 0) return 0;
    near = far;
    fNear = fFar;
  }
  return null;
}

/** The edge of an observer's band needs two figures: two chords of the bracket, the second on the side that still holds it. */
function edge(criterion: (volumeL: number) => number, near: number, fNear: number, far: number, fFar: number): number {
  const chord = (a: number, fa: number, b: number, fb: number): number =>
    fa === fb ? (a + b) / 2 : (a * fb - b * fa) / (fb - fa);
  const first = chord(near, fNear, far, fFar);
  const fFirst = criterion(first);
  if (!Number.isFinite(fFirst) || fFirst === 0) return first;
  return fFirst < 0 === fNear < 0 ? chord(first, fFirst, far, fFar) : chord(near, fNear, first, fFirst);
}
