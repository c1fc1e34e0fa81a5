import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import type { Knowledge } from "../../constants/knowledge.ts";

const NAVIGATION = [
  ["brief", "/", "Brief"],
  ["method-map", "/method-map", "Method map"],
  ["constants", "/constants", "Constants"],
  ["indicators", "/indicators", "Indicators"],
  ["masking", "/masking", "Masking"],
  ["buffers", "/buffers", "Buffers"],
  ["rules", "/rules", "Rules"],
  ["calculators", "/calculators", "Calculators"],
  ["knowledge", "/knowledge", "Knowledge"],
  ["about", "/about", "About"],
] as const;

export type NavigationId = (typeof NAVIGATION)[number][0] | "none";

/** What every page carries around its content. */
export interface Shell {
  readonly title: string;
  readonly cssHref: string;
  readonly knowledge: string;
  readonly navigation: readonly { readonly href: string; readonly label: string; readonly current: boolean }[];
}

/** The stylesheet's file, and its address, which changes with its content so that it can be cached for good. */
export const STYLESHEET = new URL("../../../views/assets/notebook.css", import.meta.url);
const cssHref = `/assets/notebook.css?v=${createHash("sha256").update(readFileSync(STYLESHEET)).digest("hex").slice(0, 10)}`;

/** The frame of a page: its title, the navigation with the present place, and the version of the knowledge. */
export function shell(knowledge: Knowledge, title: string, current: NavigationId): Shell {
  return {
    title,
    cssHref,
    knowledge: `knowledge ${knowledge.version}, ${knowledge.hash.slice(0, 16)}`,
    navigation: NAVIGATION.map(([id, href, label]) => ({ href, label, current: id === current })),
  };
}
