/** The public door of the pages and the JSON interface. */
export { createApp } from "./create-app.ts";
export { startServer, type RunningServer } from "./start-server.ts";
export type { FactListing, FigureSeries, RuleCondition, RuleListing, WebServices } from "./services.ts";
