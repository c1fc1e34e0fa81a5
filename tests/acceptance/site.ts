import { openServices } from "../../src/main.ts";
import { startServer, type RunningServer, type WebServices } from "../../src/web/index.ts";

/** The whole program on a free port: real constants, real rules, real answers, worked out in threads as the command does. */
export async function startRealSite(): Promise<RunningServer & { readonly services: WebServices }> {
  const { services, close } = await openServices(
    (line) => {
      throw new Error(line);
    },
    { mapOnly: ["Be2+", "Mg2+", "Zn2+", "Ag+"] }, // the pages of all ions are alike; the whole map takes minutes
  );
  const server = await startServer(services, { port: 0 });
  return {
    ...server,
    services,
    stop: async () => {
      await server.stop();
      await close();
    },
  };
}
