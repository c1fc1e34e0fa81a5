import type { Brief } from "../../recommendation/contract.ts";
import type { Names } from "../format/names.ts";
import { amount, percent } from "../format/numbers.ts";
import { joinMarkup, type Markup } from "../render/markup.ts";

/** The question as it was understood, for the margin beside the answer. */
export function questionRows(brief: Brief, names: Names): readonly { label: string; value: Markup }[] {
  const level = (id: string, c: Brief["analytes"][number]["concentration"]): Markup =>
    joinMarkup([names.name(id), ` ${amount(c.value)}`]);
  const lab = brief.laboratory;
  const rows: [string, Markup][] = [
    [
      "To determine",
      joinMarkup(
        brief.analytes.map((a) => level(a.ion, a.concentration)),
        brief.analytes.some((a) => a.report === "sum") ? " + " : ", ",
      ),
    ],
    [
      "Also in it",
      brief.matrix.length === 0
        ? joinMarkup(["nothing stated"])
        : joinMarkup(
            brief.matrix.map((m) => level(m.component, m.concentration)),
            ", ",
          ),
    ],
    ["Portion", joinMarkup([`${brief.portion.volumeML} mL, made up to ${brief.portion.titrationVolumeML} mL`])],
    ["Asked for", joinMarkup([`${percent(brief.requirement.relativeExpandedUncertaintyPercent)} expanded (k = 2)`])],
    [
      "Laboratory",
      joinMarkup([
        `${brief.laboratory.buretteML} mL burette, ${brief.temperatureC} °C, ${lab.heating ? "heating possible" : "no heating"}, end point ${lab.detection.join(" or ")}`,
      ]),
    ],
  ];
  if (lab.avoid.length > 0)
    rows.push([
      "Never proposed",
      joinMarkup(
        lab.avoid.map((id) => names.name(id)),
        ", ",
      ),
    ]);
  if (lab.available)
    rows.push([
      "Shelf",
      joinMarkup(
        lab.available.map((id) => names.name(id)),
        ", ",
      ),
    ]);
  return rows.map(([label, value]) => ({ label, value }));
}
