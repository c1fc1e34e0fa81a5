/** Finding where a titration ends: a monotone criterion of the burette volume, bracketed upwards, then halved by secants. */

export interface EndPointSearch {
  readonly found: boolean;
  readonly volumeL: number; // 0 where not found
  readonly evaluations: number;
}

/** Relative precision of an end-point volume: a thousandth of what any burette reads. */
const VOLUME_TOLERANCE = 2e-7;
const MAX_STEPS = 60;

/** Burette volumes, in parts of the expected one, at which the criterion is first looked at. */
const SCAN = [0, 0.2, 0.5, 0.8, 0.95, 0.99, 1, 1.005, 1.02, 1.06, 1.15, 1.35, 1.8, 2.6, 4];

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
      if (Number.isNaN(fLow)) return { found: false, volumeL: 0, evaluations }; // over before it began
      return { ...refine(f, low, fLow, v, value, expectedL), evaluations };
    }
    low = v;
    fLow = value;
  }
  return { found: false, volumeL: 0, evaluations };
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
  for (let step = 2e-4 * scaleL; step < 4 * scaleL; step *= 3) {
    const far = Math.max(0, fromL + direction * step);
    const value = criterion(far);
    if (!Number.isFinite(value)) return null;
    if (direction === -1 ? value < 0 : value >= 0) {
      const [low, high] = direction === -1 ? [far, near] : [near, far];
      return bisect(criterion, low, high);
    }
    near = far;
    if (far === 0) return 0;
  }
  return null;
}

/** A few halvings are enough for the edge of an observer's band. */
function bisect(criterion: (volumeL: number) => number, lowStart: number, highStart: number): number {
  let low = lowStart;
  let high = highStart;
  for (let i = 0; i < 5; i++) {
    const mid = (low + high) / 2;
    if (criterion(mid) >= 0) high = mid;
    else low = mid;
  }
  return (low + high) / 2;
}
