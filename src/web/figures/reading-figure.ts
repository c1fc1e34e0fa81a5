import { line } from "d3-shape";
import { fixed } from "../format/numbers.ts";
import type { Markup } from "../render/markup.ts";
import type { FigureSeries } from "../services.ts";
import { at, axes, figureSvg, frame, type FrameSize } from "./frame.ts";
import { round } from "./log-k-figure.ts";

type Reading = NonNullable<FigureSeries["reading"]>;

const Y_NAME = { potential: "E / mV", absorbance: "A / A of full colour" } as const;
const TITLE = { potential: "Potential against volume", absorbance: "Absorbance against volume" } as const;

/** What an electrode or a photometer shows, with the inflection, or the two branches and where they meet. */
export function readingFigure(id: string, series: Reading, size: FrameSize): Markup {
  const shown = series.values.filter((v): v is number => v !== null);
  const end = series.endPoint;
  const f = frame(
    size,
    [series.volumeML[0] ?? 0, series.volumeML.at(-1) ?? 1],
    [Math.min(0, ...shown), Math.max(series.kind === "absorbance" ? 1 : 0.1, ...shown)],
  );
  const draw = line<number | null>()
    .defined((v) => v !== null)
    .x((_, i) => f.x(series.volumeML[i] ?? 0))
    .y((v) => f.y(v ?? 0));
  const bottom = size.height - size.bottom;
  const right = size.width - size.right;
  const parts = [
    axes(f, "titrant added / mL", Y_NAME[series.kind]),
    ...series.branches.map(
      ([from, to]) =>
        `<path class="line" stroke-dasharray="7 4" d="M${at(f.x(from[0]))} ${at(f.y(from[1]))}L${at(f.x(to[0]))} ${at(f.y(to[1]))}"/>`,
    ),
    `<path class="line first" d="${round(draw([...series.values]) ?? "")}"/>`,
  ];
  if (end) {
    const x1 = f.x(Math.min(end.low, end.high));
    const width = Math.max(2, f.x(Math.max(end.low, end.high)) - x1);
    parts.unshift(
      `<rect class="band-strong" x="${at(x1)}" y="${size.top}" width="${at(width)}" height="${bottom - size.top}"/>`,
    );
    parts.push(
      `<circle class="point" cx="${at(f.x(end.volumeML))}" cy="${at(f.y(end.value))}" r="4"/>`,
      `<text class="mark" x="${at(Math.min(f.x(end.volumeML), right - 40))}" y="${size.top - 6}" text-anchor="middle">${MARK[series.kind]} ${fixed(end.volumeML, 2)} mL</text>`,
    );
  }
  return figureSvg(id, size, TITLE[series.kind], readingDescription(series), parts.join(""));
}

const MARK = { potential: "inflection", absorbance: "branches meet" } as const;

/** What the curve shows, in words. */
export function readingDescription(series: Reading): string {
  const shown = series.values.filter((v): v is number => v !== null);
  const last = fixed(series.volumeML.at(-1), 1);
  const potential = series.kind === "potential";
  const digits = potential ? 0 : 2;
  const what = potential
    ? `Potential of the ${series.name} in mV, against that at the end point`
    : `Relative ${series.name}`;
  const start = `${what}: from ${fixed(shown[0], digits)} at the start to ${fixed(shown.at(-1), digits)} after ${last} mL.`;
  if (!series.endPoint) return `${start} No end point is marked.`;
  const { volumeML, low, high } = series.endPoint;
  const seen = potential ? "It is steepest at" : "The two straight branches meet at";
  return `${start} ${seen} ${fixed(volumeML, 2)} mL, read between ${fixed(low, 3)} and ${fixed(high, 3)} mL.`;
}
