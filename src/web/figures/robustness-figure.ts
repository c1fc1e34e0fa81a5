import { line } from "d3-shape";
import type { Robustness, RobustnessMap } from "../../recommendation/contract.ts";
import { amount, fixed, percent } from "../format/numbers.ts";
import type { Markup } from "../render/markup.ts";
import { at, axes, figureSvg, frame, svgText, type FrameSize } from "./frame.ts";
import { round } from "./log-k-figure.ts";

type Result = Robustness["results"][number];

/** The axis shows tails only so many times as far as the requirement lies. */
const FARTHEST = 4;
/** … and leaves the requirement this much room. */
const ROOM = 1.25;
const TAIL = 0.01;

const quantileAt = ({ quantiles }: Result, probability: number): Result["quantiles"][number] | undefined =>
  quantiles.find((q) => q.probability >= probability);

/** Shares of the draws below a value: the expanded uncertainty (thick) and the error, with the requirement marked. Nothing where no draw was read. */
export function drawsFigure(id: string, result: Result, requirementPercent: number, size: FrameSize): Markup | null {
  const [first, last] = [quantileAt(result, TAIL), quantileAt(result, 1 - TAIL)];
  if (!first || !last) return null;
  const most = Math.max(ROOM * requirementPercent, Math.min(last.expandedPercent, FARTHEST * requirementPercent));
  const least = Math.min(-ROOM * requirementPercent, Math.max(first.biasPercent, -FARTHEST * requirementPercent));
  const f = frame(size, [least, most], [0, 100]);
  const curve = (pick: (q: Result["quantiles"][number]) => number): string =>
    round(
      line<Result["quantiles"][number]>()
        .x((q) => f.x(Math.max(least, Math.min(most, pick(q)))))
        .y((q) => f.y(100 * q.probability))(result.quantiles.filter((q) => pick(q) >= least && pick(q) <= most)) ?? "",
    );
  const bottom = size.height - size.bottom;
  const right = size.width - size.right;
  const upright = (x: number): string =>
    `<path class="line" stroke-dasharray="4 3" d="M${at(f.x(x))} ${size.top}V${bottom}"/>`;
  const median = quantileAt(result, 0.5)!;
  const labelled = (percentValue: number, share: number, text: string): string => {
    const y = f.y(share);
    return `<path class="leader" d="M${at(Math.min(right, Math.max(size.left, f.x(percentValue))))} ${at(y)}H${right + 5}"/><text class="label" x="${right + 8}" y="${at(y + 4)}">${text}</text>`;
  };
  const parts = [
    axes(f, "% of the result", "share of the draws below / %"),
    upright(requirementPercent),
    upright(-requirementPercent),
    `<text class="label" x="${at(right + 8)}" y="${size.top + 12}">asked:</text><text class="label" x="${at(right + 8)}" y="${size.top + 27}">±${percent(requirementPercent)}</text>`,
    `<path class="line first" d="${curve((q) => q.expandedPercent)}"/>`,
    `<path class="line" stroke-dasharray="7 3" d="${curve((q) => q.biasPercent)}"/>`,
    labelled(quantileAt(result, 0.25)!.expandedPercent, 25, "uncertainty"),
    labelled(median.biasPercent, 50, "error"),
  ];
  return figureSvg(id, size, "Draws", drawsDescription(result, requirementPercent), parts.join(""));
}

/** What the figure of the draws shows, in words. */
export function drawsDescription(result: Result, requirementPercent: number): string {
  const at5 = quantileAt(result, 0.05);
  const middle = quantileAt(result, 0.5);
  const at95 = quantileAt(result, 0.95);
  if (!at5 || !middle || !at95) return "No draw was read.";
  return `Nine draws in ten have an error from ${fixed(at5.biasPercent, 2)} to ${fixed(at95.biasPercent, 2)} % (half below ${fixed(middle.biasPercent, 2)} %) and an expanded uncertainty from ${fixed(at5.expandedPercent, 2)} to ${fixed(at95.expandedPercent, 2)} % (half below ${fixed(middle.expandedPercent, 2)} %); ${percent(requirementPercent)} is asked for.`;
}

/** How a cell of the map is drawn, by its uncertainty over the requirement: told apart by shape, so that print and colour do not matter. */
const CELLS = [
  {
    upTo: 0.5,
    words: "at most half of what is asked",
    draw: (x: number, y: number) => `<circle class="cell-full" cx="${at(x)}" cy="${at(y)}" r="5"/>`,
  },
  {
    upTo: 1,
    words: "meets it",
    draw: (x: number, y: number) => `<circle class="cell-full" cx="${at(x)}" cy="${at(y)}" r="2.6"/>`,
  },
  {
    upTo: 2,
    words: "misses it, at most twofold",
    draw: (x: number, y: number) => `<circle class="cell-open" cx="${at(x)}" cy="${at(y)}" r="4"/>`,
  },
  {
    upTo: Infinity,
    words: "misses it by more",
    draw: (x: number, y: number) => `<path class="cell-open" d="M${at(x - 3)} ${at(y)}h6"/>`,
  },
] as const;
const NOTHING = {
  words: "no end point is read",
  draw: (x: number, y: number): string => `<path class="cell-open" d="M${at(x - 3)} ${at(y - 3)}l6 6m0 -6l-6 6"/>`,
};

