import { randomUUID } from "node:crypto";
import type { ErrorRequestHandler, Request, RequestHandler } from "express";
import type { Knowledge } from "../constants/knowledge.ts";
import { InputError } from "../errors.ts";
import { shell } from "./pages/shell.ts";
import { renderView } from "./render/render-view.ts";
import type { WebServices } from "./services.ts";

const wantsJson = (request: Request): boolean => request.path.startsWith("/api/");

function errorPage(knowledge: Knowledge, title: string, lines: readonly string[], id: string): string {
  return renderView("error", { shell: shell(knowledge, title, "none"), title, lines, id });
}

/** 404: nothing stands at this address. */
export function notFound({ knowledge }: WebServices): RequestHandler {
  return (request, response) => {
    if (wantsJson(request)) response.status(404).json({ error: "nothing stands at this address" });
    else response.status(404).send(errorPage(knowledge, "Not found", ["Nothing stands at this address."], ""));
  };
}

const statusOf = (error: unknown): number =>
  typeof error === "object" && error !== null && "status" in error && typeof error.status === "number"
    ? error.status
    : 500;

const CLIENT_FAULTS: Readonly<Record<number, string>> = {
  400: "the request could not be read: its body is not JSON, or its address is malformed",
  413: "the body is larger than 256 kB",
  415: "the encoding of the body is not supported",
};

/** Faults of the input as 422 with their places; anything unexpected as a neutral 500 with an id that also stands in the log. */
export function failures({ knowledge, log }: WebServices): ErrorRequestHandler {
  return (error: unknown, request, response, next) => {
    if (response.headersSent) {
      next(error);
      return;
    }
    if (error instanceof InputError) {
      const lines = error.faults.map((f) => `${f.path}: expected ${f.expected}, found ${f.found}`);
      if (wantsJson(request)) response.status(422).json({ faults: error.faults });
      else response.status(422).send(errorPage(knowledge, "This question cannot be used", lines, ""));
      return;
    }
    const status = statusOf(error);
    if (status >= 400 && status < 500) {
      const message = CLIENT_FAULTS[status] ?? "the request could not be read";
      if (wantsJson(request)) response.status(status).json({ error: message });
      else response.status(status).send(errorPage(knowledge, "The request could not be read", [message], ""));
      return;
    }
    if (status === 503) {
      const message = "The server has too much to do, or this question takes longer than it allows. Try again later.";
      response.set("Retry-After", "60");
      if (wantsJson(request)) response.status(503).json({ error: message });
      else response.status(503).send(errorPage(knowledge, "Not now", [message], ""));
      return;
    }
    const id = randomUUID();
    log(
      `${id} ${request.method} ${request.path} ${error instanceof Error ? (error.stack ?? error.message) : String(error)}`,
    );
    const message = "Something failed on our side. The failure is logged under the id below.";
    if (wantsJson(request)) response.status(500).json({ error: message, id });
    else response.status(500).send(errorPage(knowledge, "Something failed", [message], id));
  };
}
