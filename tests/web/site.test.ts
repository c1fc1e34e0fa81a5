import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { loadContractIds } from "../../src/constants/index.ts";
import { encodeBrief } from "../../src/web/form/brief-link.ts";
import { SCENARIOS } from "../../src/web/form/scenarios.ts";
import { methodMapSchema } from "../../src/recommendation/contract.ts";
import { inventedMap } from "./fixture/method-map.ts";
import { NOTHING_FITS } from "./fixture/recommendation.ts";
import { startSite, type Site } from "./fixture/site.ts";

let site: Site;
beforeAll(async () => {
  site = await startSite();
});
afterAll(async () => {
  await site.stop();
});

const BRIEF = SCENARIOS[0]!.brief;
const get = (path: string): Promise<Response> => fetch(site.url + path, { redirect: "manual" });
const post = (path: string, fields: readonly (readonly [string, string])[]): Promise<Response> =>
  fetch(site.url + path, {
    method: "POST",
    redirect: "manual",
    body: new URLSearchParams(fields.map(([k, v]): [string, string] => [k, v])),
  });
const postJson = (path: string, body: string): Promise<Response> =>
  fetch(site.url + path, { method: "POST", body, headers: { "content-type": "application/json" } });

const FIELDS: readonly (readonly [string, string])[] = [
  ["title", "Typed <title>"],
  ["analyteIon", "zinc"],
  ["analyteValue", "3.2"],
  ["analyteUnit", "mmol/L"],
  ["analyteAs", ""],
  ["analyteReport", "individual"],
  ["matrixIon", "Fe(III)"],
  ["matrixValue", "0.15"],
  ["matrixUnit", "mmol/L"],
  ["matrixAs", ""],
  ["volumeML", "25"],
  ["titrationVolumeML", "100"],
  ["requirement", "0.5"],
  ["detection", "visual"],
  ["heating", "yes"],
  ["buretteML", "25"],
  ["temperatureC", "25"],
  ["shelf", "usual"],
  ["avoid", "cyanide"],
];
const without = (name: string): readonly (readonly [string, string])[] => FIELDS.filter(([n]) => n !== name);

/** Every page of the site that has an address of its own, one of each kind. */
const pages = (): readonly string[] => [
  "/",
  "/?scenario=zinc-rinse",
  `/?brief=${encodeBrief(BRIEF)}`,
  `/recommendation?brief=${encodeBrief(BRIEF)}`,
  `/recommendation?brief=${encodeBrief(BRIEF)}&method=back-two`,
  "/method-map",
  "/method-map/Zn2%2B",
  "/method-map/Sn4%2B",
  "/constants",
  "/constants?q=zinc",
  "/constants?q=nothing-of-the-kind",
  "/constants/Zn2%2B",
  "/constants/xylenol-orange",
  `/reactions/${encodeURIComponent("EDTA Zn2+ [ML]/([M][L])")}`,
  "/indicators",
  "/indicators/xylenol-orange",
  "/masking",
  "/masking/cyanide",
  "/buffers",
  "/rules",
  `/rules/${site.services.rules[0]?.id ?? ""}`,
  "/knowledge",
  "/about",
  "/calculators",
  "/calculators/equilibrium",
  "/calculators/equilibrium?component=Zn2%2B&amount=0.001&how=total&component=EDTA&amount=0.001&how=total&component=NH3&amount=0.1&how=free&pH=10",
  "/calculators/curve",
  "/calculators/curve?component=Cu2%2B&amount=0.005&how=total&pH=5&sampleML=50&titrant=EDTA&titrantMolPerL=0.01&follow=Cu2%2B&upToML=45",
  "/api",
];

