/** Values in a class of the input, and classes at most: enough to follow a bend, few enough to average out what else varies. */
const PER_CLASS = 25;
const MOST_CLASSES = 20;

/**
 * Share of the variance of `y` that goes with `x` alone, 0 to 1: the correlation ratio of `y` over classes of equal count of `x`, less what chance
 * gives (T. L. Kelley, Proc. Natl. Acad. Sci. 21 (1935) 554). It sees bends as well as slopes. Pairs whose `y` is not finite are left out;
 * 0 where fewer than 50 are left or `y` does not vary.
 */
export function varianceShare(x: ArrayLike<number>, y: ArrayLike<number>): number {
  const order = Array.from({ length: y.length }, (_, i) => i)
    .filter((i) => Number.isFinite(y[i]))
    .sort((a, b) => x[a]! - x[b]! || a - b);
  const n = order.length;
  const classes = Math.min(MOST_CLASSES, Math.floor(n / PER_CLASS));
  if (classes < 2) return 0;
  const mean = order.reduce((sum, i) => sum + y[i]!, 0) / n;
  const total = order.reduce((sum, i) => sum + (y[i]! - mean) ** 2, 0);
  if (!(total > 0)) return 0;
  let between = 0;
  for (let c = 0; c < classes; c++) {
    const members = order.slice(Math.floor((c * n) / classes), Math.floor(((c + 1) * n) / classes));
    const own = members.reduce((sum, i) => sum + y[i]!, 0) / members.length;
    between += members.length * (own - mean) ** 2;
  }
  const within = (total - between) / (n - classes);
  return Math.max(0, 1 - within / (total / (n - 1)));
}

/** Linear correlation of `x` and `y` over the pairs whose `y` is finite, -1 to 1; 0 where either does not vary. */
export function correlation(x: ArrayLike<number>, y: ArrayLike<number>): number {
  let n = 0;
  let [mx, my] = [0, 0];
  for (let i = 0; i < y.length; i++)
    if (Number.isFinite(y[i])) {
      n++;
      mx += x[i]!;
      my += y[i]!;
    }
  mx /= n;
  my /= n;
  let [xx, yy, xy] = [0, 0, 0];
  for (let i = 0; i < y.length; i++)
    if (Number.isFinite(y[i])) {
      xx += (x[i]! - mx) ** 2;
      yy += (y[i]! - my) ** 2;
      xy += (x[i]! - mx) * (y[i]! - my);
    }
  return xx > 0 && yy > 0 ? xy / Math.sqrt(xx * yy) : 0;
}

/** Rank of each finite value, 0 the least, equal ones in the order in which they stand; NaN for the others. A few far values then decide nothing. */
export function ranks(values: ArrayLike<number>): Float64Array {
  const out = new Float64Array(values.length).fill(Number.NaN);
  Array.from({ length: values.length }, (_, i) => i)
    .filter((i) => Number.isFinite(values[i]))
    .sort((a, b) => values[a]! - values[b]! || a - b)
    .forEach((i, rank) => (out[i] = rank));
  return out;
}
