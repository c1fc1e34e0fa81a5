import { z } from "zod";
import {
  briefSchema,
  limitsQuestionSchema,
  methodLimitsSchema,
  methodMapSchema,
  recommendationSchema,
  robustnessQuestionSchema,
  robustnessSchema,
  turningPointsSchema,
} from "../../recommendation/contract.ts";
import { curveRequestSchema, equilibriumRequestSchema } from "../../recommendation/calculate.ts";

const faultsSchema = z.object({
  faults: z.array(z.object({ path: z.string(), expected: z.string(), found: z.string() })),
});
const errorSchema = z.object({ error: z.string(), id: z.string().optional() });

const json = (schema: object): object => ({ "application/json": { schema } });
const ref = (name: string): object => ({ $ref: `#/components/schemas/${name}` });

const failures = {
  "400": { description: "The body is not JSON.", content: json(ref("Error")) },
  "413": { description: "The body is larger than 256 kB.", content: json(ref("Error")) },
  "422": {
    description: "The body is JSON but not a valid question: one fault per error, each at its place.",
    content: json(ref("Faults")),
  },
  "500": { description: "Something failed on our side; the id stands in the log.", content: json(ref("Error")) },
  "503": { description: "Too much to do at present, or a question that takes too long.", content: json(ref("Error")) },
};

/** A long calculation as it stands. */
const jobSchema = (result: z.ZodType): z.ZodType =>
  z.object({
    id: z.string(),
    state: z.enum(["running", "done", "stopped", "failed"]),
    progress: z.object({ done: z.int(), total: z.int() }),
    result: result.nullable(),
    message: z.string().nullable(),
  });

const jobAnswers = (kind: string): object => ({
  "200": { description: "It has ended: done, stopped or failed.", content: json(ref(kind)) },
  "202": { description: "It runs; what is found so far. Ask again by its id.", content: json(ref(kind)) },
});
const noJob = { description: "No calculation of this id is kept.", content: json(ref("Error")) };
const jobId = { name: "id", in: "path", required: true, schema: { type: "string" } };

/** The two paths of a long calculation: begun, then asked for and stopped by its id. */
function longCalculation(
  path: string,
  name: string,
  asks: string,
  words: { readonly start: string; readonly look: string; readonly stop: string },
): object {
  const answers = jobAnswers(`${name}Job`);
  const byId = (operationId: string, summary: string): object => ({
    operationId,
    summary,
    parameters: [jobId],
    responses: { ...answers, "404": noJob },
  });
  return {
    [path]: {
      post: {
        operationId: `start${name}`,
        summary: words.start,
        requestBody: { required: true, content: json(ref(asks)) },
        responses: { ...answers, ...failures },
      },
    },
    [`${path}/{id}`]: {
      get: byId(`${name.charAt(0).toLowerCase()}${name.slice(1)}`, words.look),
      delete: byId(`stop${name}`, words.stop),
    },
  };
}

const operation = (id: string, summary: string, body: string, answer: object): object => ({
  post: {
    operationId: id,
    summary,
    requestBody: { required: true, content: json(ref(body)) },
    responses: { "200": { description: "The answer.", content: json(answer) }, ...failures },
  },
});

/** The API as an OpenAPI 3.1 document, its schemas taken from those that check the data. */
export function openApiDocument(version: string): object {
  const input = (schema: z.ZodType): object => stripSchema(z.toJSONSchema(schema, { io: "input" }));
  const output = (schema: z.ZodType): object => stripSchema(z.toJSONSchema(schema, { io: "output" }));
  return {
    openapi: "3.1.0",
    info: {
      title: "Chelwright",
      version,
      summary: "Designs and justifies complexometric titration methods by calculation.",
      license: { name: "MIT", identifier: "MIT" },
    },
    servers: [{ url: "/" }],
    paths: {
      "/api/recommendations": operation(
        "recommend",
        "Answers a brief with ranked titration methods, their predicted errors and the reasons.",
        "Brief",
        ref("Recommendation"),
      ),
      "/api/method-map": {
        get: {
          operationId: "methodMap",
          summary:
            "For each metal ion, which ways of titrating are open, by the same search and rules, and why the others are not.",
          responses: {
            "200": { description: "The whole map.", content: json(ref("MethodMap")) },
            "202": { description: "The map as far as it is worked out; ask again.", content: json(ref("MethodMap")) },
          },
        },
      },
      "/api/limits": operation(
        "limits",
        "Finds up to which level a method bears each component, also such as the brief does not name, and what ends it.",
        "LimitsQuestion",
        ref("MethodLimits"),
      ),
      ...longCalculation("/api/turning-points", "TurningPoints", "Brief", {
        start:
          "Begins the search for the smallest single changes of a brief that change its first method or its verdict, or finds it: the same brief has the same id.",
        look: "Turning points as far as they are found.",
        stop: "Stops the search; what it has found so far stays.",
      }),
      ...longCalculation("/api/robustness", "Robustness", "RobustnessQuestion", {
        start:
          "Begins the draws of a method over what is not known exactly, or finds them: the same question has the same id, the same seed the same figures.",
        look: "The draws as far as they are made.",
        stop: "Stops the draws; what they have shown so far stays.",
      }),
      "/api/equilibrium": operation(
        "equilibrium",
        "Solves a solution at a fixed acidity: species, side-reaction coefficients, conditional constants, solids.",
        "EquilibriumQuestion",
        { type: "object" },
      ),
      "/api/curve": operation("curve", "Computes a titration curve: pM at each volume.", "CurveQuestion", {
        type: "object",
      }),
    },
    components: {
      schemas: {
        Brief: input(briefSchema),
        Recommendation: output(recommendationSchema),
        MethodMap: output(methodMapSchema),
        LimitsQuestion: input(limitsQuestionSchema),
        MethodLimits: output(methodLimitsSchema),
        TurningPoints: output(turningPointsSchema),
        TurningPointsJob: output(jobSchema(turningPointsSchema)),
        RobustnessQuestion: input(robustnessQuestionSchema),
        Robustness: output(robustnessSchema),
        RobustnessJob: output(jobSchema(robustnessSchema)),
        EquilibriumQuestion: input(equilibriumRequestSchema),
        CurveQuestion: input(curveRequestSchema),
        Faults: output(faultsSchema),
        Error: output(errorSchema),
      },
    },
  };
}

/** The dialect is that of OpenAPI 3.1 itself; a schema inside it names none. */
function stripSchema(schema: object): object {
  return Object.fromEntries(Object.entries(schema).filter(([key]) => key !== "$schema"));
}
