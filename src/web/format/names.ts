import type { ComponentRecord, Knowledge } from "../../constants/knowledge.ts";
import { Markup, escapeHtml } from "../render/markup.ts";
import { createTypesetter, formulaMarkup, type Typesetter } from "./typeset.ts";

/** How things are called on the pages, and where each name leads. */
export interface Names {
  /** Running text with its ions and constants typeset. */
  readonly set: Typesetter;
  /** Plain name of a reagent or ion id: "xylenol orange", "Zn2+". */
  readonly plain: (id: string) => string;
  /** Name of an id, typeset where it is a formula. */
  readonly name: (id: string) => Markup;
  /** Name of a component of the model, never of a reagent with the same id: "ammonia", "Zn2+". */
  readonly component: (id: string) => Markup;
  /** The same as a link to where the knowledge about it stands; without a link where there is none. */
  readonly link: (id: string) => Markup;
}

/** Address of the page of one component. */
export const constantsHref = (id: string): string => `/constants/${encodeURIComponent(id)}`;
/** Address of the page of one reaction. */
export const reactionHref = (id: string): string => `/reactions/${encodeURIComponent(id)}`;
/** Address of the page of one indicator. */
export const indicatorHref = (id: string): string => `/indicators/${encodeURIComponent(id)}`;
/** Address of the page of one masking or auxiliary agent. */
export const agentHref = (id: string): string => `/masking/${encodeURIComponent(id)}`;
/** Address of the page of one rule. */
export const ruleHref = (id: string): string => `/rules/${id.split("/").map(encodeURIComponent).join("/")}`;
/** An id as an HTML anchor: letters, figures and hyphens only, different for different ids. */
export const anchor = (id: string): string =>
  id.replace(/[^A-Za-z0-9-]/g, (c) => (c === " " ? "-" : `_${c.codePointAt(0)?.toString(16) ?? ""}`));

/** A link as markup. */
export function linkMarkup(href: string, text: Markup | string): Markup {
  const inner = text instanceof Markup ? text.html : escapeHtml(text);
  return new Markup(`<a href="${escapeHtml(href)}">${inner}</a>`);
}

/** Names over one knowledge base. */
export function createNames(knowledge: Knowledge): Names {
  const set = createTypesetter(knowledge);
  const byForm = new Map<string, ComponentRecord>();
  for (const component of knowledge.components.values())
    for (const form of [component.id, component.ion, ...component.forms.map((f) => f.spelling)])
      if (!byForm.has(form)) byForm.set(form, component);
  const plain = (id: string): string => {
    if (/[+-]$/.test(id) && /^[A-Z]/.test(id)) return id;
    const named =
      knowledge.indicators.get(id)?.name ??
      knowledge.buffers.get(id)?.name ??
      knowledge.agents.get(id)?.name ??
      knowledge.titrants.get(id)?.id ??
      byForm.get(id)?.name;
    return named ?? id;
  };
  const name = (id: string): Markup =>
    /[+-]$/.test(id) && /^[A-Z]/.test(id) ? formulaMarkup(id, true) : set(plain(id));
  const component = (id: string): Markup => {
    const known = knowledge.components.get(id);
    return known ? set(known.ion) : name(id);
  };
  const hrefOf = (id: string): string | null => {
    if (knowledge.indicators.has(id)) return indicatorHref(id);
    const component = byForm.get(id);
    if (component && component.kind !== "inert") return constantsHref(component.id);
    if (knowledge.buffers.has(id)) return `/buffers#${anchor(id)}`;
    if (knowledge.agents.has(id)) return agentHref(id);
    return null;
  };
  const link = (id: string): Markup => {
    const href = hrefOf(id);
    return href === null ? name(id) : linkMarkup(href, name(id));
  };
  return { set, plain, name, component, link };
}
