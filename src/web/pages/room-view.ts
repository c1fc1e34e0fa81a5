import type { RecommendedMethod } from "../../recommendation/contract.ts";
import { LIMIT_END_WORDS } from "../../recommendation/limit-words.ts";
import { amount, significant } from "../format/numbers.ts";
import type { Names } from "../format/names.ts";
import type { Markup } from "../render/markup.ts";

export interface RoomView {
  readonly component: Markup;
  readonly present: string;
  readonly without: string;
  readonly withMasking: string;
  readonly room: string;
}

type Limit = RecommendedMethod["tolerance"][number];

const level = (limit: Limit | undefined): string =>
  limit === undefined
    ? "–"
    : limit.limitMolPerL === 0
      ? "none"
      : `${limit.endsBy === "none" ? "over " : ""}${amount(limit.limitMolPerL, 2)}`;

/** For each component: what is present, up to which level the requirement is met, how much room that leaves and what ends it. */
export function roomViews(tolerance: readonly Limit[], names: Names): readonly RoomView[] {
  const components = [...new Set(tolerance.map((t) => t.component))];
  return components.map((component) => {
    const of = (withMasking: boolean): Limit | undefined =>
      tolerance.find((t) => t.component === component && t.withMasking === withMasking);
    const limit = of(true) ?? of(false)!;
    return {
      component: names.link(component),
      present: limit.presentMolPerL === 0 ? "–" : amount(limit.presentMolPerL),
      without: level(of(false)),
      withMasking: level(of(true)),
      room: roomWords(limit),
    };
  });
}

function roomWords({ limitMolPerL, presentMolPerL, endsBy }: Limit): string {
  if (limitMolPerL === 0) return "none: missed even with a trace of it";
  const end = LIMIT_END_WORDS[endsBy];
  if (presentMolPerL === 0) return `none present; ${end}`;
  const factor = limitMolPerL / presentMolPerL;
  const room =
    factor < 1
      ? "over the limit"
      : factor > 1000
        ? "more than a thousandfold"
        : `${significant(factor, 2)} times the level present`;
  return `${room}; ${end}`;
}
