import { beforeAll, describe, expect, it } from "vitest";
import { type Engine, openEngine } from "../../src/main.ts";
import type { Task } from "../../src/methods/types.ts";
import { turningPointsSchema } from "../../src/recommendation/contract.ts";
import type { StandingAnswer } from "../../src/recommendation/standing.ts";
import { turningPointsText } from "../../src/recommendation/turning-points-text.ts";
import { turningPoints } from "../../src/recommendation/turning-points.ts";
import { checkTurning, type TurningCheck } from "../campaigns/turning-points.ts";
import { inventedTask, KNOWLEDGE } from "../methods/invented.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";

const method = (kind: string): NonNullable<StandingAnswer["method"]> => ({ id: `${kind}|5`, kind, words: kind });
const level = (task: Task, component: string): number =>
  [...task.analytes, ...task.matrix].find((c) => c.component === component)!.molPerL;

/** A made-up judge: calmagite above 30 µmol/L of copper, not fit below 0.4 %, cyanide where it is allowed. */
const judge = (task: Task): Promise<StandingAnswer> =>
  Promise.resolve({
    verdict: task.requirementPercent < 0.4 ? "not-fit" : "fit",
    method: task.laboratory.avoid.includes("EDTA")
      ? null
      : method(
          `${level(task, "Cu2+") > 3e-5 ? "calmagite" : "mordant"}${task.laboratory.avoid.includes("cyanide") ? "" : " cyanide"}`,
        ),
    reagents: ["EDTA", "ammonia"],
  });

describe("turningPoints", () => {
  const avoid = { avoid: ["cyanide"], available: null, detection: ["visual" as const], heating: true, buretteML: 25 };
  const task = inventedTask({ "Mg2+": 0.004 }, { "Cu2+": 1e-5 }, { laboratory: avoid });
  it("finds each level, the requirement and the reagents that turn an answer, smallest first, and lists what turns nothing", async () => {
    const found = await turningPoints(task, judge, KNOWLEDGE);
    expect(turningPointsSchema.safeParse(JSON.parse(JSON.stringify(found))).success).toBe(true);
    expect(found.points.map((p) => [p.what, p.subject, p.direction, p.changes.join()])).toEqual([
      ["requirement", "", "down", "verdict"],
      ["matrix-level", "Cu2+", "up", "method"],
      ["allow", "cyanide", null, "method"],
      ["forbid", "EDTA", null, "method"],
    ]);
    const [requirement, copper] = found.points;
    expect(requirement!.to!).toBeLessThan(0.4);
    expect(requirement!.to!).toBeGreaterThan(0.4 / 1.05);
    expect(copper!.to!).toBeGreaterThan(3e-5);
    expect(copper!.to!).toBeLessThan(3e-5 * 1.05);
    expect(found.unmoved.map((u) => `${u.what} ${u.subject} ${u.direction ?? ""}`.trim()).sort()).toEqual([
      "analyte-level Mg2+ down",
      "analyte-level Mg2+ up",
      "forbid ammonia",
      "matrix-level Cu2+ down",
      "requirement  up",
    ]);
    expect({ done: found.done, total: found.total }).toEqual({ done: 9, total: 9 });
    const words = turningPointsText(found).replace(/\s+/g, " ");
    expect(words).toContain("All 9 changes looked at");
    expect(words).toMatch(/the requirement: 1 % to 0\.39\d* %, 0\.39\d* times: verdict fit becomes not fit/);
    expect(words).toContain("forbid EDTA: no method is left");
  });
  it("asks a few tasks at once and tells how far it is", async () => {
    let open = 0;
    let most = 0;
    const told: number[] = [];
    await turningPoints(
      task,
      async (asked) => {
        most = Math.max(most, ++open);
        await new Promise((resolve) => setTimeout(resolve, 1));
        open--;
        return judge(asked);
      },
      KNOWLEDGE,
      { together: 3, report: (soFar) => told.push(soFar.runs) },
    );
    expect(most).toBe(3);
    expect(told).toEqual([...told].sort((a, b) => a - b));
  });
  it("gives what it has when it is stopped, and fails where a task fails", async () => {
    const stop = new AbortController();
    let asked = 0;
    const part = await turningPoints(
      task,
      (one) => {
        if (++asked === 6) stop.abort();
        return judge(one);
      },
      KNOWLEDGE,
      { signal: stop.signal },
    );
    expect(part.runs).toBeLessThanOrEqual(8);
    expect(part.done).toBeLessThan(part.total);
    await expect(turningPoints(task, () => Promise.reject(new Error("broken")), KNOWLEDGE)).rejects.toThrow("broken");
  });
});

/** Invented briefs of small laboratories, drawn by a seed, so that an answer takes a fraction of a second. */
const drawn = [0, 1].map((index) => {
  const random = seededRandom(20261201, index);
  const zinc = 4 + 8 * random.uniform();
  return {
    title: `Invented: a rinse of zinc (${index})`,
    analytes: [{ ion: "Zn2+", concentration: { value: Number(zinc.toPrecision(3)), unit: "mmol/L" } }],
    matrix: [
      {
        component: "Al3+",
        concentration: { value: Number((0.05 + 0.4 * random.uniform()).toPrecision(3)), unit: "mmol/L" },
      },
    ],
    portion: { volumeML: 25, titrationVolumeML: 100 },
    requirement: { relativeExpandedUncertaintyPercent: 1 },
    laboratory: { available: ["EDTA", "hexamine", "xylenol-orange", "fluoride", "ammonia", "mordant-black-11"] },
  };
});

describe("turning points of real answers", () => {
  let engine: Engine;
  beforeAll(async () => {
    engine = await openEngine();
  });
  it.each(drawn.map((brief) => [brief.title, brief] as const))(
    "turn when the changed brief is answered in full, all of them, and a tenth less of the change turns nothing: %s",
    async (_title, brief) => {
      const check: TurningCheck = await checkTurning(brief, engine);
      expect(check.broken).toEqual([]);
      expect(check.found.points.filter((p) => p.from !== null).length).toBeGreaterThan(1);
      expect(check.turned).toBe(check.found.points.length);
      expect(check.still).toBe(check.found.points.length);
    },
    240_000,
  );
});
