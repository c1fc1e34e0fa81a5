import type { Brief, TurningPoint, TurningPoints } from "../../recommendation/contract.ts";
import { SAME_METHOD } from "../../recommendation/turning-points-text.ts";
import { encodeBrief } from "../form/brief-link.ts";
import type { Names } from "../format/names.ts";
import { amount, percent, significant } from "../format/numbers.ts";
import { joinMarkup, type Markup } from "../render/markup.ts";
import type { JobState, WebServices } from "../services.ts";
import { shell } from "./shell.ts";

/** How far a search along one number goes, in words. */
const REACH = "levels and the requirement up to a hundred times and down to a hundredth of what the brief says";

const VERDICTS_SHORT: Readonly<Record<TurningPoints["before"]["verdict"], string>> = {
  fit: "fit",
  "fit-with-reservations": "fit, with reservations",
  "not-fit": "not fit",
};

const written = (value: number | null, unit: "mol/L" | "%" | null): string =>
  value === null ? "–" : unit === "%" ? percent(value) : amount(value, 4);

function what({ what: kind, subject }: Pick<TurningPoint, "what" | "subject">, names: Names): Markup {
  if (kind === "requirement") return joinMarkup(["Requirement"]);
  if (kind === "forbid") return joinMarkup(["Forbid ", names.link(subject)]);
  if (kind === "allow") return joinMarkup(["Allow ", names.link(subject)]);
  return kind === "analyte-level" ? joinMarkup([names.link(subject), ", determined"]) : names.link(subject);
}

/** The page of one search as it stands: not begun (job null), running, stopped, failed or done. */
export function turningPointsView(
  services: WebServices,
  names: Names,
  asked: { readonly brief: Brief; readonly sent: unknown; readonly job: JobState<TurningPoints> | null },
): object {
  const { brief, sent, job } = asked;
  const link = encodeBrief(sent);
  const result = job?.result ?? null;
  return {
    shell: shell(services.knowledge, `Turning points: ${brief.title}`, "brief"),
    title: brief.title,
    answerHref: `/recommendation?brief=${link}`,
    brief: link,
    job: job?.id ?? "",
    state: job?.state ?? "none",
    message: job?.message ?? "",
    progress: job
      ? `${job.progress.done} of ${job.progress.total === 0 ? "about 20" : job.progress.total} changes looked at${result ? `, ${result.runs} recommendations worked out` : ""}`
      : "",
    reach: REACH,
    same: SAME_METHOD,
    csvHref: result && job ? `/turning-points.csv?job=${job.id}` : "",
    jsonHref: job ? `/api/turning-points/${job.id}` : "",
    ...(result && result.total > 0 ? found(result, names) : { before: null, points: [], unmoved: [], unsettled: [] }),
  };
}

function found({ before, points, unmoved }: TurningPoints, names: Names): object {
  const unmovedRow = (u: TurningPoints["unmoved"][number]): object => ({
    what: what(u, names),
    where:
      u.upTo === null
        ? ""
        : `${u.direction === "up" ? "up" : "down"} to ${written(u.upTo, u.unit)} from ${written(u.from, u.unit)}`,
  });
  return {
    before: { verdict: VERDICTS_SHORT[before.verdict], method: names.set(before.method?.words ?? "no method") },
    points: points.map((p) => ({
      what: what(p, names),
      from: written(p.from, p.unit),
      to: written(p.to, p.unit),
      factor: p.factor === null ? "–" : `× ${significant(p.factor, 3)}`,
      changes: p.changes.length === 2 ? "method and verdict" : p.changes[0],
      method: p.changes.includes("method")
        ? names.set(p.after.method?.words ?? "no method is left")
        : joinMarkup(["the same"]),
      verdict: p.changes.includes("verdict") ? VERDICTS_SHORT[p.after.verdict] : "the same",
      href: `/recommendation?brief=${encodeBrief(p.brief)}`,
    })),
    unmoved: unmoved.filter((u) => u.settled).map(unmovedRow),
    unsettled: unmoved.filter((u) => !u.settled).map(unmovedRow),
  };
}

/** Text in quotes where CSV asks for them. */
const cell = (text: string): string => (/[",\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

/** Turning points as CSV: one change a line, levels in mol/L and the requirement in %. */
export function turningPointsCsv({ before, points }: TurningPoints): string {
  const rows = points.map((p) => [
    p.what,
    p.subject,
    p.unit ?? "",
    p.from === null ? "" : String(p.from),
    p.to === null ? "" : String(p.to),
    p.factor === null ? "" : String(p.factor),
    before.method?.words ?? "",
    p.after.method?.words ?? "",
    before.verdict,
    p.after.verdict,
  ]);
  const head = [
    "change",
    "of",
    "unit",
    "from",
    "to",
    "factor",
    "method before",
    "method after",
    "verdict before",
    "verdict after",
  ];
  return `${[head, ...rows].map((row) => row.map(cell).join(",")).join("\r\n")}\r\n`;
}
