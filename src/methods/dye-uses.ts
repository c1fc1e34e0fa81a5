import type { ComponentId, IndicatorRecord, IndicatorUse } from "../constants/knowledge.ts";

/** How firmly the dye's use for these ions in this mode at this pH is on record. */
export type UseStanding = "published" | "analogous" | "none";

export type Window = readonly [number, number];
export const overlap = (a: Window, b: Window): Window | null => {
  const low = Math.max(a[0], b[0]);
  const high = Math.min(a[1], b[1]);
  return high - low >= -1e-9 ? [low, high] : null;
};

/** The pH a bench would set inside a window: a half unit near the middle if there is one, else a tenth. */
export function benchPH(window: Window): number {
  const middle = (window[0] + window[1]) / 2;
  const half = Math.round(middle * 2 - 0.01) / 2; // a tie goes to the lower: pH 10, not 10.5
  const inner = (window[1] - window[0]) / 4;
  if (half >= window[0] + inner / 2 && half <= window[1] - inner / 2) return half;
  return Math.round(middle * 10) / 10;
}

/** A use that only one recollection knows stands no firmer than an analogy. */
export const standingOf = (use: IndicatorUse): UseStanding =>
  use.detail.includes("second recollection only") ? "analogous" : "published";

export interface DyeUse {
  readonly window: Window;
  readonly use: IndicatorUse;
  readonly basis: "read" | "memory";
}

export const basisOf = (use: IndicatorUse): "read" | "memory" => (use.provenance.basis === "read" ? "read" : "memory");

/** pH windows in which the dye is in use for all of `ions` in this mode (one record for all, or one for each, overlapping). */
export function usesFor(indicator: IndicatorRecord, ions: readonly ComponentId[], modes: readonly string[]): DyeUse[] {
  const rows = indicator.uses.filter((u) => modes.includes(u.mode));
  const whole = rows.filter(
    (u) => ions.every((ion) => u.ions.includes(ion)) && u.ions.length <= ions.length + (ions.length > 1 ? 1 : 0),
  );
  const out: DyeUse[] = whole.map((use) => ({ window: use.pH, use, basis: basisOf(use) }));
  if (ions.length > 1 && out.length === 0) {
    let windows: DyeUse[] = rows
      .filter((u) => u.ions.includes(ions[0]!))
      .map((use) => ({ window: use.pH, use, basis: basisOf(use) }));
    for (const ion of ions.slice(1))
      windows = windows.flatMap((w) =>
        rows
          .filter((u) => u.ions.includes(ion))
          .flatMap((u) => {
            const window = overlap(w.window, u.pH);
            return window ? [{ window, use: w.use, basis: w.basis }] : [];
          }),
      );
    out.push(...windows);
  }
  // The same window recalled twice is one use; the wider of nearly equal ones stays.
  const kept: DyeUse[] = [];
  for (const u of out.sort(
    (a, b) => b.window[1] - b.window[0] - (a.window[1] - a.window[0]) || (a.basis === "read" ? -1 : 1),
  )) {
    const same = kept.find(
      (k) =>
        (k.use.titrant ?? "") === (u.use.titrant ?? "") &&
        k.use.chelate === u.use.chelate &&
        Math.abs(benchPH(k.window) - benchPH(u.window)) < 0.6,
    );
    if (!same) kept.push(u);
  }
  return kept;
}