describe("every page", () => {
  test("answers 200 with strict headers, no inline style or script, and nothing unprintable", async () => {
    for (const path of pages()) {
      const response = await get(path);
      const html = await response.text();
      expect(response.status, path).toBe(200);
      const policy = response.headers.get("content-security-policy") ?? "";
      expect(policy, path).toContain("default-src 'none'");
      expect(policy, path).not.toContain("unsafe");
      expect(response.headers.get("x-powered-by")).toBeNull();
      expect(html, path).not.toMatch(/<script|<style|\sstyle=|\son[a-z]+="|javascript:/);
      expect(html, path).not.toMatch(/\bNaN\b|\bundefined\b|\[object |Infinity/);
      expect(html, path).toMatch(/<title>[^<]+ – Chelwright<\/title>/);
      expect(html.match(/<h1[ >]/g), path).toHaveLength(1);
    }
  });
  test("has ids that stand once", async () => {
    for (const path of pages()) {
      const ids = [...(await (await get(path)).text()).matchAll(/\sid="([^"]+)"/g)].map((m) => m[1]);
      expect(
        ids.filter((id, i) => ids.indexOf(id) !== i),
        path,
      ).toEqual([]);
    }
  });
  test("links only to places that exist", async () => {
    const seen = new Set<string>();
    for (const path of pages()) {
      const html = await (await get(path)).text();
      for (const [, href] of html.matchAll(/href="([^"]+)"/g)) {
        const address = (href ?? "").replaceAll("&amp;", "&");
        if (address.startsWith("#")) expect(html, `${path} ${address}`).toContain(`id="${address.slice(1)}"`);
        else seen.add(address);
      }
    }
    expect(seen.size).toBeGreaterThan(500);
    const targets = new Map<string, string>();
    for (const address of seen) {
      const [path = "", anchor] = address.split("#");
      let html = targets.get(path);
      if (html === undefined) {
        const response = await get(path);
        html = await response.text();
        expect(response.status, address).toBe(200);
        targets.set(path, html);
      }
      if (anchor !== undefined) expect(html.includes(`id="${anchor}"`), address).toBe(true);
    }
  });
});

describe("the form", () => {
  test("adds a row and keeps everything typed", async () => {
    const html = await (await post("/recommendation", [...FIELDS, ["action", "add-matrix"]])).text();
    expect(html).toContain('value="Typed &lt;title&gt;"');
    expect(html).toContain('value="Fe(III)"');
    expect(html).toMatch(/name="avoid" value="cyanide" checked/);
    expect(html.match(/name="matrixIon"/g)).toHaveLength(3);
    expect(html).not.toContain('role="alert"');
  });
  test("comes back with 400, a message at the field and nothing lost", async () => {
    const response = await post("/recommendation", [
      ...without("analyteValue"),
      ["analyteValue", "3,2"],
      ["action", "recommend"],
    ]);
    const html = await response.text();
    expect(response.status).toBe(400);
    expect(html).toContain('value="3,2"');
    expect(html).toMatch(/id="f-analytes-0-value"[^>]*aria-invalid="true" aria-describedby="f-analytes-0-value-m"/);
    expect(html).toMatch(/id="f-analytes-0-value-m"[^>]*>.*point, not a comma/);
    expect(html).toContain('href="#f-analytes-0-value"');
    expect(html).toContain('value="Typed &lt;title&gt;"');
  });
  test("leads to an answer whose address carries the brief", async () => {
    const response = await post("/recommendation", [...FIELDS, ["action", "recommend"]]);
    expect(response.status).toBe(303);
    const location = response.headers.get("location") ?? "";
    expect(location).toMatch(/^\/recommendation\?brief=[\w-]+$/);
    const page = await get(location);
    expect(page.status).toBe(200);
    expect(await page.text()).toContain("Invented &lt;b&gt;zinc&lt;/b&gt; &amp; co");
  });
  test("reads an empty number as missing, not as zero", async () => {
    const response = await post("/recommendation", [...without("buretteML"), ["buretteML", ""]]);
    expect(response.status).toBe(400);
    expect(await response.text()).toContain("a number is missing");
  });
  test("an unknown demo is said to be unknown", async () => {
    expect((await get("/?scenario=none")).status).toBe(404);
    expect((await get(`/?scenario=${SCENARIOS[1]!.id}`)).status).toBe(200);
  });
});

describe("the answer", () => {
  test("comes in the order in which a chemist asks", async () => {
    const html = await (await get(`/recommendation?brief=${encodeBrief(BRIEF)}`)).text();
    const order = [
      "Yes, with reservations",
      "The method",
      "At the bench",
      "The error",
      "Figures",
      "What the rest",
      "Why this method",
      "Rivals",
      "Rejected",
      "Constants used",
    ];
    const places = order.map((words) => html.indexOf(words));
    expect(places.every((p) => p > 0)).toBe(true);
    expect([...places].sort((a, b) => a - b)).toEqual(places);
  });
  test("shows another method when asked, and leads back to the first", async () => {
    const html = await (await get(`/recommendation?brief=${encodeBrief(BRIEF)}&method=back-two`)).text();
    expect(html).toContain("See the first");
    expect(html).toContain("copper electrode");
    expect(html).toContain("84 mV from 99 to 101 % of the volume");
    expect(html).toContain("first reading, discarded");
    expect(html).toContain("does not keep the requirement");
  });
  test("leads from its numbers to a record in at most two clicks", async () => {
    const html = await (await get(`/recommendation?brief=${encodeBrief(BRIEF)}`)).text();
    expect(html.match(/href="#constants-used"/g)?.length ?? 0).toBeGreaterThan(2);
    const used = html.slice(html.indexOf('id="constants-used"'));
    const reaction = /href="(\/reactions\/[^"]+)"/.exec(used)?.[1] ?? "";
    expect(await (await get(reaction)).text()).toContain("record 108710");
  });
  test("is written when nothing fits", async () => {
    const none = await startSite({ recommend: () => Promise.resolve(NOTHING_FITS) });
    try {
      const html = await (await fetch(`${none.url}/recommendation?brief=${encodeBrief(BRIEF)}`)).text();
      expect(html).toContain("No method found keeps the requirement.");
      expect(html).toContain("No method could be put together");
    } finally {
      await none.stop();
    }
  });
  test("gives its figures as CSV", async () => {
    const response = await get(`/figures/log-k.csv?brief=${encodeBrief(BRIEF)}`);
    expect(response.headers.get("content-type")).toContain("text/csv");
    expect(await response.text()).toMatch(/^pH,log K' Zn2\+/);
    expect((await get(`/figures/curve.csv?brief=${encodeBrief(BRIEF)}&method=back-two`)).status).toBe(200);
    expect((await get(`/figures/other.csv?brief=${encodeBrief(BRIEF)}`)).status).toBe(404);
  });
  test("says on its page how the result is calculated", async () => {
    const html = await (await get(`/recommendation?brief=${encodeBrief(BRIEF)}`)).text();
    expect(html).toContain("How the result is calculated");
    expect(html).toContain("V × c(EDTA)");
  });
  test("to a faulty brief in the address is the form with its faults", async () => {
    const response = await get(
      `/recommendation?brief=${encodeBrief({ ...BRIEF, analytes: [{ ion: "unobtanium", concentration: { value: 1, unit: "g/L" } }] })}`,
    );
    expect(response.status).toBe(400);
    expect(await response.text()).toContain('href="#f-analytes-0-ion"');
    expect((await get("/recommendation")).status).toBe(400);
    expect((await get("/recommendation?brief=%25%25")).status).toBe(400);
  });
});

