import { execFile } from "node:child_process";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { fileURLToPath } from "node:url";
import { join } from "node:path";
import { promisify } from "node:util";

const execute = promisify(execFile);

/** One timing: microseconds per equilibrium, and the check value it printed. */
export interface Timing {
  readonly microseconds: number;
  readonly check: string;
}

/** A program to be measured against. */
export interface Baseline {
  readonly name: string;
  readonly time: () => Promise<Timing>;
}

/** The baselines that can run here, and what is missing for the others. */
export interface Baselines {
  readonly available: readonly Baseline[];
  readonly missing: readonly string[];
  readonly dispose: () => Promise<void>;
}

const here = (name: string): string => fileURLToPath(new URL(name, import.meta.url));

const reason = (error: unknown): string => (error instanceof Error ? error.message.split("\n")[0]! : String(error));

/** Reads "us/solve X ... check Y" as both baselines print it. */
function parse(output: string): Timing {
  const found = /us\/solve ([\d.]+)\s+check (-?[\d.]+)/.exec(output);
  if (found === null) throw new Error(`expected "us/solve ... check ...", got ${output.slice(0, 200)}`);
  return { microseconds: Number(found[1]), check: found[2]! };
}

/** Compiles the C++ baseline into a temporary folder and looks for a Python with SciPy. */
export async function findBaselines(): Promise<Baselines> {
  const folder = await mkdtemp(join(tmpdir(), "chelwright-bench-"));
  const available: Baseline[] = [];
  const missing: string[] = [];
  const program = join(folder, "newton");
  try {
    await execute("g++", ["-O2", "-march=native", "-o", program, here("newton.cpp")]);
    available.push({ name: "C++ Newton", time: async () => parse((await execute(program, ["50"])).stdout) });
  } catch (error) {
    missing.push(`C++ baseline: g++ did not compile newton.cpp (${reason(error)})`);
  }
  const python = await findPython();
  if (python === null)
    missing.push("SciPy baseline: no python3 with numpy and scipy (Debian: apt install python3-scipy)");
  else
    available.push({
      name: "SciPy root",
      time: async () => parse((await execute(python, [here("scipy_root.py"), "1"])).stdout),
    });
  return { available, missing, dispose: () => rm(folder, { recursive: true, force: true }) };
}

async function findPython(): Promise<string | null> {
  for (const candidate of ["python3", "/usr/bin/python3", "python"]) {
    try {
      await execute(candidate, ["-c", "import numpy, scipy.optimize"]);
      return candidate;
    } catch {
      continue;
    }
  }
  return null;
}
