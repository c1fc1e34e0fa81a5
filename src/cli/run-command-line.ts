import { Command, CommanderError } from "commander";
import { AppError, InputError } from "../errors.ts";
import type { TurningPoints } from "../recommendation/contract.ts";
import { limitsText } from "../recommendation/limits-text.ts";
import { methodMapText } from "../recommendation/method-map-text.ts";
import { robustnessText } from "../recommendation/robustness-text.ts";
import { recommendationText } from "../recommendation/text.ts";
import { turningPointsText, turningProgress } from "../recommendation/turning-points-text.ts";
import type { CommandIO, Doors, KnowledgeSummary } from "./doors.ts";
import { readJsonFile } from "./read-input.ts";

/** Exit codes: an answer was given (also "not fit"); something failed or rules are faulty; the input or the command is not valid. */
export const EXIT = { answered: 0, failed: 1, invalid: 2 } as const;

/** Runs one command and returns its exit code. On any fault nothing stands on standard output and one line per fault on standard error. */
export async function runCommandLine(argv: readonly string[], io: CommandIO, doors: Doors): Promise<number> {
  let code: number = EXIT.answered;
  const program = commands(io, doors, (exit) => {
    code = exit;
  });
  try {
    await program.parseAsync([...argv], { from: "user" });
    return code;
  } catch (error) {
    if (error instanceof CommanderError) return error.exitCode === 0 ? EXIT.answered : EXIT.invalid;
    if (error instanceof InputError) {
      for (const fault of error.faults)
        io.err(`${oneLine(`${fault.path}: expected ${fault.expected}, found ${fault.found}`)}\n`);
      return EXIT.invalid;
    }
    if (!(error instanceof AppError)) throw error;
    io.err(`${oneLine(error.message)}\n`);
    return EXIT.failed;
  }
}

function commands(io: CommandIO, doors: Doors, exit: (code: number) => void): Command {
  const read = (file: string): Promise<unknown> => readJsonFile(file, io.standardInput);
  const json = (document: unknown): void => io.out(`${JSON.stringify(document, null, 1)}\n`);
  const program = new Command("chelwright")
    .description("Designs and justifies complexometric titration methods by calculation.")
    .exitOverride()
    .configureOutput({ writeOut: io.out, writeErr: io.err })
    .showHelpAfterError("(chelwright --help lists the commands)");

  program
    .command("recommend")
    .description("recommend a titration method for a brief")
    .argument("<brief>", 'brief as a JSON file; "-" reads standard input')
    .option("--json", "print the whole recommendation document as JSON")
    .action(async (file: string, options: { readonly json?: boolean }) => {
      const document = await doors.recommend(await read(file));
      if (options.json === true) json(document);
      else io.out(recommendationText(document));
    });
  program
    .command("map")
    .description(
      "say which ways of titrating are open for one metal ion, or for all of them, and why the others are not",
    )
    .argument("[ion]", "ion, such as Zn2+ (default: every metal ion of the knowledge base)")
    .option("--json", "print the map as JSON")
    .action(async (ion: string | undefined, options: { readonly json?: boolean }) => {
      const map = await doors.methodMap(ion ?? null);
      if (options.json === true) json(map);
      else io.out(methodMapText(map));
    });
  program
    .command("limits")
    .description("say how much of each component a method bears, and what ends it")
    .argument("<brief>", 'brief as a JSON file; "-" reads standard input')
    .option("--method <id>", "id of a method of the answer (default: the first)")
    .option("--also <ions...>", "ions that the brief does not name, looked at one by one as if the sample held them")
    .option("--json", "print the limits as JSON")
    .action(
      async (
        file: string,
        options: { readonly method?: string; readonly also?: string[]; readonly json?: boolean },
      ) => {
        const limits = await doors.limits(await read(file), options.method, options.also ?? []);
        if (options.json === true) json(limits);
        else io.out(limitsText(limits));
      },
    );
  program
    .command("turning-points")
    .description(
      "find the smallest single changes of a brief that change its first method or its verdict; takes minutes, Ctrl-C stops it and prints what it has",
    )
    .argument("<brief>", 'brief as a JSON file; "-" reads standard input')
    .option("--json", "print them as JSON")
    .action(async (file: string, options: { readonly json?: boolean }) => {
      const stop = new AbortController();
      const unwatch = io.onStop(() => stop.abort());
      try {
        const report = atMostEvery(REPORT_MS, (found: TurningPoints) => io.err(`${turningProgress(found)}\n`));
        const found = await doors.turningPoints(await read(file), { signal: stop.signal, report });
        if (options.json === true) json(found);
        else io.out(turningPointsText(found));
      } finally {
        unwatch();
      }
    });
  program
    .command("robustness")
    .description(
      "draw a method many times with everything it rests on only known so well: how often it meets the requirement, and what matters; Ctrl-C stops it and prints what it has",
    )
    .argument("<brief>", 'brief as a JSON file; "-" reads standard input')
    .option("--method <which>", "id or rank of a method of the answer (default: the first)")
    .option("--draws <number>", "how many draws (default: 1000)")
    .option("--seed <number>", "the same seed gives the same figures (default: 1)")
    .option("--json", "print it as JSON")
    .action(async (file: string, options: RobustnessFlags) => {
      const stop = new AbortController();
      const unwatch = io.onStop(() => stop.abort());
      try {
        const report = atMostEvery(REPORT_MS, ([done, total]: readonly [number, number]) =>
          io.err(`${done} of ${total} draws and rows of the map\n`),
        );
        const asked = robustnessOptions(options);
        const found = await doors.robustness(await read(file), asked, {
          signal: stop.signal,
          report: (done, total) => report([done, total]),
        });
        if (found === null) io.err("stopped before the first draws\n");
        else if (options.json === true) json(found);
        else io.out(robustnessText(found));
      } finally {
        unwatch();
      }
    });
  program
    .command("equilibrium")
    .description("solve one solution at fixed acidity; prints JSON")
    .argument("<file>", 'question as a JSON file; "-" reads standard input')
    .action(async (file: string) => json(await doors.equilibrium(await read(file))));
  program
    .command("curve")
    .description("compute a titration curve; prints JSON")
    .argument("<file>", 'question as a JSON file; "-" reads standard input')
    .action(async (file: string) => json(await doors.curve(await read(file))));
  program
    .command("rules")
    .description("work with the rules")
    .command("check")
    .description("check every rule of a folder against the schema, the fact catalogue and its own examples")
    .argument("[folder]", "folder with *.rules.json files (default: the rules that come with the program)")
    .action(async (folder: string | undefined) => {
      const { rules, faults } = await doors.checkRules(folder ?? null);
      if (faults.length === 0) io.out(`rules: ${rules} checked with their examples, no faults\n`);
      for (const fault of faults) io.err(`${oneLine(fault)}\n`);
      if (faults.length > 0) exit(EXIT.failed);
    });
  program
    .command("knowledge")
    .description("count what the knowledge base holds, and list its gaps and doubts")
    .option("--json", "print it as JSON")
    .action(async (options: { readonly json?: boolean }) => {
      const summary = await doors.knowledge();
      if (options.json === true) json(summary);
      else io.out(summaryText(summary));
    });
  program
    .command("serve")
    .description("serve the pages; HOST and PORT come from the environment (127.0.0.1, 3000)")
    .action(async () => {
      const address = await doors.serve(io.environment.HOST || "127.0.0.1", readPort(io.environment.PORT));
      io.out(`chelwright answers at ${address}\n`);
    });
  return program;
}