describe("the interface for programs", () => {
  test("answers a brief", async () => {
    const response = await postJson("/api/recommendations", JSON.stringify(BRIEF));
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({ contract: 1, verdict: "fit-with-reservations" });
    expect((await get(`/api/recommendations?brief=${encodeBrief(BRIEF)}`)).status).toBe(200);
  });
  test("answers both calculators", async () => {
    const constants = [{ components: { "Cd2+": 1, EDTA: 1 }, log10Beta: 16.46 }];
    const equilibrium = await postJson(
      "/api/equilibrium",
      JSON.stringify({ pH: 10, totals: { "Cd2+": 0.0025, EDTA: 0.0025 }, constants }),
    );
    expect(await equilibrium.json()).toMatchObject({ status: "converged" });
    const curve = await postJson(
      "/api/curve",
      JSON.stringify({
        sample: { volumeML: 50, totals: { "Cd2+": 0.005 } },
        titrant: { id: "EDTA", molPerL: 0.01 },
        pH: 10,
        follow: "Cd2+",
        volumesML: [0, 25],
        constants,
      }),
    );
    expect(await curve.json()).toMatchObject({ equivalenceML: 25 });
  });
  test("says 400 to what is not JSON, 422 to a faulty question, 413 to a body too large, 404 to an unknown address", async () => {
    expect((await postJson("/api/recommendations", "{")).status).toBe(400);
    const faulty = await postJson("/api/recommendations", JSON.stringify({ title: "", analytes: [], colour: 1 }));
    expect(faulty.status).toBe(422);
    const { faults } = (await faulty.json()) as {
      faults: readonly { path: string; expected: string; found: string }[];
    };
    expect(faults.map((f) => f.path)).toContain("$.analytes");
    for (const f of faults) expect(Object.keys(f)).toEqual(["path", "expected", "found"]);
    expect((await postJson("/api/equilibrium", "{}")).status).toBe(422);
    expect((await postJson("/api/recommendations", JSON.stringify({ title: "x".repeat(5e6) }))).status).toBe(413);
    expect((await get("/api/none")).status).toBe(404);
    expect(await (await get("/api/none")).json()).toHaveProperty("error");
  });
  test("describes itself", async () => {
    expect(await (await get("/api/openapi.json")).json()).toMatchObject({ openapi: "3.1.0" });
  });
});

