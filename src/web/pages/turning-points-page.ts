import { Router, type Request } from "express";
import { decodeBrief } from "../form/brief-link.ts";
import type { Names } from "../format/names.ts";
import { renderView } from "../render/render-view.ts";
import type { WebServices } from "../services.ts";
import { turningPointsCsv, turningPointsView } from "./turning-points-view.ts";

/** How soon a page of a running search asks again, s. */
const ASK_AGAIN_S = 5;

/** The smallest changes of a brief that change its answer: begun by a button, watched by a page that asks again by itself, stopped by a button. */
export function turningPointsPage(services: WebServices, names: Names): Router {
  const router = Router();
  const { turningPoints: jobs } = services;

  router.get("/turning-points", (request, response) => {
    const sent = decodeBrief(field(request.query["brief"]));
    const id = field(request.query["job"]);
    const job = id === "" ? null : jobs.look(id);
    if (job?.state === "running") response.set("Refresh", `${ASK_AGAIN_S}; url=${request.originalUrl}`);
    response.set("Cache-Control", "no-store");
    const brief = services.readBrief(sent);
    response.send(renderView("turning-points", turningPointsView(services, names, { brief, sent, job })));
  });

  router.get("/turning-points.csv", (request, response, next) => {
    const result = jobs.look(field(request.query["job"]))?.result;
    if (!result) {
      next();
      return;
    }
    response.type("text/csv; charset=utf-8").attachment("turning-points.csv").send(turningPointsCsv(result));
  });

  router.post("/turning-points", (request, response) => {
    const link = posted(request, "brief");
    response.redirect(303, pageOf(link, jobs.start(decodeBrief(link))));
  });
  router.post("/turning-points/stop", (request, response) => {
    const id = posted(request, "job");
    jobs.stop(id);
    response.redirect(303, pageOf(posted(request, "brief"), id));
  });
  return router;
}

const pageOf = (link: string, id: string): string =>
  `/turning-points?brief=${encodeURIComponent(link)}&job=${encodeURIComponent(id)}`;

const field = (value: unknown): string => (typeof value === "string" ? value : "");

function posted(request: Request, name: string): string {
  const body = request.body as Readonly<Record<string, unknown>> | undefined;
  return field(body?.[name]);
}
