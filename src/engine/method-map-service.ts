import { setTimeout as pause } from "node:timers/promises";
import type { Knowledge } from "../constants/knowledge.ts";
import type { IonMap, MethodMap } from "../recommendation/contract.ts";
import { mapIons, SEVERAL_ANALYTES } from "../recommendation/method-map.ts";
import { UnavailableError } from "./worker-pool.ts";

/** How long the map stands back when all threads are taken and many wait, ms. */
const STAND_BACK_MS = 2000;

/**
 * The method map of a running server: worked out ion by ion from the first time it is asked for, then kept as long as the
 * server runs with this knowledge. One ion at a time is under way, so that briefs find a thread free.
 * @param ask answers for one ion
 * @param log takes one line for each ion that failed
 * @param wanted the ions to map; all metal ions of the knowledge where nothing is said
 */
export function createMethodMap(
  knowledge: Knowledge,
  ask: (ion: string) => Promise<IonMap>,
  log: (line: string) => void,
  wanted: readonly string[] = mapIons(knowledge),
): () => MethodMap {
  const ions: IonMap[] = [];
  const failed: { ion: string; message: string }[] = [];
  let started = false;
  const workOut = async (): Promise<void> => {
    for (const ion of wanted) {
      for (;;) {
        try {
          ions.push(await ask(ion));
        } catch (error) {
          if (error instanceof UnavailableError) {
            if (error.code === "closed") return;
            if (error.code === "busy") {
              await pause(STAND_BACK_MS, undefined, { ref: false });
              continue;
            }
          }
          const message = error instanceof Error ? error.message : String(error);
          log(`method map, ${ion}: ${message}`);
          failed.push({ ion, message: "the calculation failed; the log says how" });
        }
        break;
      }
    }
  };
  return () => {
    if (!started) {
      started = true;
      void workOut();
    }
    return {
      contract: 1,
      knowledge: { version: knowledge.version, hash: knowledge.hash },
      total: wanted.length,
      done: ions.length + failed.length,
      failed: [...failed],
      severalAnalytes: { ...SEVERAL_ANALYTES },
      ions: [...ions],
    };
  };
}