describe("failures", () => {
  test("that nobody expected are neutral, with an id that stands in the log", async () => {
    const broken = await startSite({ recommend: () => Promise.reject(new Error("secret detail")) });
    try {
      const page = await fetch(`${broken.url}/recommendation?brief=${encodeBrief(BRIEF)}`);
      const html = await page.text();
      expect(page.status).toBe(500);
      expect(html).not.toContain("secret");
      const id = /<code>([0-9a-f-]{36})<\/code>/.exec(html)?.[1] ?? "none";
      expect(broken.lines.join()).toContain(id);
      expect(broken.lines.join()).toContain("secret detail");
      const json = await fetch(`${broken.url}/api/recommendations`, { method: "POST", body: JSON.stringify(BRIEF) });
      expect(json.status).toBe(500);
      expect(await json.text()).not.toContain("secret");
    } finally {
      await broken.stop();
    }
  });
  test("of an address that leads nowhere are 404 with a page", async () => {
    for (const path of [
      "/none",
      "/constants/Xx9%2B",
      "/reactions/none",
      "/rules/a/b",
      "/indicators/none",
      "/masking/none",
    ]) {
      const response = await get(path);
      expect(response.status, path).toBe(404);
      expect(await response.text()).toContain("Nothing stands at this address");
    }
    expect((await get("/constants/%E0%A4%A")).status).toBe(400);
  });
  test("of a calculator's question stand on its page with 400", async () => {
    for (const path of [
      "/calculators/equilibrium?pH=x",
      "/calculators/curve?component=Zn2%2B&amount=1&titrant=none&follow=Zn2%2B",
      "/calculators/equilibrium?component=unobtanium&amount=1&how=total",
    ]) {
      const response = await get(path);
      expect(response.status, path).toBe(400);
      expect(await response.text(), path).toContain('role="alert"');
    }
    expect((await get("/calculators/curve.csv?pH=x")).status).toBe(422);
  });
});

test("the knowledge page counts every id of the vocabulary, and names an id whose data are gone", async () => {
  const rows = (body: string): number[] =>
    [
      ...(body.split('id="vocabulary"')[1] ?? "")
        .split("</table>")[0]!
        .matchAll(/<td class="number">(\d+)<\/td><td class="number">\d+<\/td><td class="number">\d+</g),
    ].map((m) => Number(m[1]));
  const ids = Object.values<readonly string[]>({ ...loadContractIds() }).reduce((sum, list) => sum + list.length, 0);
  const body = await (await get("/knowledge")).text();
  expect(rows(body).reduce((a, b) => a + b, 0)).toBe(ids);
  expect(body).not.toMatch(/<td>zincon<\/td>/);
  const indicators = new Map(site.knowledge.indicators);
  indicators.delete("zincon");
  const poorer = await startSite({ knowledge: { ...site.knowledge, indicators } });
  try {
    expect(await (await fetch(`${poorer.url}/knowledge`)).text()).toMatch(/<td>zincon<\/td>/);
  } finally {
    await poorer.stop();
  }
});

