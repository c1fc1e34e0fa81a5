/** How a number may be typed in a form: a decimal point, an optional power of ten; nothing else, and never an empty text. */
const DECIMAL = /^[+-]?(?:\d+(?:\.\d+)?|\.\d+)(?:[eE][+-]?\d{1,3})?$/;

export type DecimalReading =
  | { readonly ok: true; readonly value: number }
  | { readonly ok: false; readonly message: string };

/** Reads what was typed as a finite number, or says what is wrong with it. */
export function readDecimal(typed: string): DecimalReading {
  const text = typed.trim().replace("\u2212", "-");
  if (text === "") return { ok: false, message: "a number is missing" };
  if (/^[+-]?\d+,\d+$/.test(text))
    return { ok: false, message: `write the decimal with a point, not a comma: “${text}”` };
  if (!DECIMAL.test(text)) return { ok: false, message: `“${text}” is not a number; write 0.25 or 2.5e-4` };
  const value = Number(text);
  if (!Number.isFinite(value)) return { ok: false, message: `“${text}” is too large` };
  return { ok: true, value };
}
