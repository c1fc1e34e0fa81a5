#!/usr/bin/env node
// Plain JavaScript, so that npx can start it: registers the TypeScript loader, then hands over to the composition root.
import { register } from "tsx/esm/api";

register();
const { main } = await import("../main.ts");
process.exitCode = await main(process.argv.slice(2));
