import { line } from "d3-shape";
import type { Markup } from "../render/markup.ts";
import type { FigureSeries } from "../services.ts";
import { fixed } from "../format/numbers.ts";
import { at, axes, figureSvg, frame, spreadLabels, svgText, type FrameSize } from "./frame.ts";
import { Markup as Html } from "../render/markup.ts";

const DASHES = ["", "7 4", "2 3", "10 3 2 3", "4 2", "1 2", "12 4", "6 2 1 2"] as const;

/** log K' against pH: one line for each metal with its name at its end, and the working range as a marked band. `set` typesets labels. */
export function logKFigure(
  id: string,
  series: FigureSeries["logK"],
  size: FrameSize,
  set: (text: string) => Markup,
): Markup {
  const floor = 0;
  const values = series.lines.flatMap((l) => l.values.filter((v): v is number => v !== null && v >= floor));
  const top = Math.max(8, ...values);
  const f = frame(size, [series.pH[0] ?? 0, series.pH.at(-1) ?? 14], [floor, top]);
  const draw = line<number | null>()
    .defined((v) => v !== null && v >= floor)
    .x((_, i) => f.x(series.pH[i] ?? 0))
    .y((v) => f.y(v ?? 0));
  const [low, high] = series.workingRange;
  const bottom = size.height - size.bottom;
  const ends = series.lines.map((l) => lastVisible(l.values, floor));
  const heights = spreadLabels(
    ends.map((e) => f.y(e?.value ?? floor)),
    15,
    size.top + 4,
    bottom - 4,
  );
  const right = size.width - size.right;
  const bandWidth = Math.max(2, f.x(high) - f.x(low));
  const body = [
    `<rect class="band" x="${at(f.x(low))}" y="${size.top}" width="${at(bandWidth)}" height="${bottom - size.top}"/>`,
    `<path class="band-edge" d="M${at(f.x(low))} ${size.top}V${bottom}M${at(f.x(low) + bandWidth)} ${size.top}V${bottom}"/>`,
    `<text class="mark" x="${at(clamp(f.x((low + high) / 2), size.left + 62, right - 62))}" y="${size.top - 6}" text-anchor="middle">works from pH ${fixed(low, 1)} to ${fixed(high, 1)}</text>`,
    axes(f, "pH", new Html("log&nbsp;<i>K</i>′")),
    ...series.lines.map((l, i) => {
      const dash = DASHES[i % DASHES.length] ?? "";
      const path = draw([...l.values]) ?? "";
      const end = ends[i];
      const height = heights[i] ?? 0;
      if (!end || path === "") return "";
      const x = f.x(series.pH[end.index] ?? 0);
      return `<path class="${i === 0 ? "line first" : "line"}" d="${round(path)}"${dash === "" ? "" : ` stroke-dasharray="${dash}"`}/><path class="leader" d="M${at(x)} ${at(f.y(end.value))}L${right + 6} ${at(height)}"/><text class="label" x="${right + 9}" y="${at(height + 4)}">${svgText(set(l.label))}</text>`;
    }),
  ].join("");
  return figureSvg(id, size, "log K′ against pH", logKDescription(series), body);
}

/** What the figure shows, in words, with the highest value of each line and where it lies. */
export function logKDescription(series: FigureSeries["logK"]): string {
  const parts = series.lines.map((l) => {
    let best = -1;
    l.values.forEach((v, i) => {
      if (v !== null && (best < 0 || v > (l.values[best] ?? Number.NEGATIVE_INFINITY))) best = i;
    });
    if (best < 0) return `${l.label}: no value`;
    return `${l.label}: highest ${fixed(l.values[best], 1)} at pH ${fixed(series.pH[best], 1)}`;
  });
  const [low, high] = series.workingRange;
  return `Conditional constants from pH ${fixed(series.pH[0], 0)} to ${fixed(series.pH.at(-1), 0)}. ${parts.join("; ")}. The method works from pH ${fixed(low, 1)} to ${fixed(high, 1)}.`;
}

function lastVisible(values: readonly (number | null)[], floor: number): { index: number; value: number } | null {
  for (let index = values.length - 1; index >= 0; index--) {
    const value = values[index];
    if (value !== null && value !== undefined && value >= floor) return { index, value };
  }
  return null;
}

const clamp = (v: number, low: number, high: number): number => Math.min(Math.max(v, low), high);

/** Path data with coordinates to a tenth. */
export const round = (path: string): string => path.replace(/-?\d+\.\d+/g, (n) => at(Number(n)));
