import { AxeBuilder } from "@axe-core/playwright";
import type { Browser, BrowserContext, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { encodeBrief } from "../../src/web/form/brief-link.ts";
import { SCENARIOS } from "../../src/web/form/scenarios.ts";
import type { WebServices } from "../../src/web/index.ts";
import { launchBrowser } from "./browser.ts";
import { startRealSite } from "./site.ts";

let site: Awaited<ReturnType<typeof startRealSite>>;
let browser: Browser;
beforeAll(async () => {
  [site, browser] = await Promise.all([startRealSite(), launchBrowser()]);
  await mapReady();
});
afterAll(async () => {
  await browser.close();
  await site.stop();
});

/** Waits until the whole method map is worked out, so that its pages are looked at as they stay. */
async function mapReady(): Promise<void> {
  while ((await fetch(`${site.url}/api/method-map`)).status === 202)
    await new Promise((resolve) => setTimeout(resolve, 500));
}

/** What the browser reports of a form that is answered with 400: it counts the page as a resource that failed. */
const MEANT = "the server responded with a status of 400";

/** A page in a context of its own, closed afterwards; fails on anything the browser reports as an error. */
async function withPage<T>(
  options: NonNullable<Parameters<Browser["newContext"]>[0]>,
  use: (page: Page, context: BrowserContext) => Promise<T>,
): Promise<T> {
  const context = await browser.newContext({ baseURL: site.url, ...options });
  try {
    const page = await context.newPage();
    const errors: string[] = [];
    page.on("console", (message) => {
      if (message.type() === "error" && !message.text().includes(MEANT)) errors.push(message.text());
    });
    page.on("pageerror", (error) => errors.push(error.message));
    const result = await use(page, context);
    expect(errors).toEqual([]);
    return result;
  } finally {
    await context.close();
  }
}

const answerTo = (i: number): string => `/recommendation?brief=${encodeBrief(SCENARIOS[i]?.brief)}`;

/** One address of every kind of page. */
const PAGES: readonly (readonly [name: string, path: (services: WebServices) => string])[] = [
  ["brief", () => "/"],
  ["filled brief", () => "/?scenario=feed-water"],
  ["answer that fits", () => answerTo(0)],
  ["answer that does not fit", () => answerTo(3)],
  ["tolerance limits", () => `/limits?brief=${encodeBrief(SCENARIOS[0]?.brief)}&also=Ni2%2B`],
  ["turning points, not begun", () => `/turning-points?brief=${encodeBrief(SCENARIOS[0]?.brief)}`],
  ["robustness, not begun", () => `/robustness?brief=${encodeBrief(SCENARIOS[0]?.brief)}`],
  ["method map", () => "/method-map"],
  ["ion on the method map", () => "/method-map/Mg2%2B"],
  ["constants", () => "/constants"],
  ["metal", () => "/constants/Sr2%2B"],
  ["ligand", () => "/constants/piperidine"],
  ["reaction", () => `/reactions/${encodeURIComponent("EDTA Zn2+ [ML]/([M][L])")}`],
  ["indicators", () => "/indicators"],
  ["indicator", () => "/indicators/xylenol-orange"],
  ["masking agents", () => "/masking"],
  ["masking agent", () => "/masking/cyanide"],
  ["buffers", () => "/buffers"],
  ["rules", () => "/rules"],
  ["rule", ({ rules }) => `/rules/${rules[0]?.id ?? ""}`],
  ["knowledge", () => "/knowledge"],
  ["about", () => "/about"],
  ["calculators", () => "/calculators"],
  [
    "equilibrium",
    () =>
      "/calculators/equilibrium?pH=10&component=Zn2%2B&amount=0.002&how=total&component=EDTA&amount=0.002&how=total&component=NH3&amount=0.1&how=total",
  ],
  [
    "curve",
    () =>
      "/calculators/curve?pH=5&component=Cu2%2B&amount=0.005&how=total&sampleML=50&titrant=EDTA&titrantMolPerL=0.01&follow=Cu2%2B&upToML=45",
  ],
  ["interface", () => "/api"],
];

describe.each([1280, 390])("at %i px", (width) => {
  test.each(PAGES)(
    "the page %s has no accessibility violation, does not scroll sideways, and keeps a strict policy",
    async (_, path) => {
      await withPage({ viewport: { width, height: 900 } }, async (page) => {
        const response = await page.goto(path(site.services));
        expect(response?.status()).toBe(200);
        expect(response?.headers()["content-security-policy"]).toMatch(/^default-src 'none'/);
        expect(response?.headers()["content-security-policy"]).not.toMatch(/unsafe|\*/);
        // Open what is folded, so that its content is looked at too.
        await page.evaluate("document.querySelectorAll('details').forEach((d) => { d.open = true; })");
        expect(await violationsOf(page)).toEqual([]);
        expect(await page.evaluate("document.documentElement.scrollWidth")).toBeLessThanOrEqual(width);
      });
    },
  );
  test("the form that came back with faults has no violation either", async () => {
    await withPage({ viewport: { width, height: 900 } }, async (page) => {
      await page.goto("/");
      await page.getByRole("button", { name: "Work it out" }).click();
      await page.getByRole("alert").waitFor();
      expect(await violationsOf(page)).toEqual([]);
    });
  });
});

async function violationsOf(page: Page): Promise<readonly string[]> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  return violations.map((v) => `${v.id}: ${v.nodes.map((n) => n.target.join(" ")).join("; ")}`);
}

