import { Router } from "express";
import { InputError } from "../../errors.ts";
import type { MethodLimits, Recommendation } from "../../recommendation/contract.ts";
import { USUAL_COMPANIONS } from "../../recommendation/method-limits.ts";
import { limitsCsv } from "../figures/figure-csv.ts";
import { limitsDescription, limitsFigure } from "../figures/limits-figure.ts";
import { decodeBrief, encodeBrief } from "../form/brief-link.ts";
import type { Names } from "../format/names.ts";
import { joinMarkup } from "../render/markup.ts";
import { renderView } from "../render/render-view.ts";
import type { WebServices } from "../services.ts";
import type { Answers } from "./answers.ts";
import { roomViews } from "./room-view.ts";
import { shell } from "./shell.ts";

/** Tolerance limits of any method of an answer, for the matrix of the brief and for whatever else is asked about. */
export function limitsPage(services: WebServices, names: Names, answers: Answers): Router {
  const router = Router();
  router.get("/limits", async (request, response) => {
    const sent = decodeBrief(field(request.query["brief"]));
    const methodId = field(request.query["method"]) || undefined;
    const also = field(request.query["also"]);
    const recommendation = await answers.answer(sent);
    const ask = { services, names, recommendation, sent, methodId, also };
    try {
      const limits = await services.limits(recommendation, methodId, listOf(also));
      response.send(renderView("limits", limitsView({ ...ask, limits, message: "" })));
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      const message = error.faults.map((f) => `${f.found}: expected ${f.expected}`).join("; ");
      response.status(400).send(renderView("limits", limitsView({ ...ask, limits: null, message })));
    }
  });
  router.get("/limits.csv", async (request, response) => {
    const recommendation = await answers.answer(decodeBrief(field(request.query["brief"])));
    const methodId = field(request.query["method"]) || undefined;
    const limits = await services.limits(recommendation, methodId, listOf(field(request.query["also"])));
    response.type("text/csv; charset=utf-8").attachment("limits.csv").send(limitsCsv(limits));
  });
  return router;
}

const field = (value: unknown): string => (typeof value === "string" ? value : "");

/** Ions as people list them: with commas, semicolons or blanks between. */
const listOf = (text: string): string[] => text.split(/[,;\s]+/).filter((part) => part !== "");

interface LimitsAsked {
  readonly services: WebServices;
  readonly names: Names;
  readonly recommendation: Recommendation;
  readonly sent: unknown;
  readonly methodId: string | undefined;
  readonly also: string;
  readonly limits: MethodLimits | null;
  readonly message: string;
}

function limitsView({ services, names, recommendation, sent, methodId, also, limits, message }: LimitsAsked): object {
  const { brief, methods } = recommendation;
  const link = encodeBrief(sent);
  const chosen = methods.find((m) => m.id === methodId) ?? methods[0];
  const named = new Set([...brief.analytes.map((a) => a.ion), ...brief.matrix.map((m) => m.component)]);
  const companions = USUAL_COMPANIONS.filter((ion) => !named.has(ion)).join(", ");
  const hrefOf = (method: string | undefined, others: string): string =>
    `/limits?brief=${link}${method === undefined ? "" : `&method=${encodeURIComponent(method)}`}${others === "" ? "" : `&also=${encodeURIComponent(others)}`}`;
  return {
    shell: shell(services.knowledge, `Tolerance limits: ${brief.title}`, "brief"),
    title: brief.title,
    brief: link,
    method: chosen?.id ?? "",
    summary: chosen ? names.set(chosen.summary) : joinMarkup(["No method stands for this brief."]),
    answerHref: `/recommendation?brief=${link}${chosen ? `&method=${encodeURIComponent(chosen.id)}` : ""}`,
    companionsHref: hrefOf(chosen?.id, companions),
    also: { id: "also", value: also, invalid: message !== "", message },
    rows: limits === null ? [] : roomViews(limits.limits, names),
    figure:
      limits === null
        ? null
        : figureView(limits, names, `/limits.csv${hrefOf(chosen?.id, also).slice("/limits".length)}`),
    without:
      limits === null || limits.without.length === 0
        ? null
        : joinMarkup(limits.without.flatMap((w, i) => [i > 0 ? ", " : "", names.link(w)])),
    others: methods
      .filter((m) => m !== chosen)
      .map((m) => ({ href: hrefOf(m.id, also), text: joinMarkup([`No. ${m.rank}: `, names.set(m.summary)]) })),
  };
}

/** The figure for a wide and a narrow page; null where there is nothing to draw. */
function figureView({ limits }: MethodLimits, names: Names, csvHref: string): object | null {
  const wide = limitsFigure("limits-wide", limits, 700, names);
  const narrow = limitsFigure("limits-narrow", limits, 350, names);
  return wide && narrow ? { wide, narrow, csvHref, description: names.set(limitsDescription(limits)) } : null;
}
