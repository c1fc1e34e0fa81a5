/** Numbers as text for people: true minus signs, powers of ten, amounts in the unit that reads best. Plain text, no markup. */

const MINUS = "\u2212";
const SUPERSCRIPT: Readonly<Record<string, string>> = {
  "-": "⁻",
  "0": "⁰",
  "1": "¹",
  "2": "²",
  "3": "³",
  "4": "⁴",
  "5": "⁵",
  "6": "⁶",
  "7": "⁷",
  "8": "⁸",
  "9": "⁹",
};
const NONE = "–";

/** An integer as superscript characters: -5 gives "⁻⁵". */
export function superscript(text: string): string {
  return text.replace(/[-\d]/g, (c) => SUPERSCRIPT[c] ?? c);
}

/** A number with a fixed count of decimals; "–" when there is none. */
export function fixed(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return NONE;
  const text = value.toFixed(decimals);
  return (Number(text) === 0 ? text.replace("-", "") : text).replace("-", MINUS);
}

/** As `fixed`, with an explicit plus for positive values: a signed bias. */
export function signed(value: number | null | undefined, decimals: number): string {
  const text = fixed(value, decimals);
  return value !== null && value !== undefined && Number(value.toFixed(decimals)) > 0 ? `+${text}` : text;
}

/** A number to a count of significant figures, as a power of ten when it is very small or large. */
export function significant(value: number | null | undefined, figures: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return NONE;
  if (value === 0) return "0";
  const [mantissa = "", exponent = "0"] = value.toExponential(figures - 1).split("e");
  const power = Number(exponent);
  if (power < -3 || power > 4) return `${mantissa.replace("-", MINUS)} × 10${superscript(String(power))}`;
  return fixed(value, Math.max(0, figures - 1 - power));
}

/** An amount concentration (mol/L) in the unit that reads best: "50.0 mmol/L". */
export function amount(molPerL: number | null | undefined, figures = 3): string {
  if (molPerL === null || molPerL === undefined || !Number.isFinite(molPerL)) return NONE;
  if (molPerL === 0) return "0 mol/L";
  const size = Math.abs(molPerL);
  if (size >= 0.1) return `${significant(molPerL, figures)} mol/L`;
  if (size >= 1e-4) return `${significant(molPerL * 1e3, figures)} mmol/L`;
  if (size >= 1e-7) return `${significant(molPerL * 1e6, figures)} µmol/L`;
  return `${significant(molPerL, figures)} mol/L`;
}

/** A percentage with as many decimals as its size asks for. */
export function percent(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return NONE;
  if (value > 0 && value < SMALLEST_PERCENT) return `<${SMALLEST_PERCENT} %`;
  return `${fixed(value, percentDecimals(value))} %`;
}

/** As `percent`, with an explicit plus for positive values. */
export function signedPercent(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return NONE;
  return `${signed(value, percentDecimals(value))} %`;
}

/** Below this a share is said to be smaller. */
const SMALLEST_PERCENT = 0.001;

function percentDecimals(value: number): number {
  const size = Math.abs(value) < SMALLEST_PERCENT / 2 ? 0 : Math.abs(value);
  if (size >= 100) return 0;
  if (size >= 10) return 1;
  if (size >= 0.1 || size === 0) return 2;
  return 3;
}
