/** A reading of a spelling as a formula with a charge. */
export interface ChargedReading {
  readonly formula: string;
  readonly charge: number;
}

const SUPERSCRIPTS: Readonly<Record<string, string>> = {
  "\u2070": "0",
  "\u00b9": "1",
  "\u00b2": "2",
  "\u00b3": "3",
  "\u2074": "4",
  "\u2075": "5",
  "\u2076": "6",
  "\u2077": "7",
  "\u2078": "8",
  "\u2079": "9",
  "\u207a": "+",
  "\u207b": "-",
};

const SUBSCRIPT_ZERO = 0x2080;
const SUBSCRIPT_NINE = 0x2089;

/**
 * A spelling in plain characters: superscripts after a caret (once), subscripts as digits, every minus and dash as "-", markup and spaces around
 * charges gone, "ion" and "ions" dropped.
 */
export function plainSpelling(text: string): string {
  let out = "";
  let raised = false;
  for (const char of text.normalize("NFC").trim()) {
    const up = SUPERSCRIPTS[char];
    const code = char.codePointAt(0)!;
    if (up !== undefined) {
      if (!raised) out += "^";
      out += up;
    } else if (code >= SUBSCRIPT_ZERO && code <= SUBSCRIPT_NINE) out += String(code - SUBSCRIPT_ZERO);
    else if ("\u2212\u2010\u2011\u2012\u2013\u2014\ufe63\uff0d".includes(char)) out += "-";
    else if (char === "\uff0b") out += "+";
    else if (!"{}_$\\".includes(char)) out += char;
    raised = up !== undefined;
  }
  return out
    .replace(/\s+ions?$/i, "")
    .replace(/\s+/g, " ")
    .replace(/ (?=[\^+]|\d*[+-]|\()/g, "");
}

/** A spelling without case, hyphens, spaces and the difference between sulph- and sulf-, for comparing names. */
export function foldSpelling(text: string): string {
  return text
    .toLowerCase()
    .replaceAll("sulph", "sulf")
    .replace(/(?<=[a-z])-(?=[a-z])/g, " ")
    .replaceAll(/\s+/g, " ");
}

/**
 * Every way to read a plain spelling as formula and charge: "SO4^2-", "SO4^-2", "SO4(2-)", "SO4--", "SO4-2" have one; "SO42-" has three (SO4 2-, SO42 -,
 * SO 42-), of which a table knows one. Neutral spellings have none. Charges beyond 8 are no charges.
 */
export function chargedReadings(plain: string): ChargedReading[] {
  const found: ChargedReading[] = [];
  const push = (formula: string | undefined, digits: string | undefined, sign: string | undefined): void => {
    if (formula === undefined || formula === "" || sign === undefined) return;
    const size = digits === undefined || digits === "" ? 1 : Number(digits);
    if (size >= 1 && size <= 8) found.push({ formula, charge: sign === "-" ? -size : size });
  };
  let match = /^(.+?)\^(\d*)([+-])$/.exec(plain);
  if (match !== null) push(match[1], match[2], match[3]);
  match = /^(.+?)\^([+-])(\d*)$/.exec(plain);
  if (match !== null) push(match[1], match[3], match[2]);
  match = /^(.+?)\(\^?(\d*)([+-])\)$/.exec(plain);
  if (match !== null) push(match[1], match[2], match[3]);
  match = /^(.+?)\(\^?([+-])(\d+)\)$/.exec(plain);
  if (match !== null) push(match[1], match[3], match[2]);
  if (found.length > 0) return found;
  match = /^(.+?)(\++|-+)$/.exec(plain);
  if (match !== null) {
    const [, before, signs] = match as unknown as [string, string, string];
    if (signs.length > 1) push(before, String(signs.length), signs[0]);
    else {
      const digits = /\d*$/.exec(before)![0];
      for (let kept = 0; kept <= digits.length; kept++) {
        push(before.slice(0, before.length - digits.length + kept), digits.slice(kept), signs);
      }
    }
  }
  match = /^(.+?)([+-])(\d)$/.exec(plain);
  if (match !== null) push(match[1], match[3], match[2]);
  return found;
}
