import { createHash } from "node:crypto";
import { fileURLToPath } from "node:url";
import type { CommandIO, Doors, KnowledgeSummary } from "./cli/doors.ts";
import { runCommandLine } from "./cli/run-command-line.ts";
import type { Knowledge } from "./constants/knowledge.ts";
import { AppError } from "./errors.ts";
import type { RuleBase, RuleRunner } from "./inference/index.ts";
import type {
  IonMap,
  MethodLimits,
  MethodMap,
  Recommendation,
  Robustness,
  TurningPoints,
} from "./recommendation/contract.ts";
import type { WebServices } from "./web/index.ts";

// Composition root: the only place that knows every layer. Modules are loaded when a command needs them, so that `recommend` starts without the web server.

const RULES_FOLDER = fileURLToPath(new URL("../rules", import.meta.url));

/** Constants and rules, loaded and checked, with the one function that answers a brief. */
export interface Engine {
  readonly knowledge: Knowledge; // its hash covers the rules too
  readonly ruleBase: RuleBase;
  readonly rules: RuleRunner;
  /** Answers a brief given as JSON; throws InputError with one fault per error. */
  readonly recommend: (brief: unknown) => Promise<Recommendation>;
}

/** Loads constants and rules once and joins them into an engine. Throws DataError or RuleError where they do not keep their schemas. */
export async function openEngine(): Promise<Engine> {
  const [{ loadKnowledge }, { createRuleRunner, loadRules }, { readBrief }, { recommend }] = await Promise.all([
    import("./constants/index.ts"),
    import("./inference/index.ts"),
    import("./recommendation/brief.ts"),
    import("./recommendation/recommend.ts"),
  ]);
  const constants = loadKnowledge();
  const ruleBase = loadRules(RULES_FOLDER);
  const rules = createRuleRunner(ruleBase);
  const hash = createHash("sha256").update(constants.hash).update(ruleBase.content).digest("hex").slice(0, 16);
  const knowledge: Knowledge = { ...constants, hash };
  return { knowledge, ruleBase, rules, recommend: (brief) => recommend(readBrief(brief, knowledge), knowledge, rules) };
}

/** Runs the program with the words after its name; returns the exit code. Faults go to standard error, one a line. */
export async function main(argv: readonly string[], io: CommandIO = processIO()): Promise<number> {
  try {
    return await runCommandLine(argv, io, doors(io));
  } catch (error) {
    // Nobody asked for this one: say what it is, with its trace, so that it can be reported.
    io.err(
      `chelwright failed unexpectedly\n${error instanceof Error ? (error.stack ?? error.message) : String(error)}\n`,
    );
    return 1;
  }
}

function doors(io: CommandIO): Doors {
  return {
    recommend: async (brief) => (await openEngine()).recommend(brief),
    equilibrium: async (question) => {
      const [{ answerEquilibrium }, { loadKnowledge }] = await calculators();
      return answerEquilibrium(question, loadKnowledge());
    },
    curve: async (question) => {
      const [{ answerCurve }, { loadKnowledge }] = await calculators();
      return answerCurve(question, loadKnowledge());
    },
    methodMap: async (ion) => methodMap(ion, await openEngine()),
    limits: async (brief, method, also) => methodLimits(brief, method, also, await openEngine()),
    turningPoints: async (brief, watch) => findTurningPoints(brief, watch, await openEngine()),
    robustness: async (brief, options, watch) => drawRobustness(brief, options, watch, await openEngine()),
    knowledge: async () => summary(await openEngine()),
    checkRules: async (folder) => {
      const { checkRules } = await import("./inference/index.ts");
      const { rules, faults } = await checkRules(folder ?? RULES_FOLDER);
      return { rules: rules.length, faults: faults.map((fault) => fault.message) };
    },
    serve: (host, port) => serve(host, port, io),
  };
}

const calculators = () => Promise.all([import("./recommendation/calculate.ts"), import("./constants/index.ts")]);