/** How often progress is told, ms. */
const REPORT_MS = 5000;

/** Passes on what it is told, but not more often than this. */
function atMostEvery<T>(milliseconds: number, tell: (what: T) => void): (what: T) => void {
  let told = Date.now();
  return (what) => {
    if (Date.now() - told < milliseconds) return;
    told = Date.now();
    tell(what);
  };
}

interface RobustnessFlags {
  readonly method?: string;
  readonly draws?: string;
  readonly seed?: string;
  readonly json?: boolean;
}

/** Numbers of the robustness command; what is no whole number is refused with its name. */
function robustnessOptions({ method, draws, seed }: RobustnessFlags): Parameters<Doors["robustness"]>[1] {
  const whole = (name: string, text: string): number => {
    if (/^\d{1,15}$/.test(text)) return Number(text);
    throw new InputError([{ path: name, expected: "a whole number", found: JSON.stringify(text) }]);
  };
  return {
    ...(method === undefined ? {} : { method }),
    ...(draws === undefined ? {} : { draws: whole("--draws", draws) }),
    ...(seed === undefined ? {} : { seed: whole("--seed", seed) }),
  };
}

function readPort(text: string | undefined): number {
  if (text === undefined || text === "") return 3000;
  const port = /^\d{1,5}$/.test(text) ? Number(text) : Number.NaN;
  if (port >= 0 && port <= 65_535) return port;
  throw new InputError([{ path: "PORT", expected: "a port from 0 to 65535", found: JSON.stringify(text) }]);
}

function summaryText(summary: KnowledgeSummary): string {
  const width = Math.max(...summary.counts.map(({ what }) => what.length));
  return [
    `Knowledge ${summary.version}, ${summary.hash}`,
    "",
    ...summary.counts.map(({ what, count }) => `  ${what.padEnd(width)} ${String(count).padStart(6)}`),
    "",
    `Gaps and doubts: ${summary.remarks.length}`,
    ...summary.remarks.map((remark) => `  ${remark.kind}: ${remark.about}: ${remark.text}`),
    "",
  ].join("\n");
}

/** A fault is one line, whatever stands in it; other control characters could move a terminal's cursor. */
const oneLine = (text: string): string => text.replace(/[\u0000-\u001f\u007f-\u009f]+/g, " ");
