import { scaleLinear, type ScaleLinear } from "d3-scale";
import { Markup, escapeHtml } from "../render/markup.ts";

/** Size and margins of a figure in its own units; text is 13 units high, so a narrow figure is drawn for a narrow page. */
export interface FrameSize {
  readonly width: number;
  readonly height: number;
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

export const WIDE: FrameSize = { width: 700, height: 400, left: 52, right: 116, top: 26, bottom: 46 };
export const NARROW: FrameSize = { width: 350, height: 340, left: 42, right: 78, top: 26, bottom: 44 };

export interface Frame {
  readonly size: FrameSize;
  readonly x: ScaleLinear<number, number>;
  readonly y: ScaleLinear<number, number>;
}

/** Scales for a figure from its data ranges; y is rounded outward to whole ticks. */
export function frame(size: FrameSize, xRange: readonly [number, number], yRange: readonly [number, number]): Frame {
  return {
    size,
    x: scaleLinear([...xRange], [size.left, size.width - size.right]),
    y: scaleLinear([...yRange], [size.height - size.bottom, size.top]).nice(6),
  };
}

/** One coordinate, to a tenth of a unit. */
export const at = (value: number): string => String(Math.round(value * 10) / 10);

/** Axes with ticks and names, drawn with classes only. */
export function axes({ size, x, y }: Frame, xName: Markup | string, yName: Markup | string): string {
  const bottom = size.height - size.bottom;
  const right = size.width - size.right;
  const xTicks = x.ticks(size.width > 500 ? 10 : 5);
  const yTicks = y.ticks(6);
  const xFormat = x.tickFormat(size.width > 500 ? 10 : 5);
  const yFormat = y.tickFormat(6);
  return [
    `<path class="axis" d="M${size.left} ${size.top}V${bottom}H${right}"/>`,
    ...xTicks.map(
      (t) =>
        `<path class="tick" d="M${at(x(t))} ${bottom}v5"/><text class="tick-text" x="${at(x(t))}" y="${bottom + 18}" text-anchor="middle">${minus(xFormat(t))}</text>`,
    ),
    ...yTicks.map(
      (t) =>
        `<path class="grid" d="M${size.left} ${at(y(t))}H${right}"/><text class="tick-text" x="${size.left - 7}" y="${at(y(t) + 4)}" text-anchor="end">${minus(yFormat(t))}</text>`,
    ),
    `<text class="axis-name" x="${right}" y="${size.height - 8}" text-anchor="end">${svgText(xName)}</text>`,
    `<text class="axis-name" x="6" y="14">${svgText(yName)}</text>`,
  ].join("");
}

const minus = (text: string): string => escapeHtml(text.replace("-", "\u2212"));

/** Text inside an SVG text element; markup keeps its raised and lowered parts as shifted spans. */
export function svgText(text: Markup | string): string {
  if (typeof text === "string") return escapeHtml(text);
  return text.html
    .replace(/<sub>(.*?)<\/sub>/g, '<tspan class="script" dy="3">$1</tspan><tspan dy="-3">\u200b</tspan>')
    .replace(/<sup>(.*?)<\/sup>/g, '<tspan class="script" dy="-5">$1</tspan><tspan dy="5">\u200b</tspan>')
    .replace(/<i>(.*?)<\/i>/g, '<tspan font-style="italic">$1</tspan>')
    .replace(/&nbsp;/g, "\u00a0");
}

/** Moves label heights apart to at least `gap`, keeping their order and staying inside [top, bottom]. */
export function spreadLabels(heights: readonly number[], gap: number, top: number, bottom: number): number[] {
  const order = heights.map((_, i) => i).sort((a, b) => (heights[a] ?? 0) - (heights[b] ?? 0));
  const out = [...heights];
  let last = Number.NEGATIVE_INFINITY;
  for (const i of order) {
    out[i] = Math.max(out[i] ?? 0, last + gap, top);
    last = out[i];
  }
  let next = bottom + gap;
  for (const i of order.toReversed()) {
    out[i] = Math.min(out[i] ?? 0, next - gap);
    next = out[i];
  }
  return out;
}

/** A complete figure with its text alternative; `id` keeps ids unique where a page holds several. */
export function figureSvg(id: string, size: FrameSize, title: string, description: string, body: string): Markup {
  return new Markup(
    `<svg class="figure" xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${size.width} ${size.height}" role="img" aria-labelledby="${id}-t ${id}-d"><title id="${id}-t">${escapeHtml(title)}</title><desc id="${id}-d">${escapeHtml(description)}</desc>${body}</svg>`,
  );
}