/** Tolerance limits of one method of the answer to a brief. */
async function methodLimits(
  brief: unknown,
  method: string | undefined,
  also: readonly string[],
  { recommend, knowledge }: Engine,
): Promise<MethodLimits> {
  const { limitsDocument, limitsWork, workOutLimits } = await import("./recommendation/method-limits.ts");
  const asked = limitsWork(await recommend(brief), method, also, knowledge);
  return limitsDocument(asked, workOutLimits(asked.work, knowledge), knowledge);
}

/** Turning points of a brief, worked out in two threads of their own. */
async function findTurningPoints(
  brief: unknown,
  watch: Parameters<Doors["turningPoints"]>[1],
  { knowledge }: Engine,
): Promise<TurningPoints> {
  const [{ readBrief }, { turningPoints }, { createWorkerPool }, { patientStanding }] = await Promise.all([
    import("./recommendation/brief.ts"),
    import("./recommendation/turning-points.ts"),
    import("./engine/worker-pool.ts"),
    import("./engine/turning-point-service.ts"),
  ]);
  const task = readBrief(brief, knowledge);
  const pool = createWorkerPool({ data: { hash: knowledge.hash } });
  try {
    return await turningPoints(task, patientStanding(pool, watch.signal), knowledge, watch);
  } finally {
    await pool.close();
  }
}

/** Draws of one method of the answer to a brief, made in two threads of their own. */
async function drawRobustness(
  brief: unknown,
  options: Parameters<Doors["robustness"]>[1],
  watch: Parameters<Doors["robustness"]>[2],
  { recommend, knowledge }: Engine,
): Promise<Robustness | null> {
  const [{ robustnessWork }, { createWorkerPool }, { askPool, runRobustness }] = await Promise.all([
    import("./recommendation/robustness.ts"),
    import("./engine/worker-pool.ts"),
    import("./engine/robustness-service.ts"),
  ]);
  const document = await recommend(brief);
  const asked = { document, ...robustnessWork(document, options.method, options, knowledge) };
  const pool = createWorkerPool({ data: { hash: knowledge.hash } });
  try {
    return await runRobustness(asked, askPool(pool, 2), watch, knowledge);
  } finally {
    await pool.close();
  }
}

/** The method map of one ion, or of all, worked out one after the other. */
async function methodMap(ion: string | null, { knowledge, rules }: Engine): Promise<MethodMap> {
  const { mapIon, mapIons, SEVERAL_ANALYTES } = await import("./recommendation/method-map.ts");
  const wanted = ion === null ? mapIons(knowledge) : [ion];
  const ions: IonMap[] = [];
  for (const one of wanted) ions.push(await mapIon(one, knowledge, rules));
  return {
    contract: 1,
    knowledge: { version: knowledge.version, hash: knowledge.hash },
    total: wanted.length,
    done: ions.length,
    failed: [],
    severalAnalytes: SEVERAL_ANALYTES,
    ions,
  };
}

