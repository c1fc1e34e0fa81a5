import type { Recommendation, RecommendedMethod } from "../../recommendation/contract.ts";
import type { Names } from "../format/names.ts";
import { fixed, percent, signed, signedPercent } from "../format/numbers.ts";
import { MODE_WORDS, wordsOf } from "../format/words.ts";
import { joinMarkup, type Markup } from "../render/markup.ts";

/** Most columns that stand side by side, and how many of them are the first by rank. */
const COLUMNS = 6;
const FIRST = 3;

/** The methods that are compared: the first three, then the best of every mode not among them, then on by rank; in order of rank. */
export function rivalColumns(methods: readonly RecommendedMethod[]): readonly RecommendedMethod[] {
  const chosen = new Set(methods.slice(0, FIRST));
  for (const method of methods)
    if (chosen.size < COLUMNS && ![...chosen].some((c) => c.mode === method.mode)) chosen.add(method);
  for (const method of methods) if (chosen.size < COLUMNS) chosen.add(method);
  return methods.filter((m) => chosen.has(m));
}

/** Rival methods in columns over the same rows, each leading to itself laid out in full. */
export function rivalsTable(
  recommendation: Recommendation,
  names: Names,
  shown: RecommendedMethod | null,
  hrefOf: (id: string) => string,
): object {
  const methods = rivalColumns(recommendation.methods);
  const stageList = (m: RecommendedMethod, part: (s: RecommendedMethod["stages"][number]) => Markup): Markup =>
    joinMarkup(m.stages.map(part), "; then ");
  const row = (label: string, part: (m: RecommendedMethod) => Markup | string): object => ({
    label,
    cells: methods.map((m) => joinMarkup([part(m)])),
  });
  const others = recommendation.methods.filter((m) => !methods.includes(m));
  return {
    heads: methods.map((m) => ({ text: `${m.rank}`, href: hrefOf(m.id), current: m === shown })),
    rows: [
      row("Mode", (m) => wordsOf(MODE_WORDS, m.mode)),
      row("Titrant", (m) =>
        joinMarkup([
          names.name(m.titrant.id),
          ...(m.backTitrant ? [", back with ", names.name(m.backTitrant.id)] : []),
        ]),
      ),
      row("pH", (m) =>
        stageList(m, (s) => joinMarkup([`${fixed(s.pH.target, 1)} (${fixed(s.pH.low, 1)} to ${fixed(s.pH.high, 1)})`])),
      ),
      row("Buffer", (m) => stageList(m, (s) => names.name(s.buffer.id))),
      row("End point", (m) =>
        stageList(m, (s) => (s.indicator ? names.name(s.indicator.id) : joinMarkup([s.detection]))),
      ),
      row("Masking", (m) => {
        const agents = [...new Set(m.stages.flatMap((s) => s.masking.map((x) => x.agent)))];
        return agents.length === 0
          ? "none"
          : joinMarkup(
              agents.map((a) => names.name(a)),
              ", ",
            );
      }),
      row("Titre", (m) => `${fixed(m.predicted.titreML, 2)} mL`),
      row("Bias", (m) => signedPercent(m.predicted.biasPercent)),
      row("Expanded uncertainty", (m) => percent(m.predicted.relativeExpandedUncertaintyPercent)),
      row("Requirement", (m) => (m.meetsRequirement ? "kept" : "not kept")),
      row("Points from rules", (m) =>
        signed(
          m.scores.reduce((sum, s) => sum + s.weight, 0),
          1,
        ),
      ),
      row("Reservations", (m) => (m.reservations.length === 0 ? "none" : String(m.reservations.length))),
    ],
    more: others.map((m) => ({ text: names.set(m.summary), href: hrefOf(m.id) })),
  };
}
