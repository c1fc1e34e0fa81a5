import { parentPort, workerData } from "node:worker_threads";
import { openEngine, type Engine } from "../main.ts";
import { workOutLimits } from "../recommendation/method-limits.ts";
import { mapIon } from "../recommendation/method-map.ts";
import { recommend } from "../recommendation/recommend.ts";
import { workOutDraws, workOutMapRow } from "../recommendation/robustness.ts";
import { standingOf } from "../recommendation/standing.ts";
import type { JobKind, Jobs, Question, Reply } from "./messages.ts";

/** How each kind of question is answered. */
const ANSWERS: {
  readonly [K in JobKind]: (asks: Jobs[K]["asks"], engine: Engine) => Jobs[K]["answers"] | Promise<Jobs[K]["answers"]>;
} = {
  recommend: (task, { knowledge, rules }) => recommend(task, knowledge, rules),
  mapIon: (ion, { knowledge, rules }) => mapIon(ion, knowledge, rules),
  standing: (task, { knowledge, rules }) => standingOf(task, knowledge, rules),
  limits: (work, { knowledge }) => workOutLimits(work, knowledge),
  draws: (asked, { knowledge }) => workOutDraws(asked, knowledge),
  mapRow: (asked, { knowledge }) => workOutMapRow(asked, knowledge),
};

/** Loads the engine in this thread and answers one question after the other. Throws where the knowledge is not that of the thread that asks. */
export async function answerMessages(): Promise<void> {
  const port = parentPort;
  if (!port) throw new Error("this file answers in a thread of its own");
  const engine = await openEngine();
  const { knowledge } = engine;
  const { hash } = workerData as { readonly hash: string };
  if (knowledge.hash !== hash)
    throw new Error(`constants or rules have changed on disk (${knowledge.hash}, the server started with ${hash})`);
  port.on("message", (question: Question) => {
    void (async (): Promise<Reply> => {
      const { id, kind, asks } = question;
      try {
        const answer = ANSWERS[kind] as (asks: Question["asks"], engine: Engine) => Promise<Jobs[JobKind]["answers"]>;
        return { id, ok: true, answers: await answer(asks, engine) };
      } catch (error) {
        const { message, stack } = error instanceof Error ? error : new Error(String(error));
        return { id, ok: false, message, stack: stack ?? message };
      }
    })().then((reply) => port.postMessage(reply));
  });
  port.postMessage("ready");
}
