import type { Recommendation, RecommendedMethod, Robustness } from "../../recommendation/contract.ts";
import {
  parameterWords,
  printedQuantiles,
  drawsWords,
  shareWords,
  spreadWords,
  wholeWords,
} from "../../recommendation/robustness-text.ts";
import { NARROW, WIDE } from "../figures/frame.ts";
import { drawsDescription, drawsFigure, mapDescription, mapFigure } from "../figures/robustness-figure.ts";
import { encodeBrief } from "../form/brief-link.ts";
import { linkMarkup, reactionHref, type Names } from "../format/names.ts";
import { amount, percent, signed, significant } from "../format/numbers.ts";
import { reactionMarkup } from "../format/typeset.ts";
import { joinMarkup, type Markup } from "../render/markup.ts";
import type { JobState, WebServices } from "../services.ts";
import { shell } from "./shell.ts";

/** What may be chosen on the page. */
export const CHOICES = [1000, 5000, 20_000] as const;

/** What the page of one method shows. */
export interface RobustnessOnPage {
  readonly recommendation: Recommendation;
  readonly method: RecommendedMethod;
  readonly sent: unknown;
  readonly draws: number;
  readonly seed: number;
  readonly job: JobState<Robustness> | null;
}

/** The page of the draws of one method as they stand: not begun (job null), running, stopped, failed or done. */
export function robustnessView(services: WebServices, names: Names, page: RobustnessOnPage): object {
  const { recommendation, method, sent, job } = page;
  const link = encodeBrief(sent);
  const result = job?.result ?? null;
  const answerHref = `/recommendation?brief=${link}&method=${encodeURIComponent(method.id)}`;
  return {
    shell: shell(services.knowledge, `Robustness: ${recommendation.brief.title}`, "brief"),
    title: recommendation.brief.title,
    method: names.set(method.summary),
    answerHref,
    brief: link,
    methodId: method.id,
    job: job?.id ?? "",
    state: job?.state ?? "none",
    message: job?.message ?? "",
    progress: job ? `${job.progress.done} of ${job.progress.total} draws and rows of the map` : "",
    choices: CHOICES.map((n) => ({ value: String(n), selected: n === page.draws })),
    seed: String(page.seed),
    jsonHref: job ? `/api/robustness/${job.id}` : "",
    drawsCsvHref: job ? `/robustness/draws.csv?job=${job.id}` : "",
    mapCsvHref: job ? `/robustness/map.csv?job=${job.id}` : "",
    found: result === null ? null : foundView(result, names),
  };
}

function foundView(found: Robustness, names: Names): object {
  const { requirementPercent, results, parameters, map } = found;
  return {
    asked: percent(requirementPercent),
    share: shareWords(found),
    draws: drawsWords(found),
    unread:
      found.unread === 0
        ? ""
        : `No end point, or a spoilt dye, in ${found.unread} of ${found.done} draws: they do not meet it.`,
    partial: found.done < found.draws ? `${found.done} of ${found.draws} draws so far.` : "",
    spreads: spreadWords(found),
    whole: wholeWords(found),
    results: results.map((r) => ({
      determines: joinMarkup(
        r.determines.map((ion) => names.name(ion)),
        " + ",
      ),
      planned: { bias: `${signed(r.planned.biasPercent, 2)} %`, expanded: percent(r.planned.expandedPercent) },
      bias: printedQuantiles(r).map((q) => `${signed(q.biasPercent, 2)} %`),
      expanded: printedQuantiles(r).map((q) => percent(q.expandedPercent)),
    })),
    figures: results.flatMap((r, i) => {
      const wide = drawsFigure(`draws-${i}-wide`, r, requirementPercent, WIDE);
      const narrow = drawsFigure(`draws-${i}-narrow`, r, requirementPercent, { ...NARROW, right: 82 });
      return wide && narrow
        ? [
            {
              wide,
              narrow,
              caption: joinMarkup([
                names.set(r.determines.join(" + ")),
                `: share of the draws whose expanded uncertainty (thick) or error (broken) lies below a value. The requirement stands at the broken uprights: where the thick line crosses the right one, that share meets it.`,
              ]),
              description: drawsDescription(r, requirementPercent),
            },
          ]
        : [];
    }),
    parameters: parameters.map((p) => ({
      what: parameterMarkup(p, results.length, names),
      spread:
        p.unit === "%"
          ? `± ${significant(p.standardUncertainty, 2)} %`
          : `± ${significant(p.standardUncertainty, 2)} ${p.unit}`,
      uncertainty: percent(100 * p.shareOfUncertainty),
      error: percent(100 * p.shareOfError),
      goes: p.errorGoes === null ? "–" : p.errorGoes,
    })),
    map:
      map === null
        ? null
        : {
            wide: mapFigure("map-wide", map, requirementPercent, WIDE, amountName(map.reagent, map.molPerL, names)),
            narrow: mapFigure(
              "map-narrow",
              map,
              requirementPercent,
              NARROW,
              amountName(map.reagent, map.molPerL, names),
            ),
            caption: joinMarkup([
              `Expanded uncertainty against ${percent(requirementPercent)} over pH and the amount of `,
              names.link(map.reagent),
              results.length > 1 ? ` in titration ${map.titration}` : "",
              `, all else as planned (pH ${significant(map.planned.pH, 3)}, ${amount(map.planned.molPerL, 2)}: framed). Of the reagents this one matters most when halved or doubled. The map asks neither rules nor the range in which a dye or a mask may be used.`,
            ]),
            description: mapDescription(map, requirementPercent),
          },
  };
}

/** The name of the amounts' axis: they are written in the unit of the first. */
const amountName = (reagent: string, molPerL: readonly number[], names: Names): Markup =>
  joinMarkup([names.name(reagent), ` / ${amount(molPerL[0], 2).split(" ").at(-1) ?? ""}`]);

function parameterMarkup(parameter: Robustness["parameters"][number], titrations: number, names: Names): Markup {
  const { kind, id } = parameter;
  if (kind === "constant")
    return joinMarkup(["log K of ", linkMarkup(reactionHref(id), reactionMarkup(id, names.set))]);
  if (kind === "reagent") return joinMarkup(["Amount of ", names.link(id)]);
  return kind === "matrix"
    ? joinMarkup(["Level of ", names.link(id)])
    : joinMarkup([parameterWords(parameter, titrations)]);
}

/** Quantiles as CSV: probability, then error and expanded uncertainty of each result, %. */
export function drawsCsv({ results }: Robustness): string {
  const first = results[0]?.quantiles ?? [];
  const head = [
    "share of draws below",
    ...results.flatMap((r) => [
      `error ${r.determines.join("+")} / %`,
      `expanded uncertainty ${r.determines.join("+")} / %`,
    ]),
  ];
  const rows = first.map((q, i) => [
    q.probability,
    ...results.flatMap((r) => [r.quantiles[i]?.biasPercent ?? "", r.quantiles[i]?.expandedPercent ?? ""]),
  ]);
  return csv([head, ...rows]);
}

/** The map as CSV: one row for each amount (mol/L), one column for each pH, expanded uncertainty in %. */
export const mapCsv = (map: NonNullable<Robustness["map"]>): string =>
  csv([
    [`${map.reagent} / mol/L`, ...map.pH.map((pH) => `pH ${pH}`)],
    ...map.molPerL.map((molPerL, r) => [molPerL, ...(map.expandedPercent[r] ?? []).map((value) => value ?? "")]),
  ]);

const csv = (rows: readonly (readonly (string | number)[])[]): string =>
  `${rows.map((row) => row.join(",")).join("\r\n")}\r\n`;
