import { createServer, type Server } from "node:http";
import type { AddressInfo } from "node:net";
import { createApp } from "./create-app.ts";
import type { WebServices } from "./services.ts";

/** Longest request head that is read: a brief travels in the address. */
const MAX_HEADER_BYTES = 64 * 1024;
/** How long open connections may finish after a stop, in ms. */
const GRACE_MS = 5000;

export interface RunningServer {
  readonly url: string;
  /** Stops taking requests, lets those under way finish, then resolves. */
  readonly stop: () => Promise<void>;
}

/**
 * Serves the pages. `host` default 127.0.0.1, `port` default 3000 (0 = any free port).
 * Rejects when the address cannot be listened on.
 */
export async function startServer(
  services: WebServices,
  { host = "127.0.0.1", port = 3000 }: { readonly host?: string; readonly port?: number } = {},
): Promise<RunningServer> {
  const app = createApp(services);
  const server = createServer({ maxHeaderSize: MAX_HEADER_BYTES }, (request, response) => {
    app(request, response);
  });
  await new Promise<void>((resolve, reject) => {
    server.once("error", reject);
    server.listen(port, host, () => {
      server.off("error", reject);
      resolve();
    });
  });
  const { address, family, port: bound } = server.address() as AddressInfo;
  return {
    url: `http://${family === "IPv6" ? `[${address}]` : address}:${bound}`,
    stop: () => stop(server),
  };
}

function stop(server: Server): Promise<void> {
  return new Promise((resolve, reject) => {
    const force = setTimeout(() => {
      server.closeAllConnections();
    }, GRACE_MS);
    force.unref();
    server.close((error) => {
      clearTimeout(force);
      if (error) reject(error);
      else resolve();
    });
    server.closeIdleConnections();
  });
}
