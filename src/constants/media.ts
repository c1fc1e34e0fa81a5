/** The ions of the background in which a printed value was measured, by the footnote numbers of NIST SRD 46 that are resolved. */
const FOOTNOTE_MEDIA: Readonly<Record<string, string>> = {
  "2": "NaClO4",
  "6": "NaCl",
  "10": "NaNO3",
  "12": "KCl",
  "20": "KNO3",
  "47": "Na+ background",
  "48": "K+ background",
  "49": "NH4+ background",
  "53": "tetraalkylammonium background",
  "54": "tetraalkylammonium background",
};

/**
 * The background of a printed value in words, from its footnote: undefined where there is none, and for a number whose meaning is
 * not known here the number itself, so that nothing is lost.
 */
export function mediumOfFootnote(footnote: string): string | undefined {
  if (footnote === "") return undefined;
  return FOOTNOTE_MEDIA[footnote] ?? `footnote ${footnote} of the compilation`;
}

/** Backgrounds whose cation binds complexones and polyanions differently from potassium. */
const OTHER_BACKGROUNDS: ReadonlySet<string> = new Set([
  "NaClO4",
  "NaCl",
  "NaNO3",
  "Na+ background",
  "NH4+ background",
  "tetraalkylammonium background",
]);

/** True for a background that is stated and is not potassium, the background this program keeps to; unstated ones are taken as they are. */
export function isOtherBackground(medium: string | undefined): boolean {
  return medium !== undefined && OTHER_BACKGROUNDS.has(medium);
}
