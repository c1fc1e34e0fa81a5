import { line } from "d3-shape";
import { fixed } from "../format/numbers.ts";
import type { Markup } from "../render/markup.ts";
import type { FigureSeries } from "../services.ts";
import { at, axes, figureSvg, frame, svgText, type FrameSize } from "./frame.ts";
import { round } from "./log-k-figure.ts";

/** The titration curve with the equivalence point and the band in which the end point is seen. `set` typesets the label. */
export function curveFigure(
  id: string,
  series: FigureSeries["curve"],
  size: FrameSize,
  set: (text: string) => Markup,
): Markup {
  const shown = series.pM.filter((v): v is number => v !== null);
  const end = series.endPoint;
  const yAll = [...shown, ...(end ? [end.pMLow, end.pMHigh] : [])];
  const f = frame(
    size,
    [series.volumeML[0] ?? 0, series.volumeML.at(-1) ?? 1],
    [Math.min(0, ...yAll), Math.max(1, ...yAll)],
  );
  const draw = line<number | null>()
    .defined((v) => v !== null)
    .x((_, i) => f.x(series.volumeML[i] ?? 0))
    .y((v) => f.y(v ?? 0));
  const bottom = size.height - size.bottom;
  const right = size.width - size.right;
  const xEq = f.x(series.equivalenceML);
  const parts = [axes(f, "titrant added / mL", set(`p(${series.label})`))];
  if (end) {
    const y1 = f.y(Math.max(end.pMLow, end.pMHigh));
    const height = Math.max(2, f.y(Math.min(end.pMLow, end.pMHigh)) - y1);
    const x1 = f.x(Math.min(end.low, end.high));
    const width = Math.max(2, f.x(Math.max(end.low, end.high)) - x1);
    parts.unshift(
      `<rect class="band" x="${size.left}" y="${at(y1)}" width="${right - size.left}" height="${at(height)}"/>`,
      `<path class="band-edge" d="M${size.left} ${at(y1)}H${right}M${size.left} ${at(y1 + height)}H${right}"/>`,
      `<rect class="band-strong" x="${at(x1)}" y="${at(y1)}" width="${at(width)}" height="${at(height)}"/>`,
    );
    const middle = y1 + height / 2;
    parts.push(
      `<circle class="point" cx="${at(f.x(end.volumeML))}" cy="${at(f.y(end.pM))}" r="4"/>`,
      `<text class="label" x="${right + 8}" y="${at(middle - 3)}">end point</text>`,
      `<text class="label" x="${right + 8}" y="${at(middle + 12)}">${fixed(end.volumeML, 2)} mL</text>`,
    );
  }
  parts.push(
    `<path class="line" stroke-dasharray="3 3" d="M${at(xEq)} ${size.top}V${bottom}"/>`,
    `<text class="mark" x="${at(Math.min(xEq, right - 40))}" y="${size.top - 6}" text-anchor="middle">equivalence ${fixed(series.equivalenceML, 2)} mL</text>`,
    `<path class="line first" d="${round(draw([...series.pM]) ?? "")}"/>`,
    `<text class="label" x="${at(f.x(series.volumeML[0] ?? 0) + 8)}" y="${at(f.y(shown[0] ?? 0) - 8)}">${svgText(set(series.label))}</text>`,
  );
  return figureSvg(id, size, "Titration curve", curveDescription(series), parts.join(""));
}

/** What the curve shows, in words. */
export function curveDescription(series: FigureSeries["curve"]): string {
  const shown = series.pM.filter((v): v is number => v !== null);
  const start = `p(${series.label}) from ${fixed(shown[0], 1)} at the start to ${fixed(shown.at(-1), 1)} after ${fixed(series.volumeML.at(-1), 1)} mL; equivalence at ${fixed(series.equivalenceML, 2)} mL.`;
  const end = series.endPoint;
  if (!end) return `${start} No end point is marked.`;
  return `${start} The end point is read at ${fixed(end.volumeML, 2)} mL, between ${fixed(end.low, 2)} and ${fixed(end.high, 2)} mL, p(${series.label}) ${fixed(end.pMLow, 2)} to ${fixed(end.pMHigh, 2)}.`;
}
