import { openEngine } from "../../src/main.ts";
import { FACT_CATALOGUE, OPERATORS } from "../../src/inference/index.ts";
import { figureSeries } from "../../src/recommendation/calculate-series.ts";
import { startServer, type RunningServer, type WebServices } from "../../src/web/index.ts";

/** The whole program on a free port: real constants, real rules, real answers. */
export async function startRealSite(): Promise<RunningServer & { readonly services: WebServices }> {
  const { knowledge, ruleBase, recommend } = await openEngine();
  const services: WebServices = {
    knowledge,
    rules: ruleBase.rules,
    facts: FACT_CATALOGUE,
    operators: OPERATORS,
    recommend,
    figureSeries: (document, methodId) => figureSeries(document, methodId, knowledge),
    log: (line) => {
      throw new Error(line);
    },
  };
  return { ...(await startServer(services, { port: 0 })), services };
}
