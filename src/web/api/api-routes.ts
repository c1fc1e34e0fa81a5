import { Router, type Response } from "express";
import { InputError } from "../../errors.ts";
import { answerCurve, answerEquilibrium } from "../../recommendation/calculate.ts";
import { limitsQuestionSchema, robustnessQuestionSchema } from "../../recommendation/contract.ts";
import { shapeFaults } from "../../recommendation/contract-faults.ts";
import { decodeBrief } from "../form/brief-link.ts";
import type { Answers } from "../pages/answers.ts";
import { shell } from "../pages/shell.ts";
import { renderView } from "../render/render-view.ts";
import type { Jobs, WebServices } from "../services.ts";
import { openApiDocument } from "./openapi.ts";

/** The JSON doors: the recommendation, the two calculators, and their description. */
export function apiRoutes(
  { knowledge, methodMap, limits, turningPoints, robustness }: WebServices,
  answers: Answers,
): Router {
  const router = Router();
  const description = openApiDocument(knowledge.version);

  router.post("/api/recommendations", async (request, response) => {
    response.json(await answers.answer(request.body as unknown));
  });
  router.get("/api/recommendations", async (request, response) => {
    const { brief } = request.query;
    response.json(await answers.answer(decodeBrief(typeof brief === "string" ? brief : "")));
  });
  router.get("/api/method-map", (_request, response) => {
    const map = methodMap();
    response.status(map.done < map.total ? 202 : 200).json(map);
  });
  router.post("/api/limits", async (request, response) => {
    const asked = limitsQuestionSchema.safeParse(request.body);
    if (!asked.success) throw new InputError(shapeFaults(limitsQuestionSchema, request.body));
    const { brief, method, also } = asked.data;
    response.json(await limits(await answers.answer(brief), method, also));
  });
  const jobAt = (jobs: Pick<Jobs<never, unknown>, "look">, id: string, response: Response): void => {
    const job = jobs.look(id);
    if (job === null) response.status(404).json({ error: "no calculation of this id is kept; begin it again" });
    else response.status(job.state === "running" ? 202 : 200).json(job);
  };
  router.post("/api/turning-points", (request, response) => {
    jobAt(turningPoints, turningPoints.start(request.body as unknown), response);
  });
  router.post("/api/robustness", async (request, response) => {
    const asked = robustnessQuestionSchema.safeParse(request.body);
    if (!asked.success) throw new InputError(shapeFaults(robustnessQuestionSchema, request.body));
    const { brief, ...options } = asked.data;
    jobAt(robustness, robustness.start({ document: await answers.answer(brief), ...options }), response);
  });
  for (const [path, jobs] of [
    ["turning-points", turningPoints],
    ["robustness", robustness],
  ] as const)
    router
      .route(`/api/${path}/:id`)
      .get((request, response) => {
        jobAt(jobs, request.params.id, response);
      })
      .delete((request, response) => {
        jobs.stop(request.params.id);
        jobAt(jobs, request.params.id, response);
      });
  router.post("/api/equilibrium", (request, response) => {
    response.json(answerEquilibrium(request.body as unknown, knowledge));
  });
  router.post("/api/curve", (request, response) => {
    response.json(answerCurve(request.body as unknown, knowledge));
  });
  router.get("/api/openapi.json", (_request, response) => {
    response.json(description);
  });
  router.get("/api", (_request, response) => {
    response.send(renderView("api", { shell: shell(knowledge, "Interface for programs", "none") }));
  });
  return router;
}
