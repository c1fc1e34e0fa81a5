import { describe, expect, it } from "vitest";
import { runCommandLine } from "../../src/cli/run-command-line.ts";
import type { Doors } from "../../src/cli/doors.ts";
import { AppError } from "../../src/errors.ts";
import { DOCUMENT } from "../recommendation/example-document.ts";
import { recorder, run, withFile } from "./command.ts";

const unused = (): never => {
  throw new Error("this door is not to be opened here");
};
const NO_DOORS: Doors = {
  recommend: unused,
  equilibrium: unused,
  curve: unused,
  methodMap: unused,
  limits: unused,
  turningPoints: unused,
  robustness: unused,
  knowledge: unused,
  checkRules: unused,
  serve: unused,
};

describe("chelwright", () => {
  it.each([
    [["--help"], /recommend .*\n.*map .*\n(.*\n)*.*equilibrium/],
    [["recommend", "--help"], /--json/],
  ])("explains itself on %j", async (argv, help) => {
    const { code, out } = await run(argv);
    expect({ code, out }).toEqual({ code: 0, out: expect.stringMatching(help) as string });
  });
  it.each([
    [["recommned"]],
    [["recommend"]],
    [["recommend", "a.json", "--jsn"]],
    [["recommend", "a", "b"]],
    [["rules"]],
    [[]],
  ])("refuses %j with exit code 2 and nothing on standard output", async (argv) => {
    const { code, out, err } = await run(argv);
    expect({ code, out }).toEqual({ code: 2, out: "" });
    expect(err).not.toBe("");
  });
});

describe("chelwright equilibrium", () => {
  // Cd-EDTA in ammonia with the constants given in the question, as in the contract.
  const question = {
    pH: 10,
    titrant: "EDTA",
    totals: { "Cd2+": 0.0025, EDTA: 0.0025 },
    constants: [
      { components: { "Cd2+": 1, EDTA: 1 }, log10Beta: 16.46 },
      { components: { "H+": 1, EDTA: 1 }, log10Beta: 10.24 },
    ],
  };
  it("prints the solved solution as JSON", async () => {
    const { code, out, err } = await run(["equilibrium", "-"], JSON.stringify(question));
    expect({ code, err }).toEqual({ code: 0, err: "" });
    const answer = JSON.parse(out) as {
      status: string;
      residual: number;
      components: { id: string; totalMolPerL: number }[];
    };
    expect(answer.status).toBe("converged");
    expect(answer.residual).toBeLessThanOrEqual(1e-12);
    expect(answer.components.find((c) => c.id === "Cd2+")?.totalMolPerL).toBe(0.0025);
  });
  it("answers from the knowledge base where no constants are given, names read as in a brief", async () => {
    const { code, out } = await run(
      ["equilibrium", "-"],
      JSON.stringify({ pH: 10, totals: { cadmium: 0.0025, EDTA: 0.0025 }, free: { NH3: 0.01 } }),
    );
    expect(code).toBe(0);
    const { conditional } = JSON.parse(out) as { conditional: { metal: string; log10ConditionalK: number }[] };
    const cadmium = conditional.find((c) => c.metal === "Cd2+")?.log10ConditionalK ?? Number.NaN;
    expect(cadmium).toBeGreaterThan(12); // log K 16.5 less about 0.4 for protons and 2 to 3 for ammonia
    expect(cadmium).toBeLessThan(16.5);
  });
  it.each([
    ["both pH and log10H", { ...question, log10H: -10 }, /^\$\.pH: expected one of "pH" and "log10H", found both$/],
    ["neither", { ...question, pH: undefined }, /^\$\.pH: expected one of "pH" and "log10H", found neither$/],
    ["a misspelt field", { ...question, total: {} }, /^\$\.total: expected one of the fields /],
    [
      "a negative total",
      { ...question, totals: { "Cd2+": -1 } },
      /^\$\.totals\["Cd2\+"\]: expected a number of at least 0/,
    ],
    ["an unknown component", { pH: 10, totals: { "Qx2+": 1 } }, /^\$\.totals\["Qx2\+"\]: expected a known ion/],
    ["a total of H+ beside the pH", { ...question, totals: { "H+": 1 } }, /^\$\.totals: expected no H\+ here/],
    ["hydroxide beside the pH", { pH: 10, totals: { "OH-": 1 } }, /^\$\.totals\["OH-"\]: expected no H\+ or OH- here/],
    [
      "a component in two spellings",
      { pH: 10, totals: { "Zn2+": 1, zinc: 1 } },
      /^\$\.totals\.zinc: expected each component once/,
    ],
  ])("refuses %s", async (_what, bad, fault) => {
    const { code, out, lines } = await run(["equilibrium", "-"], JSON.stringify(bad));
    expect({ code, out }).toEqual({ code: 2, out: "" });
    expect(lines).toEqual([expect.stringMatching(fault)]);
  });
});

