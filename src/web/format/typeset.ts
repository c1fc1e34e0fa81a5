import type { Knowledge } from "../../constants/knowledge.ts";
import { Markup, escapeHtml } from "../render/markup.ts";

const CHARGE = /^(.*?)(?:\^(\d+[+-])|([+-]))$/;
const SPACED_CHARGE = /^(.*\S) (\d*[+-])$/;

/**
 * Sets one formula with subscripts and superscripts: "SO4^2-", "Zn(NH3)2 2+", "CaHEDTA-", "Fe3+", "CaCO3 (calcite)".
 * `isIon`: the text is an ion's canonical spelling, so that digits before the sign belong to the charge ("Zn2+").
 */
export function formulaMarkup(text: string, isIon = false): Markup {
  return new Markup(formulaHtml(text, isIon));
}

function formulaHtml(text: string, isIon: boolean): string {
  const phase = /^(\S+) (\([a-z][^)]*\).*)$/.exec(text);
  if (phase) return `${bodyHtml(phase[1] ?? "")} ${escapeHtml(phase[2] ?? "")}`;
  const spaced = SPACED_CHARGE.exec(text);
  if (spaced) return bodyHtml(spaced[1] ?? "") + chargeHtml(spaced[2] ?? "");
  if (isIon) {
    const simple = /^([A-Z][a-z]?)(\d*[+-])$/.exec(text);
    if (simple) return escapeHtml(simple[1] ?? "") + chargeHtml(simple[2] ?? "");
  }
  const charged = CHARGE.exec(text);
  if (charged) return bodyHtml(charged[1] ?? "") + chargeHtml(charged[2] ?? charged[3] ?? "");
  return bodyHtml(text);
}

/** Figures that follow a letter or a bracket are counts of atoms; a leading figure or one after a dot is a coefficient. */
function bodyHtml(body: string): string {
  if (!/^[A-Za-z0-9()[\].·*]+$/.test(body)) return escapeHtml(body);
  return escapeHtml(body).replace(/([A-Za-z)\]])(\d+)/g, "$1<sub>$2</sub>");
}

function chargeHtml(charge: string): string {
  return `<sup>${escapeHtml(charge).replace("-", "\u2212")}</sup>`;
}

/** Sets running text: every known ion spelling in it as a formula, log K' with its prime, powers of ten raised. */
export type Typesetter = (text: string) => Markup;

/** A typesetter that knows the spellings of this knowledge base and nothing else, so ordinary words stay as they are. */
export function createTypesetter(knowledge: Knowledge): Typesetter {
  const spellings = new Map<string, string>();
  for (const component of knowledge.components.values())
    for (const form of [component.ion, ...component.forms.map((f) => f.spelling)])
      if (/[\d+^-]/.test(form) && /^[A-Z]/.test(form)) spellings.set(form, formulaHtml(form, true));
  for (const species of [...knowledge.species, ...knowledge.solids])
    if (/^[A-Z(]/.test(species.id) && /\d|[+-]$/.test(species.id) && !species.id.includes(" ("))
      if (!spellings.has(species.id)) spellings.set(species.id, formulaHtml(species.id, false));
  const cache = new Map<string, Markup>();
  return (text) => {
    let markup = cache.get(text);
    if (!markup) {
      markup = new Markup(setText(text, spellings));
      if (cache.size > 5000) cache.clear();
      cache.set(text, markup);
    }
    return markup;
  };
}

const TOKEN =
  /log K'|log10 ?([A-Za-z])|10\^(-?\d+)|(-?\d+(?:\.\d+)?)e([+-]?\d+)|[A-Z([][A-Za-z0-9()[\]^·]*(?: \d?[+-](?![\w]))?[+-]*/g;

function setText(text: string, spellings: ReadonlyMap<string, string>): string {
  let out = "";
  let at = 0;
  for (const match of text.matchAll(TOKEN)) {
    const token = match[0];
    let set: string | undefined;
    let used = token.length;
    if (token === "log K'") set = "log&nbsp;<i>K</i>′";
    else if (match[1] !== undefined) set = `log<sub>10</sub>&nbsp;${escapeHtml(match[1])}`;
    else if (match[2] !== undefined) set = `10<sup>${match[2].replace("-", "\u2212")}</sup>`;
    else if (match[3] !== undefined && match[4] !== undefined)
      set = `${match[3].replace("-", "\u2212")}&nbsp;×&nbsp;10<sup>${String(Number(match[4])).replace("-", "\u2212")}</sup>`;
    else
      for (used = token.length; used > 1; used--) {
        set = spellings.get(token.slice(0, used));
        if (set !== undefined) break;
      }
    if (set === undefined) continue;
    out += escapeHtml(text.slice(at, match.index)) + set;
    at = match.index + used;
  }
  return out + escapeHtml(text.slice(at));
}