test("axe sees a violation where one is planted", async () => {
  await withPage({}, async (page) => {
    await page.setContent('<html lang="en"><title>x</title><main><h1>x</h1><img src="data:,"><input></main></html>');
    expect((await violationsOf(page)).map((v) => v.split(":")[0])).toEqual(
      expect.arrayContaining(["image-alt", "label"]),
    );
  });
});

test("a browser without script goes from the empty form to a recommendation, and back to change it", async () => {
  await withPage({ javaScriptEnabled: false, viewport: { width: 1280, height: 900 } }, async (page) => {
    await page.goto("/");
    await page.getByLabel("Title").fill("Zinc in an invented rinse");
    const ions = page.getByLabel("Ion", { exact: true });
    const levels = page.getByLabel("Level", { exact: true });
    await ions.nth(0).fill("zinc");
    await levels.nth(0).fill("3.2");
    await ions.nth(1).fill("Fe(III)");
    await levels.nth(1).fill("0.15");
    await page.getByRole("button", { name: "Add two rows" }).click();
    expect(await ions.count()).toBe(6);
    expect(await page.getByLabel("Title").inputValue()).toBe("Zinc in an invented rinse");
    expect(await ions.nth(1).inputValue()).toBe("Fe(III)");
    await ions.nth(5).fill("sulfate");
    await levels.nth(5).fill("800");
    await page.getByLabel("Unit", { exact: true }).nth(5).selectOption("mg/L");
    await page.getByText("Never to be proposed").click();
    await page.getByRole("checkbox", { name: "cyanide" }).first().check();
    await page.getByLabel("Expanded uncertainty wanted").fill("1.5");
    await page.getByRole("button", { name: "Work it out" }).click();
    await page.waitForURL(/\/recommendation\?brief=[\w-]+$/);
    expect(await page.getByRole("heading", { level: 1 }).textContent()).toBe("Zinc in an invented rinse");
    expect(await page.locator(".verdict").textContent()).toMatch(/Yes/);
    expect(await page.locator("svg.figure:visible").count()).toBe(2);
    expect(await page.locator(".question").textContent()).toContain("8.33 mmol/L");
    await page.reload();
    expect(await page.locator(".verdict").textContent()).toMatch(/Yes/);
    await page.getByRole("link", { name: "Change the brief" }).click();
    expect(await page.getByLabel("Title").inputValue()).toBe("Zinc in an invented rinse");
    expect(await ions.nth(0).inputValue()).toBe("zinc");
  });
});

