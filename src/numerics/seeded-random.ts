/** A reproducible stream of random numbers. */
export interface SeededRandom {
  /** Uniform integer in [0, 2^32). */
  readonly nextUint32: () => number;
  /** Uniform in [0, 1), 53 random bits. */
  readonly uniform: () => number;
  /** Standard normal deviate (mean 0, standard deviation 1). */
  readonly normal: () => number;
  /** Uniform integer in [0, bound); bound from 1 to 2^32. Unbiased by rejection. */
  readonly integerBelow: (bound: number) => number;
}

const MULTIPLIER_HIGH = 0x5851f42d; // 6364136223846793005, as two 32-bit halves
const MULTIPLIER_LOW = 0x4c957f2d;

/**
 * A random generator that gives the same figures for the same `seed` and `stream` everywhere: PCG32 (XSH RR 64/32).
 *
 * `seed` and `stream`: integers from 0 to 2^53 - 1; streams of one seed are independent sequences, one per worker or draw.
 * Normal deviates by the polar method (Marsaglia and Bray 1964). Algorithm: M. E. O'Neill, "PCG: a family of simple fast
 * space-efficient statistically good algorithms for random number generation", HMC-CS-2014-0905 (2014).
 */
export function seededRandom(seed: number, stream = 0): SeededRandom {
  const incrementLow = ((stream << 1) | 1) >>> 0;
  const incrementHigh = Math.floor(stream / 2147483648) >>> 0;
  let high = 0;
  let low = 0;
  const advance = (): void => {
    // state = state * multiplier + increment, modulo 2^64
    const lowLow = (low & 0xffff) * (MULTIPLIER_LOW & 0xffff);
    const crossA = (low >>> 16) * (MULTIPLIER_LOW & 0xffff) + ((lowLow >>> 16) >>> 0);
    const crossB = (low & 0xffff) * (MULTIPLIER_LOW >>> 16) + (crossA % 65536);
    const carry = (low >>> 16) * (MULTIPLIER_LOW >>> 16) + Math.floor(crossA / 65536) + Math.floor(crossB / 65536);
    const productLow = (Math.imul(low, MULTIPLIER_LOW) >>> 0) + incrementLow;
    const productHigh =
      Math.imul(high, MULTIPLIER_LOW) +
      Math.imul(low, MULTIPLIER_HIGH) +
      incrementHigh +
      (productLow > 0xffffffff ? 1 : 0);
    low = productLow >>> 0;
    high = (productHigh + (carry % 4294967296)) >>> 0;
  };
  const nextUint32 = (): number => {
    const oldHigh = high;
    const oldLow = low;
    advance();
    // ((state >> 18) ^ state) >> 27, low 32 bits, rotated right by state >> 59
    const mixedHigh = (oldHigh ^ (oldHigh >>> 18)) >>> 0;
    const mixedLow = (oldLow ^ ((oldHigh << 14) | (oldLow >>> 18))) >>> 0;
    const word = ((mixedHigh << 5) | (mixedLow >>> 27)) >>> 0;
    const turn = oldHigh >>> 27;
    return ((word >>> turn) | (word << (-turn & 31))) >>> 0;
  };
  advance();
  const seedLow = seed >>> 0;
  const sum = low + seedLow;
  low = sum >>> 0;
  high = (high + Math.floor(seed / 4294967296) + (sum > 0xffffffff ? 1 : 0)) >>> 0;
  advance();
  const uniform = (): number => ((nextUint32() >>> 5) * 67108864 + (nextUint32() >>> 6)) / 9007199254740992;
  let spare: number | null = null;
  const normal = (): number => {
    if (spare !== null) {
      const held = spare;
      spare = null;
      return held;
    }
    for (;;) {
      const u = 2 * uniform() - 1;
      const v = 2 * uniform() - 1;
      const square = u * u + v * v;
      if (square >= 1 || square === 0) continue;
      const factor = Math.sqrt((-2 * Math.log(square)) / square);
      spare = v * factor;
      return u * factor;
    }
  };
  const integerBelow = (bound: number): number => {
    const limit = 4294967296 - (4294967296 % bound);
    for (;;) {
      const value = nextUint32();
      if (value < limit) return value % bound;
    }
  };
  return { nextUint32, uniform, normal, integerBelow };
}
