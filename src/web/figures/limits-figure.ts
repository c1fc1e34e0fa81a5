import { scaleLog } from "d3-scale";
import type { MethodLimits } from "../../recommendation/contract.ts";
import type { Names } from "../format/names.ts";
import { amount, superscript } from "../format/numbers.ts";
import type { Markup } from "../render/markup.ts";
import { at, figureSvg, svgText } from "./frame.ts";

type Limit = MethodLimits["limits"][number];

/** One component of the figure: what is there and what is borne, mol/L in the sample. */
interface LimitLine {
  readonly component: string;
  readonly present: number;
  readonly with: Limit | null;
  readonly without: Limit | null;
}

const ROW = 28; // height of a line, in units of the figure
const TOP = 30;
const BOTTOM = 44;

const linesOf = (limits: readonly Limit[]): LimitLine[] =>
  [...new Set(limits.map((l) => l.component))].map((component) => {
    const own = limits.filter((l) => l.component === component);
    return {
      component,
      present: own[0]!.presentMolPerL,
      with: own.find((l) => l.withMasking) ?? null,
      without: own.find((l) => !l.withMasking) ?? null,
    };
  });

/** Tolerance limits against what is present, one component a line, levels on a logarithmic axis; null where there is nothing to draw. */
export function limitsFigure(id: string, limits: readonly Limit[], width: 700 | 350, names: Names): Markup | null {
  const lines = linesOf(limits);
  const levels = limits.flatMap((l) => [l.limitMolPerL, l.presentMolPerL]).filter((x) => x > 0);
  if (levels.length === 0) return null;
  const low = Math.floor(Math.log10(Math.min(...levels)));
  const high = Math.max(low + 1, Math.ceil(Math.log10(Math.max(...levels))));
  const [left, right] = [72, width - 26];
  const bottom = TOP + ROW * lines.length;
  const height = bottom + BOTTOM;
  const x = scaleLog([10 ** low, 10 ** high], [left, right]);
  const every = Math.max(1, Math.ceil((high - low) / (width > 500 ? 12 : 5)));
  const decades = Array.from({ length: high - low + 1 }, (_, i) => low + i);
  const body = [
    `<path class="axis" d="M${left} ${TOP - 6}V${bottom}H${right}"/>`,
    ...decades.map((d) => `<path class="grid" d="M${at(x(10 ** d))} ${TOP - 6}V${bottom}"/>`),
    ...decades
      .filter((d) => (d - low) % every === 0)
      .map(
        (d) =>
          `<path class="tick" d="M${at(x(10 ** d))} ${bottom}v5"/><text class="tick-text" x="${at(x(10 ** d))}" y="${bottom + 18}" text-anchor="middle">10${superscript(String(d))}</text>`,
      ),
    `<text class="axis-name" x="${right}" y="${height - 6}" text-anchor="end">level in the sample / (mol/L)</text>`,
    ...lines.map((line, i) => drawn(line, TOP + ROW * (i + 0.5), left, x, names)),
  ].join("");
  return figureSvg(
    id,
    { width, height, left, right: 26, top: TOP, bottom: BOTTOM },
    "Levels present and levels borne",
    limitsDescription(limits),
    body,
  );
}

function drawn(line: LimitLine, y: number, left: number, x: (level: number) => number, names: Names): string {
  const { present } = line;
  const limit = line.with?.limitMolPerL ?? 0;
  const parts = [
    `<text class="tick-text" x="${left - 8}" y="${at(y + 4)}" text-anchor="end">${svgText(names.set(line.component))}</text>`,
  ];
  if (limit > 0) {
    const end = x(limit);
    parts.push(
      `<path class="leader" d="M${at(present > 0 ? x(present) : left)} ${at(y)}H${at(end)}"/>`,
      line.with?.endsBy === "none"
        ? `<path class="line first" d="M${at(end - 7)} ${at(y - 6)}l7 6l-7 6"/>`
        : `<path class="line first" d="M${at(end)} ${at(y - 8)}v16"/>`,
    );
  }
  if (line.without && line.without.limitMolPerL > 0)
    parts.push(`<path class="line" d="M${at(x(line.without.limitMolPerL))} ${at(y - 6)}l6 6l-6 6l-6 -6z"/>`);
  if (present > 0) parts.push(`<circle class="point" cx="${at(x(present))}" cy="${at(y)}" r="4"/>`);
  return parts.join("");
}

/** What the figure shows, in words. */
export function limitsDescription(limits: readonly Limit[]): string {
  return linesOf(limits)
    .map(({ component, present, with: masked, without }) => {
      const borne = (limit: Limit): string =>
        limit.limitMolPerL === 0
          ? "none borne"
          : `${limit.endsBy === "none" ? "over " : ""}${amount(limit.limitMolPerL, 2)} borne`;
      const parts = [
        present > 0 ? `${amount(present)} present` : "none present",
        ...(masked ? [borne(masked)] : []),
        ...(without ? [`${borne(without)} without masking`] : []),
      ];
      return `${component}: ${parts.join(", ")}.`;
    })
    .join(" ");
}
