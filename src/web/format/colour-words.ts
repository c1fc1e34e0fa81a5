import { Markup } from "../render/markup.ts";

/** Our own approximations of the colours chemists name; a swatch never stands without the words. */
const HUES: readonly (readonly [word: string, hex: string])[] = [
  ["yellow-green", "#b5c334"],
  ["lemon yellow", "#efe04a"],
  ["orange-yellow", "#eeb13c"],
  ["orange-red", "#d9532c"],
  ["red-orange", "#d9532c"],
  ["reddish orange", "#d9633c"],
  ["orange-pink", "#ea8f72"],
  ["wine-red", "#8a1f3d"],
  ["wine red", "#8a1f3d"],
  ["claret", "#8a1f3d"],
  ["violet-red", "#a42a6b"],
  ["purple-red", "#a42a6b"],
  ["red-violet", "#8f2a7c"],
  ["reddish violet", "#8f2a7c"],
  ["blue-violet", "#4b3a9b"],
  ["violet-blue", "#4b3a9b"],
  ["blue-green", "#1f8a8c"],
  ["green-blue", "#1f8a8c"],
  ["grey-blue", "#7d8fa8"],
  ["pink-red", "#d0446a"],
  ["rose-red", "#d0446a"],
  ["reddish pink", "#df7f98"],
  ["pale pink", "#f0c9d3"],
  ["pale blue", "#b4cbe6"],
  ["pale yellow", "#f4eeb0"],
  ["pale violet", "#d3c4e6"],
  ["dark blue", "#1b2f73"],
  ["deep blue", "#1f3a93"],
  ["bright yellow", "#f2df2e"],
  ["magenta", "#b52a83"],
  ["crimson", "#b01c3a"],
  ["purple", "#7a2a86"],
  ["violet", "#6b3fa0"],
  ["colourless", "#ffffff"],
  ["yellow", "#ecd23c"],
  ["orange", "#e2852b"],
  ["brown", "#7d4a26"],
  ["green", "#3d8b4d"],
  ["blue", "#2a52b0"],
  ["pink", "#e58aa4"],
  ["rose", "#dd6a8a"],
  ["grey", "#8b9096"],
  ["red", "#c22f33"],
];

/** The colour (hex) that a description names first, or null where it names none that we know. */
export function colourHex(words: string): string | null {
  const text = words.toLowerCase();
  let best: { at: number; length: number; hex: string } | null = null;
  for (const [word, hex] of HUES) {
    const at = text.search(new RegExp(`(?<![a-z-])${word}(?![a-z-])`));
    if (at < 0) continue;
    if (!best || at < best.at || (at === best.at && word.length > best.length)) best = { at, length: word.length, hex };
  }
  return best?.hex ?? null;
}

/** A small square of the colour (presentation attributes only, so no inline style) followed by the words themselves. */
export function colourMarkup(words: string, set: (text: string) => Markup): Markup {
  const hex = colourHex(words);
  const label = set(words).html;
  if (hex === null) return new Markup(label);
  return new Markup(
    `<span class="colour"><svg class="swatch" viewBox="0 0 12 12" width="12" height="12" aria-hidden="true" focusable="false"><rect x="0.5" y="0.5" width="11" height="11" fill="${hex}" stroke="#1d2a44"/></svg>${label}</span>`,
  );
}
