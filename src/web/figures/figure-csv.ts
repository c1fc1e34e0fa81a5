import type { MethodLimits } from "../../recommendation/contract.ts";
import type { FigureSeries } from "../services.ts";

const cell = (value: string | number | null): string => {
  if (value === null) return "";
  const text = String(value);
  const safe = typeof value === "string" && /^[=+@\-\t]/.test(text) ? `'${text}` : text;
  return /[",\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
};
const rows = (table: readonly (readonly (string | number | null)[])[]): string =>
  `${table.map((r) => r.map(cell).join(",")).join("\r\n")}\r\n`;

/** The log K' figure as CSV: pH, then one column for each line. */
export function logKCsv(series: FigureSeries["logK"]): string {
  return rows([
    ["pH", ...series.lines.map((l) => `log K' ${l.label}`)],
    ...series.pH.map((pH, i) => [pH, ...series.lines.map((l) => l.values[i] ?? null)]),
  ]);
}

/** What an electrode or a photometer shows as CSV: volume in mL, mV or relative absorbance. */
export function readingCsv(series: NonNullable<FigureSeries["reading"]>): string {
  const name = series.kind === "potential" ? "E / mV against the end point" : "A / A of full colour";
  return rows([["titrant added / mL", name], ...series.volumeML.map((v, i) => [v, series.values[i] ?? null])]);
}

/** Tolerance limits as CSV: component, what is present and borne in mol/L of the sample, and what ends it. */
export function limitsCsv({ limits }: MethodLimits): string {
  return rows([
    ["component", "present / (mol/L)", "limit / (mol/L)", "with masking", "ends by"],
    ...limits.map((l) => [l.component, l.presentMolPerL, l.limitMolPerL, l.withMasking ? "yes" : "no", l.endsBy]),
  ]);
}

/** The titration curve as CSV: volume in mL, pM. */
export function curveCsv(series: FigureSeries["curve"]): string {
  return rows([
    ["titrant added / mL", `p(${series.label})`],
    ...series.volumeML.map((v, i) => [v, series.pM[i] ?? null]),
  ]);
}
