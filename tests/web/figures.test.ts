import { describe, expect, test } from "vitest";
import { curveDescription, curveFigure } from "../../src/web/figures/curve-figure.ts";
import { curveCsv, logKCsv, readingCsv } from "../../src/web/figures/figure-csv.ts";
import { NARROW, spreadLabels, WIDE } from "../../src/web/figures/frame.ts";
import { logKDescription, logKFigure } from "../../src/web/figures/log-k-figure.ts";
import { formulaMarkup } from "../../src/web/format/typeset.ts";
import { readingDescription, readingFigure } from "../../src/web/figures/reading-figure.ts";
import { ABSORBANCE, POTENTIAL, SERIES } from "./fixture/figures.ts";

const set = (text: string) => formulaMarkup(text, true);

describe.each([
  ["wide", WIDE],
  ["narrow", NARROW],
])("the %s figures", (_, size) => {
  const logK = logKFigure("a", SERIES.logK, size, set).html;
  const curve = curveFigure("b", SERIES.curve, size, set).html;
  const potential = readingFigure("c", POTENTIAL, size).html;
  const absorbance = readingFigure("d", ABSORBANCE, size).html;

  test("stay inside their own frame", () => {
    for (const svg of [logK, curve, potential, absorbance]) {
      for (const path of svg.matchAll(/<path class="line[^"]*" d="([^"]+)"/g)) {
        const numbers = [...(path[1] ?? "").matchAll(/(-?[\d.]+),(-?[\d.]+)/g)];
        for (const [, x, y] of numbers) {
          expect(Number(x)).toBeGreaterThanOrEqual(size.left - 0.1);
          expect(Number(x)).toBeLessThanOrEqual(size.width - size.right + 0.1);
          expect(Number(y)).toBeGreaterThanOrEqual(size.top - 0.1);
          expect(Number(y)).toBeLessThanOrEqual(size.height - size.bottom + 0.1);
        }
      }
    }
  });
  test("name every line that has values, in words on the line, and none that has not", () => {
    expect(logK).toContain("Zn<tspan");
    expect(logK).toContain("Fe<tspan");
    expect(logK).not.toContain("Ca<tspan");
  });
  test("tell lines apart without colour", () => {
    const dashes = [...logK.matchAll(/<path class="line[^"]*"[^>]*?(?:stroke-dasharray="([^"]*)")?\/>/g)].map(
      (m) => m[1] ?? "",
    );
    expect(dashes.length).toBe(2);
    expect(new Set(dashes).size).toBe(dashes.length);
  });
  test("carry a title and a description, and no style, script or number that is none", () => {
    for (const svg of [logK, curve]) {
      expect(svg).toMatch(
        /role="img" aria-labelledby="(\w)-t \1-d"><title id="\1-t">[^<]+<\/title><desc id="\1-d">[^<]+</,
      );
      expect(svg).not.toMatch(/\sstyle=|<script|NaN|undefined|Infinity/);
    }
  });
});

test("the descriptions say what the figures show", () => {
  expect(logKDescription(SERIES.logK)).toContain(
    "Zn2+: highest 12.0 at pH 8.0; Fe3+: highest 8.0 at pH 4.0; Ca2+: no value",
  );
  expect(logKDescription(SERIES.logK)).toContain("works from pH 5.1 to 6.2");
  expect(curveDescription(SERIES.curve)).toContain("read at 16.02 mL, between 15.90 and 16.10 mL");
  expect(curveDescription({ ...SERIES.curve, endPoint: null })).toContain("No end point is marked");
});

test("figures of a line without any value still draw", () => {
  const empty = { ...SERIES.logK, lines: [{ label: "Zn2+", values: SERIES.logK.pH.map(() => null) }] };
  expect(logKFigure("a", empty, WIDE, set).html).not.toMatch(/NaN|undefined/);
  const flat = { ...SERIES.curve, pM: SERIES.curve.volumeML.map(() => null), endPoint: null };
  expect(curveFigure("a", flat, WIDE, set).html).not.toMatch(/NaN|undefined/);
});

test("spreadLabels keeps order and distance and stays inside", () => {
  const out = spreadLabels([100, 102, 104, 20], 15, 10, 110);
  const order = [3, 0, 1, 2].map((i) => out[i] ?? 0);
  for (let i = 1; i < order.length; i++) expect((order[i] ?? 0) - (order[i - 1] ?? 0)).toBeGreaterThanOrEqual(15);
  expect(Math.max(...out)).toBeLessThanOrEqual(110);
  expect(spreadLabels([50, 90], 15, 10, 110)).toEqual([50, 90]);
});

test("CSV has one row for each point, empty where there is no value, and no cell that a spreadsheet would run", () => {
  const lines = logKCsv(SERIES.logK).trim().split("\r\n");
  expect(lines).toHaveLength(SERIES.logK.pH.length + 1);
  expect(lines[0]).toBe("pH,log K' Zn2+,log K' Fe3+,log K' Ca2+");
  expect(lines[1]).toBe("0,4,4,");
  expect(curveCsv({ ...SERIES.curve, label: '=x","' })).toContain('"p(=x"","")"');
  expect(logKCsv({ ...SERIES.logK, lines: [] }).split("\r\n")[1]).toBe("0");
});

test("the curve of an instrument marks where it is read, in the figure, in words and in its CSV", () => {
  const potential = readingFigure("a", POTENTIAL, WIDE).html;
  expect(potential).toContain("inflection 16.02 mL");
  expect(readingDescription(POTENTIAL)).toContain("It is steepest at 16.02 mL");
  const absorbance = readingFigure("b", ABSORBANCE, WIDE).html;
  expect(absorbance.match(/stroke-dasharray="7 4"/g)).toHaveLength(2);
  expect(readingDescription(ABSORBANCE)).toContain("branches meet at 18.00 mL");
  const lines = readingCsv(ABSORBANCE).trim().split("\r\n");
  expect(lines[0]).toBe("titrant added / mL,A / A of full colour");
  expect(lines[1]).toBe("0,");
  expect(lines).toHaveLength(ABSORBANCE.volumeML.length + 1);
  expect(readingFigure("c", { ...POTENTIAL, values: [], endPoint: null }, WIDE).html).not.toMatch(/NaN|undefined/);
});
