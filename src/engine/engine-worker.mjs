// Plain JavaScript, so that a thread can start it: registers the TypeScript loader, then answers what it is asked.
import { register } from "tsx/esm/api";

register();
const { answerMessages } = await import("./answer-messages.ts");
await answerMessages();
