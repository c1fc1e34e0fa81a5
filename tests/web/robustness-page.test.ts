import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { robustnessSchema } from "../../src/recommendation/contract.ts";
import { encodeBrief } from "../../src/web/form/brief-link.ts";
import type { JobState, RobustnessAsk } from "../../src/web/services.ts";
import type { Robustness } from "../../src/recommendation/contract.ts";
import { FIXTURE } from "./fixture/recommendation.ts";
import { ROBUSTNESS, ROBUSTNESS_JOB } from "./fixture/robustness.ts";
import { startSite, type Site } from "./fixture/site.ts";

const BRIEF = { title: "An invented rinse", analytes: [{ ion: "Zn2+", concentration: { value: 3, unit: "mmol/L" } }] };
const LINK = encodeBrief(BRIEF);
const METHOD = FIXTURE.methods[0]!.id;

/** Draws that run until they are stopped, and remember what was asked of them. */
function runningDraws() {
  let state: JobState<Robustness>["state"] = "running";
  const asked: RobustnessAsk[] = [];
  return {
    asked,
    jobs: {
      start: (ask: RobustnessAsk) => {
        asked.push(ask);
        return "b2";
      },
      look: (id: string) =>
        id === "b2"
          ? {
              id,
              state,
              progress: { done: 300, total: 1013 },
              result: { ...ROBUSTNESS, done: 300, map: null },
              message: null,
            }
          : null,
      stop: (id: string) => {
        state = "stopped";
        return id === "b2";
      },
    },
  };
}

const form = (url: string, fields: Readonly<Record<string, string>>): Promise<Response> =>
  fetch(url, { method: "POST", body: new URLSearchParams(fields), redirect: "manual" });

describe("the page of the robustness of a method", () => {
  let site: Site;
  beforeAll(async () => {
    site = await startSite();
  });
  afterAll(() => site.stop());

  test("is reached from the answer and begins with a button", async () => {
    const answer = await (await fetch(`${site.url}/recommendation?brief=${LINK}`)).text();
    expect(answer).toContain(`href="/robustness?brief=${LINK}&amp;method=${encodeURIComponent(METHOD)}"`);
    const page = await (
      await fetch(`${site.url}/robustness?brief=${LINK}&method=${encodeURIComponent(METHOD)}`)
    ).text();
    expect(page).toContain(">Draw</button>");
    expect(page).not.toContain("How often it meets the requirement</h2>");
    expect((await fetch(`${site.url}/robustness?brief=${LINK}&method=gone`)).status).toBe(404);
  });

  test("asks again by itself while it runs, shows what there is, and can be stopped", async () => {
    const { asked, jobs } = runningDraws();
    const busy = await startSite({ robustness: jobs });
    try {
      const begun = await form(`${busy.url}/robustness`, { brief: LINK, method: METHOD, draws: "5000", seed: "9" });
      expect(begun.status).toBe(303);
      expect(asked[0]).toMatchObject({ method: METHOD, draws: 5000, seed: 9 });
      const address = `${busy.url}${begun.headers.get("location")!}`;
      const page = await fetch(address);
      expect(page.headers.get("refresh")).toMatch(/^3; url=/);
      const body = await page.text();
      expect(body).toContain("300 of 1013 draws");
      expect(body).toContain('action="/robustness/stop"');
      expect(body).toContain("70.2");
      await form(`${busy.url}/robustness/stop`, { brief: LINK, method: METHOD, job: "b2" });
      const stopped = await fetch(address);
      expect(stopped.headers.get("refresh")).toBeNull();
      expect(await stopped.text()).toContain("Stopped: 300 of 1013");
    } finally {
      await busy.stop();
    }
  });

  test("shows probability, quantiles, parameters and both figures when it is done, with CSV beside", async () => {
    const body = await (
      await fetch(`${site.url}/robustness?brief=${LINK}&method=${encodeURIComponent(METHOD)}&job=${ROBUSTNESS_JOB.id}`)
    ).text();
    expect(body).toContain(
      '<strong class="figure-number">70.2 %</strong> of 1000 draws (95 % interval 67.3 to 73.0 %) keep',
    );
    expect(body).toContain("in 4 of 1000 draws");
    expect(body).toContain("a solid stands in the vessel");
    expect(body.match(/<svg/g)).toHaveLength(4);
    // Every cell of the map has its shape: 8 that meet (3 of them with half to spare and more), the others open; and the planned one a frame.
    expect(body.match(/class="cell-frame"/g)).toHaveLength(2);
    expect(body).not.toMatch(/NaN|undefined|Infinity/);
    const draws = await fetch(`${site.url}/robustness/draws.csv?job=${ROBUSTNESS_JOB.id}`);
    expect(draws.headers.get("content-type")).toContain("text/csv");
    expect((await draws.text()).split("\r\n")[51]).toBe("0.5,0,0.8");
    const map = await (await fetch(`${site.url}/robustness/map.csv?job=${ROBUSTNESS_JOB.id}`)).text();
    expect(map.split("\r\n")[3]).toBe("0.2,,2.5,1.2,2.5,");
    expect((await fetch(`${site.url}/robustness/map.csv?job=gone`)).status).toBe(404);
  });

  test("is a job of the interface: begun, looked at, stopped", async () => {
    robustnessSchema.parse(ROBUSTNESS);
    const { asked, jobs } = runningDraws();
    const busy = await startSite({ robustness: jobs });
    try {
      const ask = (body: unknown): Promise<Response> =>
        fetch(`${busy.url}/api/robustness`, { method: "POST", body: JSON.stringify(body) });
      const begun = await ask({ brief: BRIEF, draws: 200, seed: 3 });
      expect(begun.status).toBe(202);
      expect(asked[0]).toMatchObject({ draws: 200, seed: 3 });
      expect((await ask({ brief: BRIEF, draws: 1 })).status).toBe(422);
      expect((await fetch(`${busy.url}/api/robustness/b2`, { method: "DELETE" })).status).toBe(200);
      expect((await fetch(`${busy.url}/api/robustness/gone`)).status).toBe(404);
    } finally {
      await busy.stop();
    }
  });
});