const cellOf = (expandedPercent: number | null, requirementPercent: number) =>
  expandedPercent === null ? NOTHING : CELLS.find((c) => expandedPercent <= c.upTo * requirementPercent)!;

const KEY_LINE = 17;

/** The map of the uncertainty over pH and the amount of a reagent, the planned point framed, with its key below. */
export function mapFigure(
  id: string,
  map: RobustnessMap,
  requirementPercent: number,
  size: FrameSize,
  name: Markup | string,
): Markup {
  const kinds = [...CELLS, NOTHING];
  const narrow = size.width < 500;
  const keyRows = narrow ? kinds.length : Math.ceil(kinds.length / 2);
  const tall = {
    ...size,
    right: 16,
    height: size.height + KEY_LINE * keyRows + 8,
    bottom: size.bottom + KEY_LINE * keyRows + 8,
  };
  const logs = map.molPerL.map((m) => Math.log2(m / map.planned.molPerL));
  const f = frame(tall, [map.pH[0]! - 0.1, map.pH.at(-1)! + 0.1], [logs[0]! - 0.3, logs.at(-1)! + 0.3]);
  const y = f.y.copy().domain([logs[0]! - 0.35, logs.at(-1)! + 0.35]);
  const bottom = tall.height - tall.bottom;
  const right = tall.width - tall.right;
  const xTicks = f.x.ticks(narrow ? 4 : 8);
  const yTicks = logs.flatMap((value, row) => (row % 3 === 0 ? [{ value, molPerL: map.molPerL[row]! }] : []));
  const cells = map.expandedPercent.flatMap((row, r) =>
    row.map((value, c) => cellOf(value, requirementPercent).draw(f.x(map.pH[c]!), y(logs[r]!))),
  );
  const [dx, dy] = [(f.x(0.1) - f.x(0)) / 2, (y(0) - y(1 / 3)) / 2];
  const [px, py] = [f.x(map.planned.pH), y(0)];
  const parts = [
    `<path class="axis" d="M${tall.left} ${tall.top}V${bottom}H${right}"/>`,
    ...xTicks.map(
      (t) =>
        `<path class="tick" d="M${at(f.x(t))} ${bottom}v5"/><text class="tick-text" x="${at(f.x(t))}" y="${bottom + 18}" text-anchor="middle">${fixed(t, 1)}</text>`,
    ),
    ...yTicks.map(
      ({ value, molPerL }) =>
        `<path class="tick" d="M${tall.left} ${at(y(value))}h-5"/><text class="tick-text" x="${tall.left - 7}" y="${at(y(value) + 4)}" text-anchor="end">${amount(molPerL, 2).split(" ")[0] ?? ""}</text>`,
    ),
    ...cells,
    `<rect class="cell-frame" x="${at(px - dx)}" y="${at(py - dy)}" width="${at(2 * dx)}" height="${at(2 * dy)}"/>`,
    `<text class="axis-name" x="${right}" y="${bottom + 34}" text-anchor="end">pH</text>`,
    `<text class="axis-name" x="6" y="14">${svgText(name)}</text>`,
    ...kinds.map(({ words, draw }, i) => {
      const column = narrow ? 0 : i % 2;
      const rowOf = narrow ? i : Math.floor(i / 2);
      const [kx, ky] = [tall.left + 8 + column * (right / 2), bottom + 52 + rowOf * KEY_LINE];
      return `${draw(kx, ky - 4)}<text class="tick-text" x="${at(kx + 14)}" y="${at(ky)}">${words}</text>`;
    }),
  ];
  return figureSvg(id, tall, "Map", mapDescription(map, requirementPercent), parts.join(""));
}

/** What the map shows, in words: where the requirement is met at the planned amount, and at the planned pH. */
export function mapDescription(map: RobustnessMap, requirementPercent: number): string {
  const meets = (value: number | null | undefined): boolean =>
    value !== null && value !== undefined && value <= requirementPercent;
  const row = map.molPerL.findIndex((m) => Math.abs(m / map.planned.molPerL - 1) < 1e-9);
  const column = map.pH.findIndex((pH) => Math.abs(pH - map.planned.pH) < 1e-9);
  const pHs = map.pH.filter((_, c) => meets(map.expandedPercent[row]?.[c]));
  const amounts = map.molPerL.filter((_, r) => meets(map.expandedPercent[r]?.[column]));
  const span = (list: readonly number[], write: (x: number) => string): string =>
    list.length === 0 ? "nowhere" : `from ${write(list[0]!)} to ${write(list.at(-1)!)}`;
  return `With the planned amount the requirement is met ${span(pHs, (x) => `pH ${fixed(x, 1)}`)}; at the planned pH ${span(amounts, (x) => amount(x, 2))}.`;
}
