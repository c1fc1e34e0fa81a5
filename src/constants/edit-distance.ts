/**
 * Number of insertions, deletions, replacements and swaps of neighbours that turn `a` into `b` (Damerau-Levenshtein, restricted);
 * stops counting beyond `limit`.
 */
export function editDistance(a: string, b: string, limit: number): number {
  if (Math.abs(a.length - b.length) > limit) return limit + 1;
  let before: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    let best = i;
    for (let j = 1; j <= b.length; j++) {
      let cost = Math.min(row[j - 1]! + 1, last[j]! + 1, last[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) cost = Math.min(cost, before[j - 2]! + 1);
      row.push(cost);
      best = Math.min(best, cost);
    }
    if (best > limit) return limit + 1;
    before = last;
    last = row;
  }
  return last[b.length]!;
}

const OFFERED = 3;

/**
 * The canonical spellings whose folded spellings lie nearest to `folded`: at most three, best first, none that differs in more than a third of
 * its characters (at least one, so that one slip in a symbol is caught).
 */
export function nearestSpellings(folded: string, canonical: ReadonlyMap<string, string>): string[] {
  const limit = Math.max(1, Math.floor(folded.length / 3));
  const distances = new Map<string, number>();
  for (const [spelling, target] of canonical) {
    const distance = editDistance(folded, spelling, limit);
    if (distance > limit || distance >= Math.max(folded.length, spelling.length)) continue;
    distances.set(target, Math.min(distance, distances.get(target) ?? Number.POSITIVE_INFINITY));
  }
  return [...distances]
    .sort(([a, x], [b, y]) => x - y || (a < b ? -1 : 1))
    .slice(0, OFFERED)
    .map(([target]) => target);
}