describe("the method map", () => {
  test("names each standing in signs and words, and leads to the ions", async () => {
    const body = await (await get("/method-map")).text();
    expect(body).toMatch(/●<\/span> <span class="word">open</);
    expect(body).toMatch(/\?<\/span> <span class="word">not known</);
    expect(body).toContain('href="/method-map/Zn2%2B"');
    expect(body).not.toContain("Being calculated");
  });
  test("asks again by itself, without script, only while ions are missing", async () => {
    expect((await get("/method-map")).headers.get("refresh")).toBeNull();
    const unready = await startSite({ methodMap: () => inventedMap(site.knowledge, 65) });
    try {
      const page = await fetch(`${unready.url}/method-map`);
      expect(page.headers.get("refresh")).toBe("5; url=/method-map");
      expect(await page.text()).toContain("Being calculated: 2 of 65");
      const ion = await fetch(`${unready.url}/method-map/Cd2%2B`);
      expect(ion.status).toBe(200);
      expect(ion.headers.get("refresh")).toBe("5; url=/method-map/Cd2%2B");
      expect((await fetch(`${unready.url}/method-map/Zn2%2B`)).headers.get("refresh")).toBeNull();
      expect((await fetch(`${unready.url}/api/method-map`)).status).toBe(202);
    } finally {
      await unready.stop();
    }
  });
  test("shows values, reasons and cautions of an ion, and leads to the answer and the brief", async () => {
    const body = await (await get("/method-map/Zn2%2B")).text();
    expect(body).toContain("0.33 %");
    expect(body).toContain("Invented caution: &lt;gloves&gt;.");
    expect(body).toContain('href="/rules/kinetics/back-titrant-steals-much"');
    const answer = /href="(\/recommendation\?brief=[\w-]+&amp;method=[^"]+)"/.exec(body)?.[1] ?? "";
    expect((await get(answer.replaceAll("&amp;", "&"))).status).toBe(200);
    const brief = /href="(\/\?brief=[\w-]+)"/.exec(body)?.[1] ?? "";
    expect((await get(brief)).status).toBe(200);
  });
  test("is not there for what is no metal ion", async () => {
    expect((await get("/method-map/sulfate")).status).toBe(404);
    expect((await get("/method-map/nothing")).status).toBe(404);
  });
  test("is JSON for programs", async () => {
    const response = await get("/api/method-map");
    expect(response.status).toBe(200);
    expect(methodMapSchema.safeParse(await response.json()).error).toBeUndefined();
  });
});

describe("the stylesheet", () => {
  test("is kept for good under the address the pages name, and asked again under any other", async () => {
    const href = /href="(\/assets\/[^"]+)"/.exec(await (await get("/")).text())?.[1] ?? "";
    const named = await get(href);
    expect(named.status).toBe(200);
    expect(named.headers.get("content-type")).toContain("text/css");
    expect(named.headers.get("cache-control")).toContain("immutable");
    expect((await get("/assets/notebook.css")).headers.get("cache-control")).toBe("no-cache");
  });
});

test("a stopped server has let a request under way finish", async () => {
  let release: () => void = () => undefined;
  const waiting = new Promise<void>((resolve) => {
    release = resolve;
  });
  let asked: () => void = () => undefined;
  const started = new Promise<void>((resolve) => {
    asked = resolve;
  });
  const slow = await startSite({
    recommend: async () => {
      asked();
      await waiting;
      return NOTHING_FITS;
    },
  });
  const coming = fetch(`${slow.url}/recommendation?brief=${encodeBrief(BRIEF)}`);
  await started;
  const stopped = slow.stop();
  release();
  expect((await coming).status).toBe(200);
  await stopped;
  await expect(fetch(slow.url)).rejects.toThrow();
});