/** What the pages need, over the real knowledge: briefs and the method map are worked out in threads of their own, so that the server goes on answering. `mapOnly`: the ions of the method map, where not all. */
export async function openServices(
  log: (line: string) => void,
  options: { readonly mapOnly?: readonly string[] } = {},
): Promise<{ readonly services: WebServices; readonly close: () => Promise<void> }> {
  const [
    engine,
    { FACT_CATALOGUE, OPERATORS },
    { figureSeries },
    { readBrief },
    { briefOf },
    limits,
    pools,
    maps,
    turns,
    { robustnessWork },
    draws,
  ] = await Promise.all([
    openEngine(),
    import("./inference/index.ts"),
    import("./recommendation/calculate-series.ts"),
    import("./recommendation/brief.ts"),
    import("./recommendation/brief-document.ts"),
    import("./recommendation/method-limits.ts"),
    import("./engine/worker-pool.ts"),
    import("./engine/method-map-service.ts"),
    import("./engine/turning-point-service.ts"),
    import("./recommendation/robustness.ts"),
    import("./engine/robustness-service.ts"),
  ]);
  const { knowledge, ruleBase } = engine;
  const pool = pools.createWorkerPool({ data: { hash: knowledge.hash } });
  const turning = turns.createTurningPoints(pool, knowledge, log);
  const drawn = draws.createRobustness(pool, knowledge, log);
  return {
    services: {
      knowledge,
      rules: ruleBase.rules,
      facts: FACT_CATALOGUE,
      operators: OPERATORS,
      readBrief: (brief) => briefOf(readBrief(brief, knowledge), knowledge),
      // A faulty brief is answered here; only a task that can be worked out goes to a thread.
      recommend: async (brief) => pool.ask("recommend", readBrief(brief, knowledge)),
      figureSeries: (document, methodId) => figureSeries(document, methodId, knowledge),
      limits: async (document, methodId, also) => {
        const asked = limits.limitsWork(document, methodId, also, knowledge);
        return limits.limitsDocument(asked, await pool.ask("limits", asked.work), knowledge);
      },
      robustness: {
        ...drawn,
        start: ({ document, method, ...options }) =>
          drawn.start({ document, ...robustnessWork(document, method, options, knowledge) }),
      },
      turningPoints: { ...turning, start: (brief) => turning.start(readBrief(brief, knowledge)) },
      methodMap: maps.createMethodMap(knowledge, (ion) => pool.ask("mapIon", ion), log, options.mapOnly),
      log,
    },
    close: pool.close,
  };
}

async function serve(host: string, port: number, io: CommandIO): Promise<string> {
  const [{ services, close }, { startServer }] = await Promise.all([
    openServices((line) => {
      io.err(`${line}\n`);
    }),
    import("./web/index.ts"),
  ]);
  try {
    const server = await startServer(services, { host, port });
    const stop = async (): Promise<void> => {
      await server.stop();
      await close();
    };
    for (const signal of ["SIGINT", "SIGTERM"] as const) process.once(signal, () => void stop());
    return server.url;
  } catch (cause) {
    const code = cause instanceof Error && "code" in cause ? String(cause.code) : null;
    if (code === null) throw cause;
    throw new AppError("listen", `cannot listen on ${host} port ${port} (${code})`, { host, port }, cause);
  }
}

function summary({ knowledge, ruleBase }: Engine): KnowledgeSummary {
  const components = [...knowledge.components.values()];
  const reactions = [...knowledge.reactions.values()];
  const ofKind = (kind: string): number => components.filter((component) => component.kind === kind).length;
  const records = reactions.reduce((sum, reaction) => sum + reaction.records.length, 0);
  const counts: readonly (readonly [string, number])[] = [
    ["metal ions", ofKind("metal")],
    ["ligands", ofKind("ligand")],
    ["dyes with constants", ofKind("dye")],
    ["species", knowledge.species.length],
    ["solids", knowledge.solids.length],
    ["reactions", reactions.length],
    ["values of constants", records],
    ["titrants", knowledge.titrants.size],
    ["metal titrants", knowledge.metalTitrants.size],
    ["indicators", knowledge.indicators.size],
    ["buffers", knowledge.buffers.size],
    ["masking and auxiliary agents", knowledge.agents.size],
    ["masking records", knowledge.masking.length],
    ["kinetic records", knowledge.kinetics.length],
    ["electrodes", knowledge.electrodes.length],
    ["rules", ruleBase.rules.length],
    ["sources", knowledge.sources.size],
  ];
  return {
    version: knowledge.version,
    hash: knowledge.hash,
    counts: counts.map(([what, count]) => ({ what, count })),
    remarks: knowledge.remarks,
  };
}

function processIO(): CommandIO {
  // A reader that stops early (head, a pager) is no fault of ours.
  process.stdout.on("error", (error: NodeJS.ErrnoException) => {
    if (error.code !== "EPIPE") throw error;
  });
  return {
    out: (text) => void process.stdout.write(text),
    err: (text) => void process.stderr.write(text),
    standardInput: process.stdin,
    onStop: (stop) => {
      process.once("SIGINT", stop);
      return () => process.off("SIGINT", stop);
    },
    environment: process.env,
  };
}
