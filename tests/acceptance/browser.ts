import { existsSync } from "node:fs";
import chromiumPackage from "@sparticuz/chromium";
import { chromium, type Browser } from "playwright-core";

/** Where a system keeps its Chromium. */
const SYSTEM_BROWSERS = [
  "/usr/bin/chromium-headless-shell",
  "/usr/bin/chromium",
  "/usr/bin/chromium-browser",
  "/usr/bin/google-chrome",
  "/opt/google/chrome/chrome",
  "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
];

/** Starts the system's Chromium, or the one a dev dependency carries when there is none; `carried` forces the latter. */
export async function launchBrowser({ carried = false }: { readonly carried?: boolean } = {}): Promise<Browser> {
  const system = carried ? undefined : SYSTEM_BROWSERS.find((path) => existsSync(path));
  if (system !== undefined) return chromium.launch({ executablePath: system, args: ["--no-sandbox"] });
  return chromium.launch({ executablePath: await chromiumPackage.executablePath(), args: chromiumPackage.args });
}
