import { parentPort, workerData } from "node:worker_threads";
import { openEngine } from "../main.ts";
import type { Task } from "../methods/types.ts";
import { mapIon } from "../recommendation/method-map.ts";
import { recommend } from "../recommendation/recommend.ts";
import type { Question, Reply } from "./messages.ts";

/** Loads the engine in this thread and answers one question after the other. Throws where the knowledge is not that of the thread that asks. */
export async function answerMessages(): Promise<void> {
  const port = parentPort;
  if (!port) throw new Error("this file answers in a thread of its own");
  const { knowledge, rules } = await openEngine();
  const { hash } = workerData as { readonly hash: string };
  if (knowledge.hash !== hash)
    throw new Error(`constants or rules have changed on disk (${knowledge.hash}, the server started with ${hash})`);
  port.on("message", (question: Question) => {
    void (async (): Promise<Reply> => {
      const { id, kind, asks } = question;
      try {
        const answers =
          kind === "recommend"
            ? await recommend(asks as Task, knowledge, rules)
            : await mapIon(asks as string, knowledge, rules);
        return { id, ok: true, answers };
      } catch (error) {
        const { message, stack } = error instanceof Error ? error : new Error(String(error));
        return { id, ok: false, message, stack: stack ?? message };
      }
    })().then((reply) => port.postMessage(reply));
  });
  port.postMessage("ready");
}
