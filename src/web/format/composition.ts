import { Markup, joinMarkup } from "../render/markup.ts";
import type { Names } from "./names.ts";

/** What a species is made of, from its components: "Zn2+ + 2 ammonia − H+". */
export function compositionMarkup(components: Readonly<Record<string, number>>, names: Names): Markup {
  const parts = Object.entries(components).sort(([, a], [, b]) => Number(a < 0) - Number(b < 0));
  return joinMarkup(
    parts.flatMap(([id, n], i) => {
      const sign = n < 0 ? (i === 0 ? "\u2212" : " \u2212 ") : i === 0 ? "" : " + ";
      const count = Math.abs(n) === 1 ? "" : `${Math.abs(n)} `;
      return [`${sign}${count}`, names.component(id)];
    }),
  );
}
