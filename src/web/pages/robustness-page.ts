import { Router, type Request } from "express";
import { DRAWS, type Recommendation, type RecommendedMethod } from "../../recommendation/contract.ts";
import { decodeBrief } from "../form/brief-link.ts";
import type { Names } from "../format/names.ts";
import { renderView } from "../render/render-view.ts";
import type { WebServices } from "../services.ts";
import type { Answers } from "./answers.ts";
import { drawsCsv, mapCsv, robustnessView } from "./robustness-view.ts";

/** How soon a page of running draws asks again, s. */
const ASK_AGAIN_S = 3;
const USUAL_SEED = 1;

/** The robustness of a method: begun by a button, watched by a page that asks again by itself, stopped by a button; its figures as CSV. */
export function robustnessPage(services: WebServices, names: Names, answers: Answers): Router {
  const router = Router();
  const { robustness: jobs } = services;

  router.get("/robustness", async (request, response, next) => {
    const sent = decodeBrief(field(request.query["brief"]));
    const recommendation = await answers.answer(sent);
    const method = methodOf(recommendation, field(request.query["method"]));
    if (method === null) {
      next();
      return;
    }
    const id = field(request.query["job"]);
    const job = id === "" ? null : jobs.look(id);
    if (job?.state === "running") response.set("Refresh", `${ASK_AGAIN_S}; url=${request.originalUrl}`);
    response.set("Cache-Control", "no-store");
    const { draws, seed } = job?.result ?? { draws: DRAWS.usual, seed: USUAL_SEED };
    response.send(
      renderView("robustness", robustnessView(services, names, { recommendation, method, sent, draws, seed, job })),
    );
  });

  router.get("/robustness/:figure.csv", (request, response, next) => {
    const result = jobs.look(field(request.query["job"]))?.result;
    const { figure } = request.params;
    const csv = !result
      ? null
      : figure === "draws"
        ? drawsCsv(result)
        : figure === "map" && result.map
          ? mapCsv(result.map)
          : null;
    if (csv === null) {
      next();
      return;
    }
    response.type("text/csv; charset=utf-8").attachment(`${figure}.csv`).send(csv);
  });

  router.post("/robustness", async (request, response) => {
    const link = posted(request, "brief");
    const method = posted(request, "method");
    const document = await answers.answer(decodeBrief(link));
    const whole = (name: string): number | undefined =>
      /^\d{1,15}$/.test(posted(request, name)) ? Number(posted(request, name)) : undefined;
    const id = jobs.start({ document, method, draws: whole("draws"), seed: whole("seed") });
    response.redirect(303, pageOf(link, method, id));
  });
  router.post("/robustness/stop", (request, response) => {
    const id = posted(request, "job");
    jobs.stop(id);
    response.redirect(303, pageOf(posted(request, "brief"), posted(request, "method"), id));
  });
  return router;
}

const pageOf = (link: string, method: string, id: string): string =>
  `/robustness?brief=${encodeURIComponent(link)}&method=${encodeURIComponent(method)}&job=${encodeURIComponent(id)}`;

const field = (value: unknown): string => (typeof value === "string" ? value : "");

function posted(request: Request, name: string): string {
  const body = request.body as Readonly<Record<string, unknown>> | undefined;
  return field(body?.[name]);
}

const methodOf = ({ methods }: Recommendation, id: string): RecommendedMethod | null =>
  (id === "" ? methods[0] : methods.find((m) => m.id === id)) ?? null;
