import { Router, type Response } from "express";
import type { IonMap, MethodMap } from "../../recommendation/contract.ts";
import type { Names } from "../format/names.ts";
import { renderView } from "../render/render-view.ts";
import type { FactListing, WebServices } from "../services.ts";
import { ionMapView, methodMapView, pendingIonView } from "./method-map-view.ts";

/** How soon a page that is not complete asks again, s. */
const ASK_AGAIN_S = 5;

/** Which ways are open for each metal ion: all of them as a table, and one by one with values and reasons. */
export function methodMapPage(services: WebServices, names: Names): Router {
  const router = Router();
  const catalogue: ReadonlyMap<string, FactListing> = new Map(services.facts.map((f) => [f.name, f]));
  // A header, not an element: the page needs no script, and is not refreshed any more once it is complete.
  const askAgain = (response: Response, address: string): Response =>
    response.set("Refresh", `${ASK_AGAIN_S}; url=${address}`).set("Cache-Control", "no-store");

  router.get("/method-map", (_request, response) => {
    const map = services.methodMap();
    if (map.done < map.total) askAgain(response, "/method-map");
    response.send(renderView("method-map", methodMapView(services, names, map)));
  });

  router.get("/method-map/:ion", (request, response, next) => {
    const asked = request.params.ion;
    const component = [...services.knowledge.components.values()].find(
      (c) => c.kind === "metal" && (c.id === asked || c.ion === asked),
    );
    if (!component) {
      next();
      return;
    }
    const map = services.methodMap();
    const ion = map.ions.find((i) => i.ion === component.ion);
    if (ion) {
      response.send(renderView("method-map-ion", ionMapView(services, names, catalogue, ion, neighbours(map, ion))));
      return;
    }
    if (map.done < map.total) askAgain(response, request.originalUrl);
    response.send(renderView("method-map-pending", pendingIonView(services, names, component, map)));
  });
  return router;
}

function neighbours(map: MethodMap, ion: IonMap): readonly [IonMap | undefined, IonMap | undefined] {
  const at = map.ions.indexOf(ion);
  return [map.ions[at - 1], map.ions[at + 1]];
}
