/** One probe of a search: where, and by how much the bound is exceeded there (0 or less: it holds; Infinity: nothing can be read). */
export interface Probe {
  readonly x: number;
  readonly excess: number;
}

/** The last place found to hold and the first found to break, as near to each other as was asked for. */
export interface Break {
  readonly holds: Probe;
  readonly breaks: Probe;
  readonly evaluations: number;
}

export interface BreakOptions {
  /** How near the two places come: their ratio is at most 1 + this. */
  readonly relative: number;
  /** Places to look at first, best guess first; those outside the bracket are passed over. */
  readonly guesses?: readonly number[];
  readonly maxEvaluations?: number; // default 60
}

/** A step that leaves more than this part of the logarithm of the bracket counts as slow; */
const SLOW_PART = 0.5;
/** after this many of them the straight line has nothing to say, and the bracket is halved from there on. */
const SLOW_STEPS = 3;

/**
 * Narrows a bracket of positive x in which a bound is kept at one end and broken at the other.
 *
 * Between finite excesses by regula falsi in x (an excess that grows with an amount is nearly linear in it), the Illinois form of it (M. Dowell,
 * P. Jarratt, BIT 11 (1971) 168), aimed a hair to the side of the end that has not moved, so that both ends close in; by halving log x where the
 * excess jumps or the bracket closes slowly.
 *
 * @param excess at x; need not be continuous nor finite
 * @param holds an x with excess 0 or less
 * @param breaks an x with excess above 0; may lie on either side of `holds`
 */
export function findBreak(excess: (x: number) => number, holds: Probe, breaks: Probe, options: BreakOptions): Break {
  const { relative, guesses = [], maxEvaluations = 60 } = options;
  const queue = guesses.flatMap((g) => [g * (1 - relative / 3), g * (1 + relative / 3)]);
  let good = holds;
  let bad = breaks;
  let evaluations = 0;
  let slow = 0;
  let lastMoved: "good" | "bad" | null = null;
  // The weight of an end that stands still is halved each time, so that the next step overtakes the root.
  let weight = 1;
  const width = (): number => Math.abs(Math.log(bad.x / good.x));
  const inside = (x: number): boolean => x > Math.min(good.x, bad.x) && x < Math.max(good.x, bad.x);
  while (width() > Math.log1p(relative) && evaluations < maxEvaluations) {
    const before = width();
    let x: number | undefined = queue.shift();
    while (x !== undefined && !inside(x)) x = queue.shift();
    const guessed = x !== undefined;
    x ??= slow >= SLOW_STEPS ? Math.sqrt(good.x * bad.x) : nextOf(good, bad, lastMoved, weight, relative);
    const probe: Probe = { x, excess: excess(x) };
    evaluations++;
    const moved = probe.excess <= 0 ? "good" : "bad";
    weight = moved === lastMoved ? weight / 2 : 1;
    lastMoved = moved;
    if (lastMoved === "good") good = probe;
    else bad = probe;
    if (!guessed && width() > SLOW_PART * before) slow++;
  }
  return { holds: good, breaks: bad, evaluations };
}

/** Where to look next between the two: by a straight line, a hair towards the end that stood still last time. */
function nextOf(good: Probe, bad: Probe, lastMoved: "good" | "bad" | null, weight: number, relative: number): number {
  const halved = Math.sqrt(good.x * bad.x);
  if (!Number.isFinite(bad.excess) || !Number.isFinite(good.excess) || bad.excess === good.excess) return halved;
  const goodExcess = good.excess * (lastMoved === "bad" ? weight : 1);
  const badExcess = bad.excess * (lastMoved === "good" ? weight : 1);
  const root = good.x + ((bad.x - good.x) * -goodExcess) / (badExcess - goodExcess);
  const towards = lastMoved === "good" ? bad.x : lastMoved === "bad" ? good.x : null;
  const hair = towards === null ? 1 : towards > root ? 1 + relative / 3 : 1 - relative / 3;
  const [low, high] = good.x < bad.x ? [good.x, bad.x] : [bad.x, good.x];
  const margin = 1 + relative / 4;
  const x = Math.min(Math.max(root * hair, low * margin), high / margin);
  return x > low && x < high ? x : halved;
}
