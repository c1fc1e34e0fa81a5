import compression from "compression";
import express, { type Express } from "express";
import helmet from "helmet";
import { apiRoutes } from "./api/api-routes.ts";
import { failures, notFound } from "./error-pages.ts";
import { createNames } from "./format/names.ts";
import { createAnswers } from "./pages/answers.ts";
import { briefPage } from "./pages/brief-page.ts";
import { calculatorsPage } from "./pages/calculators-page.ts";
import { constantsPage } from "./pages/constants-page.ts";
import { dataPages } from "./pages/data-pages.ts";
import { knowledgePage } from "./pages/knowledge-page.ts";
import { limitsPage } from "./pages/limits-page.ts";
import { methodMapPage } from "./pages/method-map-page.ts";
import { recommendationPage } from "./pages/recommendation-page.ts";
import { robustnessPage } from "./pages/robustness-page.ts";
import { rulesPage } from "./pages/rules-page.ts";
import { turningPointsPage } from "./pages/turning-points-page.ts";
import { STYLESHEET } from "./pages/shell.ts";
import type { WebServices } from "./services.ts";

/** Largest body that is read. */
const BODY_LIMIT = "256kb";

/** The whole site as an express app: pages without script, a JSON interface, strict headers. Listens on nothing by itself. */
export function createApp(services: WebServices): Express {
  const app = express();
  const names = createNames(services.knowledge);
  const answers = createAnswers(services);
  app.disable("x-powered-by");
  app.set("query parser", "simple");
  app.use(
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'none'"],
          styleSrc: ["'self'"],
          imgSrc: ["'self'"],
          formAction: ["'self'"],
          baseUri: ["'none'"],
          frameAncestors: ["'none'"],
        },
      },
      strictTransportSecurity: false, // served on loopback without TLS; a proxy that adds TLS adds this
    }),
  );
  app.use(compression());
  app.get("/assets/notebook.css", (request, response) => {
    response.sendFile(STYLESHEET.pathname, {
      headers: {
        "Cache-Control": request.query["v"] === undefined ? "no-cache" : "public, max-age=31536000, immutable",
      },
      cacheControl: false,
    });
  });
  app.use("/api", express.json({ limit: BODY_LIMIT, type: () => true, strict: false }));
  for (const path of ["/recommendation", "/robustness", "/turning-points"])
    app.use(path, express.urlencoded({ limit: BODY_LIMIT, extended: false, parameterLimit: 2000 }));
  app.use(apiRoutes(services, answers));
  app.use(briefPage(services, names));
  app.use(recommendationPage(services, names, answers));
  app.use(limitsPage(services, names, answers));
  app.use(turningPointsPage(services, names));
  app.use(robustnessPage(services, names, answers));
  app.use(methodMapPage(services, names));
  app.use(constantsPage(services, names));
  app.use(dataPages(services, names));
  app.use(rulesPage(services, names));
  app.use(knowledgePage(services, names));
  app.use(calculatorsPage(services, names));
  app.use(notFound(services));
  app.use(failures(services));
  return app;
}
