import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { InputError } from "../../src/errors.ts";
import { encodeBrief } from "../../src/web/form/brief-link.ts";
import type { JobState } from "../../src/web/services.ts";
import type { TurningPoints } from "../../src/recommendation/contract.ts";
import { TURNING, TURNING_JOB } from "./fixture/limits.ts";
import { startSite, type Site } from "./fixture/site.ts";

const BRIEF = { title: "An invented rinse", analytes: [{ ion: "Zn2+", concentration: { value: 3, unit: "mmol/L" } }] };
const LINK = encodeBrief(BRIEF);

/** A search that runs until it is stopped, and remembers what was asked of it. */
function runningSearch() {
  let state: JobState<TurningPoints>["state"] = "running";
  const asked: unknown[] = [];
  return {
    asked,
    jobs: {
      start: (brief: unknown) => {
        asked.push(brief);
        state = "running";
        return "a1";
      },
      look: (id: string) =>
        id === "a1"
          ? { ...TURNING_JOB, id, state, progress: { done: 1, total: 4 }, result: { ...TURNING, done: 1 } }
          : null,
      stop: (id: string) => {
        state = "stopped";
        return id === "a1";
      },
    },
  };
}

let site: Site;
beforeAll(async () => {
  site = await startSite();
});
afterAll(() => site.stop());

const form = (url: string, fields: Readonly<Record<string, string>>): Promise<Response> =>
  fetch(url, { method: "POST", body: new URLSearchParams(fields), redirect: "manual" });

describe("the page of turning points", () => {
  test("is reached from the answer, and begins only when its button is pressed", async () => {
    const answer = await (await fetch(`${site.url}/recommendation?brief=${LINK}`)).text();
    expect(answer).toContain(`href="/turning-points?brief=${LINK}"`);
    const page = await fetch(`${site.url}/turning-points?brief=${LINK}`);
    expect(page.headers.get("refresh")).toBeNull();
    expect(await page.text()).toContain("Look for turning points");
  });
  test("asks again by itself while the search runs, shows what is found, and can be stopped by a button", async () => {
    const { asked, jobs } = runningSearch();
    const busy = await startSite({ turningPoints: jobs });
    try {
      const begun = await form(`${busy.url}/turning-points`, { brief: LINK });
      expect(begun.status).toBe(303);
      expect(asked).toEqual([BRIEF]);
      const address = begun.headers.get("location")!;
      const page = await fetch(`${busy.url}${address}`);
      expect(page.headers.get("refresh")).toBe(`5; url=${address}`);
      const body = await page.text();
      expect(body).toContain("1 of 4 changes looked at");
      expect(body).toContain('action="/turning-points/stop"');
      expect(body).toContain("2.110");
      const stopped = await form(`${busy.url}/turning-points/stop`, { brief: LINK, job: "a1" });
      expect(stopped.status).toBe(303);
      const after = await fetch(`${busy.url}${stopped.headers.get("location")!}`);
      expect(after.headers.get("refresh")).toBeNull();
      expect(await after.text()).toContain("Begin again");
    } finally {
      await busy.stop();
    }
  });
  test("shows the table when it is complete: change, from, to, factor, what changes; and gives it as CSV", async () => {
    const body = await (await fetch(`${site.url}/turning-points?brief=${LINK}&job=${TURNING_JOB.id}`)).text();
    expect(body.replace(/<[^>]*>/g, " ").replace(/\s+/g, " ")).toMatch(
      /0\.1500 mmol\/L 2\.110 mmol\/L × 14\.1 not fit the same/,
    );
    expect(body).toContain("What changes nothing");
    const csv = await fetch(`${site.url}/turning-points.csv?job=${TURNING_JOB.id}`);
    expect(csv.headers.get("content-type")).toContain("text/csv");
    const lines = (await csv.text()).split("\r\n");
    expect(lines[1]).toMatch(/^matrix-level,Fe3\+,mol\/L,0\.00015,0\.00211,14\.07,/);
    expect((await fetch(`${site.url}/turning-points.csv?job=gone`)).status).toBe(404);
  });
  test("says what is wrong with a faulty brief", async () => {
    expect((await fetch(`${site.url}/turning-points?brief=${encodeBrief({ title: "x" })}`)).status).toBe(422);
    expect((await form(`${site.url}/turning-points`, { brief: "" })).status).toBe(422);
  });
  test("has the same search for programs: begun, watched, stopped", async () => {
    const { jobs } = runningSearch();
    const busy = await startSite({ turningPoints: jobs });
    try {
      const begun = await fetch(`${busy.url}/api/turning-points`, { method: "POST", body: JSON.stringify(BRIEF) });
      expect(begun.status).toBe(202);
      expect(((await begun.json()) as { id: string }).id).toBe("a1");
      const ended = await fetch(`${busy.url}/api/turning-points/a1`, { method: "DELETE" });
      expect(ended.status).toBe(200);
      expect(((await ended.json()) as { state: string }).state).toBe("stopped");
      expect((await fetch(`${busy.url}/api/turning-points/gone`)).status).toBe(404);
    } finally {
      await busy.stop();
    }
  });
});

describe("the page of tolerance limits", () => {
  test("is reached from the answer and shows limits with what ends them", async () => {
    const answer = await (await fetch(`${site.url}/recommendation?brief=${LINK}`)).text();
    expect(answer).toContain(`href="/limits?brief=${LINK}&amp;method=`);
    const body = await (await fetch(`${site.url}/limits?brief=${LINK}&also=Ni2%2B`)).text();
    const words = body.replace(/<[^>]*>/g, " ").replace(/\s+/g, " ");
    expect(words).toContain("13 times the level present; beyond it no record says that the mask holds");
    expect(words).toContain("none: missed even with a trace of it");
    expect(body).toContain('value="Ni2+"');
  });
  test("keeps what was typed and says which ion it does not know", async () => {
    const faulty = await startSite({
      limits: () => Promise.reject(new InputError([{ path: "$.also[0]", expected: "a known ion", found: '"Xx2+"' }])),
    });
    try {
      const page = await fetch(`${faulty.url}/limits?brief=${LINK}&also=Xx2%2B`);
      expect(page.status).toBe(400);
      const body = await page.text();
      expect(body).toContain('value="Xx2+"');
      expect(body).toContain('aria-invalid="true"');
    } finally {
      await faulty.stop();
    }
  });
  test("answers programs, and names each fault of their question", async () => {
    const ask = (body: unknown): Promise<Response> =>
      fetch(`${site.url}/api/limits`, { method: "POST", body: JSON.stringify(body) });
    expect((await ask({ brief: BRIEF, also: ["Ni2+"] })).status).toBe(200);
    const refused = await ask({ brief: BRIEF, alsoo: [] });
    expect(refused.status).toBe(422);
    expect(((await refused.json()) as { faults: { path: string }[] }).faults[0]?.path).toContain("alsoo");
  });
});
