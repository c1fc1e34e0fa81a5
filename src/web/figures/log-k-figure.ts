import { line } from "d3-shape";
import type { Markup } from "../render/markup.ts";
import type { FigureSeries } from "../services.ts";
import { fixed } from "../format/numbers.ts";
import { at, axes, figureSvg, frame, spreadLabels, svgText, type Frame, type FrameSize } from "./frame.ts";
import { Markup as Html } from "../render/markup.ts";

/** A conditional constant below 10^0 says nothing for a titration. */
const FLOOR = 0;
const LINE_HEIGHT = 15;
const LABEL_WIDTH = 36;
const DASHES = ["", "7 4", "2 3", "10 3 2 3", "4 2", "1 2", "12 4", "6 2 1 2"] as const;

/** log K' against pH: one line for each metal with its name at its end, and the working range as a marked band. `set` typesets labels. */
export function logKFigure(
  id: string,
  series: FigureSeries["logK"],
  size: FrameSize,
  set: (text: string) => Markup,
): Markup {
  const values = series.lines.flatMap((l) => l.values.filter((v): v is number => v !== null && v >= FLOOR));
  const top = Math.max(8, ...values);
  const f = frame(size, [series.pH[0] ?? 0, series.pH.at(-1) ?? 14], [FLOOR, top]);
  const draw = line<number | null>()
    .defined((v) => v !== null && v >= FLOOR)
    .x((_, i) => f.x(series.pH[i] ?? 0))
    .y((v) => f.y(v ?? 0));
  const [low, high] = series.workingRange;
  const bottom = size.height - size.bottom;
  const right = size.width - size.right;
  const labels = placeLabels(series, f);
  const bandWidth = Math.max(2, f.x(high) - f.x(low));
  const body = [
    `<rect class="band" x="${at(f.x(low))}" y="${size.top}" width="${at(bandWidth)}" height="${bottom - size.top}"/>`,
    `<path class="band-edge" d="M${at(f.x(low))} ${size.top}V${bottom}M${at(f.x(low) + bandWidth)} ${size.top}V${bottom}"/>`,
    `<text class="mark" x="${at(clamp(f.x((low + high) / 2), size.left + 62, right - 62))}" y="${size.top - 6}" text-anchor="middle">works from pH ${fixed(low, 1)} to ${fixed(high, 1)}</text>`,
    axes(f, "pH", new Html("log&nbsp;<i>K</i>′")),
    ...series.lines.map((l, i) => {
      const dash = DASHES[i % DASHES.length] ?? "";
      const path = draw([...l.values]) ?? "";
      const label = labels[i];
      if (!label || path === "") return "";
      return `<path class="${i === 0 ? "line first" : "line"}" d="${round(path)}"${dash === "" ? "" : ` stroke-dasharray="${dash}"`}/>${label.leader}<text class="label" x="${at(label.x)}" y="${at(label.y)}"${label.inside ? ' text-anchor="middle"' : ""}>${svgText(set(l.label))}</text>`;
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

interface Label {
  readonly x: number;
  readonly y: number;
  readonly inside: boolean;
  readonly leader: string;
}

/** A line that reaches the right edge is named there; one that ends before is named above its own highest point. */
function placeLabels(series: FigureSeries["logK"], f: Frame): readonly (Label | null)[] {
  const right = f.size.width - f.size.right;
  const bottom = f.size.height - f.size.bottom;
  const ends = series.lines.map((l) => lastVisible(l.values, FLOOR));
  const atEdge = ends.map((e) => e?.index === series.pH.length - 1);
  const edgeHeights = spreadLabels(
    ends.flatMap((e, i) => (e && atEdge[i] ? [f.y(e.value)] : [])),
    LINE_HEIGHT,
    f.size.top + 4,
    bottom - 4,
  );
  const taken: { x: number; y: number }[] = [];
  let next = 0;
  return series.lines.map((l, i) => {
    const end = ends[i];
    if (!end) return null;
    if (atEdge[i]) {
      const height = edgeHeights[next++] ?? 0;
      const leader = `<path class="leader" d="M${right} ${at(f.y(end.value))}L${right + 6} ${at(height)}"/>`;
      return { x: right + 9, y: height + 4, inside: false, leader };
    }
    const peak = highest(l.values);
    const x = clamp(f.x(series.pH[peak] ?? 0), f.size.left + 14, right - 14);
    let y = f.y(l.values[peak] ?? FLOOR) - 7;
    while (taken.some((t) => Math.abs(t.x - x) < LABEL_WIDTH && Math.abs(t.y - y) < LINE_HEIGHT)) y += LINE_HEIGHT;
    taken.push({ x, y });
    return { x, y, inside: true, leader: "" };
  });
}

function highest(values: readonly (number | null)[]): number {
  let best = 0;
  values.forEach((v, i) => {
    if (v !== null && v > (values[best] ?? Number.NEGATIVE_INFINITY)) best = i;
  });
  return best;
}

function lastVisible(values: readonly (number | null)[], least: number): { index: number; value: number } | null {
  for (let index = values.length - 1; index >= 0; index--) {
    const value = values[index];
    if (value !== null && value !== undefined && value >= least) return { index, value };
  }
  return null;
}

const clamp = (v: number, low: number, high: number): number => Math.min(Math.max(v, low), high);

/** Path data with coordinates to a tenth. */
export const round = (path: string): string => path.replace(/-?\d+\.\d+/g, (n) => at(Number(n)));
