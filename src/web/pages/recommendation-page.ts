import { Router, type Request } from "express";
import { InputError } from "../../errors.ts";
import type { Recommendation, RecommendedMethod } from "../../recommendation/contract.ts";
import { curveCsv, logKCsv, readingCsv } from "../figures/figure-csv.ts";
import { formFromBrief } from "../form/brief-to-form.ts";
import { decodeBrief } from "../form/brief-link.ts";
import { briefFromForm } from "../form/form-to-brief.ts";
import type { Names } from "../format/names.ts";
import { renderView } from "../render/render-view.ts";
import type { FactListing, WebServices } from "../services.ts";
import type { Answers } from "./answers.ts";
import { briefView } from "./brief-page.ts";
import { recommendationView } from "./recommendation-view.ts";

/** The answer to a brief carried by its address, so that it survives a reload and can be shared; and its figures as CSV. */
export function recommendationPage(services: WebServices, names: Names, answers: Answers): Router {
  const router = Router();
  const catalogue: ReadonlyMap<string, FactListing> = new Map(services.facts.map((f) => [f.name, f]));

  router.get("/recommendation", async (request, response) => {
    let sent: unknown;
    try {
      sent = briefOf(request);
      const recommendation = await answers.answer(sent);
      const method = chosenMethod(request, recommendation);
      const figures = method === null ? null : answers.figures(recommendation, method.id);
      response.send(
        renderView(
          "recommendation",
          recommendationView(services, names, catalogue, { recommendation, sent, method, figures }),
        ),
      );
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      const form = formFromBrief(typeof sent === "object" && sent !== null ? sent : {});
      const reading = briefFromForm(form, services.knowledge);
      const faults = reading.ok
        ? error.faults.map((f) => ({ field: "form", message: `${f.path}: expected ${f.expected}, found ${f.found}` }))
        : reading.faults;
      response.status(400).send(renderView("brief", briefView(services, names, form, faults, true)));
    }
  });

  router.get("/figures/:figure.csv", async (request, response, next) => {
    const recommendation = await answers.answer(briefOf(request));
    const method = chosenMethod(request, recommendation);
    const figures = method === null ? null : answers.figures(recommendation, method.id);
    const { figure } = request.params;
    const csv =
      figures === null
        ? null
        : figure === "log-k"
          ? logKCsv(figures.logK)
          : figure === "curve"
            ? curveCsv(figures.curve)
            : figure === "reading" && figures.reading
              ? readingCsv(figures.reading)
              : null;
    if (csv === null) {
      next();
      return;
    }
    response.type("text/csv; charset=utf-8").attachment(`${figure}.csv`).send(csv);
  });
  return router;
}

/** The brief in the address; throws InputError where there is none. */
export function briefOf(request: Request): unknown {
  const { brief } = request.query;
  return decodeBrief(typeof brief === "string" ? brief : "");
}

function chosenMethod(request: Request, recommendation: Recommendation): RecommendedMethod | null {
  const { method } = request.query;
  return recommendation.methods.find((m) => m.id === method) ?? recommendation.methods[0] ?? null;
}
