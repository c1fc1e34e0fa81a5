import type { Recommendation } from "../../recommendation/contract.ts";
import { anchor, linkMarkup, reactionHref, type Names } from "../format/names.ts";
import { amount, fixed } from "../format/numbers.ts";
import { reactionMarkup } from "../format/typeset.ts";
import { BASIS_WORDS, wordsOf } from "../format/words.ts";
import { joinMarkup } from "../render/markup.ts";

/** Every constant an answer rests on, followed down to its reaction, record and source. */
export function constantViews(recommendation: Recommendation, names: Names): readonly object[] {
  return recommendation.constants.map((c) => ({
    species: names.set(c.species),
    value: fixed(c.log10Beta, 2),
    uncertainty: fixed(c.uncertainty, 2),
    evidence: c.evidence.map((e) => ({
      reaction: linkMarkup(reactionHref(e.reaction), reactionMarkup(e.text, names.set)),
      used: fixed(e.log10KUsed, 2),
      found: `${fixed(e.log10KFound, 2)} at ${amount(e.ionicStrengthMolPerL, 2)}, ${fixed(e.temperatureC, 0)} °C`,
      source: joinMarkup([
        linkMarkup(`/knowledge#source-${anchor(e.source)}`, e.source),
        `${e.record === null ? "" : ` ${e.record}`}, ${wordsOf(BASIS_WORDS, e.basis)}${e.passedOver === 0 ? "" : `; ${e.passedOver} passed over`}`,
      ]),
    })),
  }));
}