test("a faulty form comes back with its messages and everything typed, and then leads on", async () => {
  await withPage({ javaScriptEnabled: false }, async (page) => {
    await page.goto("/");
    await page.getByLabel("Title").fill("Copper, invented");
    await page.getByLabel("Ion", { exact: true }).first().fill("coper");
    await page.getByLabel("Level", { exact: true }).first().fill("6,5");
    await page.getByLabel("Burette").fill("");
    await page.getByRole("button", { name: "Work it out" }).click();
    const alert = page.getByRole("alert");
    expect(await alert.textContent()).toContain("2 things to put right");
    await page.getByLabel("Level", { exact: true }).first().fill("6.5");
    await page.getByLabel("Burette").fill("25");
    await page.getByRole("button", { name: "Work it out" }).click();
    expect(await alert.textContent()).toContain("nearest: Cu2+");
    await alert.getByRole("link").first().click();
    expect(page.url()).toContain("#f-analytes-0-ion");
    await page.getByLabel("Ion", { exact: true }).first().fill("copper(II)");
    await page.getByRole("button", { name: "Work it out" }).click();
    await page.waitForURL(/\/recommendation\?brief=/);
    expect(await page.getByRole("heading", { level: 1 }).textContent()).toBe("Copper, invented");
  });
});

test("the main job can be done with the keyboard alone, and what has the focus can be seen", async () => {
  await withPage({ viewport: { width: 1280, height: 900 } }, async (page) => {
    await page.goto("/");
    const focused = (what: string): Promise<unknown> =>
      page.evaluate(`(() => { const e = document.activeElement; return ${what}; })()`);
    await page.keyboard.press("Tab");
    expect(await focused("e.textContent")).toBe("To the content");
    await page.keyboard.press("Enter");
    const tabTo = async (id: string): Promise<void> => {
      for (let i = 0; i < 60; i++) {
        await page.keyboard.press("Tab");
        expect(await focused("getComputedStyle(e).outlineStyle")).toBe("solid");
        if ((await focused("e.id")) === id) return;
      }
      throw new Error(`the keyboard did not reach ${id}`);
    };
    await tabTo("f-title");
    await page.keyboard.type("Typed without a mouse");
    await tabTo("f-analytes-0-ion");
    await page.keyboard.type("Ca2+");
    await tabTo("f-analytes-0-value");
    await page.keyboard.type("4");
    await page.keyboard.press("Enter");
    await page.waitForURL(/\/recommendation\?/);
    expect(await page.getByRole("heading", { level: 1 }).textContent()).toBe("Typed without a mouse");
    for (let i = 0; i < 200 && (await focused("e.tagName")) !== "SUMMARY"; i++) await page.keyboard.press("Tab");
    await page.keyboard.press("Enter");
    expect(await focused("e.parentElement.open")).toBe(true);
  });
});

test("every reason, finding and figure of five answers leads to a record of a constant in at most two clicks", async () => {
  await withPage({ javaScriptEnabled: false }, async (page) => {
    for (const i of [0, 1, 2, 4, 5]) {
      await page.goto(answerTo(i));
      const sections = ["#s-bench", "#s-error", "#s-figures", "#s-masked", "#s-why"];
      for (const id of sections) {
        const section = page.locator(`section[aria-labelledby="${id.slice(1)}"]`);
        expect(
          await section.locator('a[href="#constants-used"]').count(),
          `${SCENARIOS[i]?.id ?? ""} ${id}`,
        ).toBeGreaterThan(0);
      }
      const first = page.locator('section[aria-labelledby="constants-used"] a[href^="/reactions/"]').first();
      await first.click();
      expect(await page.getByRole("heading", { name: "Records" }).count()).toBe(1);
      expect(await page.locator("tbody tr").count()).toBeGreaterThan(0);
    }
  });
});

test("an answer weighs at most 300 kB and prints", async () => {
  await withPage({}, async (page) => {
    for (const [i, scenario] of SCENARIOS.entries()) {
      const response = await page.goto(answerTo(i));
      expect((await response?.body())?.length ?? Number.POSITIVE_INFINITY, scenario.id).toBeLessThan(300_000);
    }
    const pdf = await page.pdf({ format: "A4" });
    expect(pdf.subarray(0, 5).toString()).toBe("%PDF-");
  });
});

test("the browser that a dev dependency carries serves as well", async () => {
  const carried = await launchBrowser({ carried: true });
  try {
    const page = await carried.newPage();
    await page.goto(`${site.url}/about`);
    expect(await page.title()).toContain("Chelwright");
  } finally {
    await carried.close();
  }
});