describe("chelwright curve", () => {
  const question = {
    sample: { volumeML: 50, totals: { "Cd2+": 0.005 } },
    titrant: { id: "EDTA", molPerL: 0.01 },
    pH: 10,
    follow: "Cd2+",
    volumesML: [0, 10, 25, 50],
    constants: [
      { components: { "Cd2+": 1, EDTA: 1 }, log10Beta: 16.46 },
      { components: { "H+": 1, EDTA: 1 }, log10Beta: 10.24 },
    ],
  };
  it("prints pM at the volumes asked for, in their order", async () => {
    const { code, out } = await run(["curve", "-"], JSON.stringify(question));
    expect(code).toBe(0);
    const answer = JSON.parse(out) as { equivalenceML: number; points: { volumeML: number; pM: number }[] };
    expect(answer.equivalenceML).toBe(25);
    expect(answer.points.map((point) => point.volumeML)).toEqual(question.volumesML);
    expect(answer.points.every((point, i, all) => i === 0 || point.pM > (all[i - 1]?.pM ?? 0))).toBe(true);
  });
  it.each([
    [
      "to follow what is not there",
      { ...question, follow: "Zn2+" },
      /^\$\.follow: expected one of the components in the sample: Cd2\+, found "Zn2\+"$/,
    ],
    ["no volumes", { ...question, volumesML: [] }, /^\$\.volumesML: expected a list of at least 1/],
    [
      "a titrant of no strength",
      { ...question, titrant: { id: "EDTA", molPerL: 0 } },
      /^\$\.titrant\.molPerL: expected a number of at least/,
    ],
  ])("refuses %s", async (_what, bad, fault) => {
    const { code, out, lines } = await run(["curve", "-"], JSON.stringify(bad));
    expect({ code, out }).toEqual({ code: 2, out: "" });
    expect(lines).toEqual([expect.stringMatching(fault)]);
  });
});

describe("chelwright rules check", () => {
  it("passes the rules that come with the program and counts them", async () => {
    const { code, out, err } = await run(["rules", "check"]);
    expect({ code, err }).toEqual({ code: 0, err: "" });
    expect(Number(/^rules: (\d+) checked/.exec(out)?.[1])).toBeGreaterThanOrEqual(60);
  });
  it("fails on a folder with a faulty rule, one line per fault on standard error", async () => {
    const doors: Doors = {
      ...NO_DOORS,
      checkRules: () => Promise.resolve({ rules: 3, faults: ["a/b $.when: empty\nall", "c/d $.source: missing"] }),
    };
    const { io, written } = recorder();
    expect(await runCommandLine(["rules", "check", "x"], io, doors)).toBe(1);
    expect(written()).toEqual({ out: "", err: "a/b $.when: empty all\nc/d $.source: missing\n" });
  });
  it("fails on a folder that is not there", async () => {
    const { code, out } = await run(["rules", "check", "no-such-folder"]);
    expect({ code, out }).toEqual({ code: 1, out: "" });
  });
  it("fails on a file that is no rule file", async () => {
    const { code, err } = await withFile("{}", (path) => run(["rules", "check", path]));
    expect(code).toBe(1);
    expect(err).not.toBe("");
  });
});

describe("chelwright knowledge", () => {
  it("counts what is known and lists its gaps", async () => {
    const { code, out } = await run(["knowledge", "--json"]);
    expect(code).toBe(0);
    const summary = JSON.parse(out) as { counts: { what: string; count: number }[]; remarks: unknown[] };
    expect(summary.counts.find(({ what }) => what === "metal ions")?.count).toBeGreaterThanOrEqual(45);
    const words = await run(["knowledge"]);
    expect(words.out).toContain(`Gaps and doubts: ${summary.remarks.length}`);
  });
});

describe("runCommandLine", () => {
  const serveWith = async (environment: Readonly<Record<string, string>>) => {
    const asked: [string, number][] = [];
    const { io, written } = recorder("", environment);
    const serve = (host: string, port: number) => {
      asked.push([host, port]);
      return Promise.resolve(`http://${host}:${port}`);
    };
    const code = await runCommandLine(["serve"], io, { ...NO_DOORS, serve });
    return { code, asked, ...written() };
  };
  it("serves on loopback, port 3000, unless the environment says otherwise", async () => {
    expect(await serveWith({})).toMatchObject({
      code: 0,
      asked: [["127.0.0.1", 3000]],
      out: "chelwright answers at http://127.0.0.1:3000\n",
    });
    expect((await serveWith({ HOST: "::1", PORT: "8080" })).asked).toEqual([["::1", 8080]]);
  });
  it.each(["x", "70000", "-1", "80.5"])("refuses PORT=%s", async (PORT) => {
    expect(await serveWith({ PORT })).toMatchObject({
      code: 2,
      out: "",
      err: `PORT: expected a port from 0 to 65535, found "${PORT}"\n`,
    });
  });
  it("prints the document of an answer that finds nothing fit with exit code 0", async () => {
    const recommend = () => Promise.resolve({ ...DOCUMENT, verdict: "not-fit" as const, methods: [], decidedBy: null });
    const { io, written } = recorder("{}");
    expect(await runCommandLine(["recommend", "-"], io, { ...NO_DOORS, recommend })).toBe(0);
    expect(written().out).toContain("NOT FIT");
  });
  it("fails with one line and exit code 1 on a known fault that is not the input's", async () => {
    const recommend = () => Promise.reject(new AppError("data", "constants.json $[3]:\nbroken"));
    const { io, written } = recorder("{}");
    expect(await runCommandLine(["recommend", "-"], io, { ...NO_DOORS, recommend })).toBe(1);
    expect(written()).toEqual({ out: "", err: "constants.json $[3]: broken\n" });
  });
});
