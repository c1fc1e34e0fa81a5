import type { Knowledge } from "../../constants/knowledge.ts";
import { Markup, escapeHtml } from "../render/markup.ts";

const MINUS = "\u2212";
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
  if (!/^[A-Za-z0-9()[\].·*-]+$/.test(body)) return escapeHtml(body);
  return escapeHtml(body).replace(/([A-Za-z)\]])(\d+)/g, "$1<sub>$2</sub>");
}

function chargeHtml(charge: string): string {
  return `<sup>${escapeHtml(charge).replace("-", MINUS)}</sup>`;
}

/** Sets running text: every known ion spelling in it as a formula, log K' with its prime, powers of ten raised. */
export type Typesetter = (text: string) => Markup;

/** Longest spelling that is looked for in running text, in characters. */
const LONGEST = 40;
/** How many set texts are kept. */
const KEPT = 5000;

/** A typesetter that knows the spellings of this knowledge base and nothing else, so ordinary words stay as they are. */
export function createTypesetter(knowledge: Knowledge): Typesetter {
  const spellings = new Map<string, string>();
  for (const component of knowledge.components.values())
    for (const form of [component.ion, ...component.forms.map((f) => f.spelling)])
      if (/[\d+^-]/.test(form) && /^[A-Z]/.test(form)) spellings.set(form, formulaHtml(form, true));
  const addSpecies = (id: string): void => {
    if (id.length > 2 && /^[A-Z(]/.test(id) && /\d|[+-]$/.test(id) && !spellings.has(id))
      spellings.set(id, formulaHtml(id, false));
  };
  for (const species of knowledge.species) addSpecies(species.id);
  for (const solid of knowledge.solids) addSpecies(solid.id.replace(/ \(.*$/, ""));
  // Ids of reagents that slip into a sentence are read as their names.
  for (const { id, name } of [...knowledge.indicators.values(), ...knowledge.agents.values()])
    if (id.includes("-") && /^[a-z]/.test(id)) spellings.set(id, escapeHtml(name));
  const cache = new Map<string, Markup>();
  return (text) => {
    let markup = cache.get(text);
    if (!markup) {
      markup = new Markup(setText(text, spellings));
      if (cache.size > KEPT) cache.clear();
      cache.set(text, markup);
    }
    return markup;
  };
}

/** Signs that do not depend on the knowledge base: each at the start of what is left, with how it is set. */
const SIGNS: readonly (readonly [RegExp, (match: RegExpExecArray) => string])[] = [
  [/^log K'/, () => "log&nbsp;<i>K</i>′"],
  [/^log10 (?=[A-Za-z])/, () => "log<sub>10</sub>&nbsp;"],
  [/^10\^(-?\d+)/, (m) => `10<sup>${(m[1] ?? "").replace("-", MINUS)}</sup>`],
  [
    /^(-?\d+(?:\.\d+)?)e([+-]?\d+)(?![\w.])/,
    (m) => `${(m[1] ?? "").replace("-", MINUS)}&nbsp;×&nbsp;10<sup>${String(Number(m[2])).replace("-", MINUS)}</sup>`,
  ],
  [/^-(?=\d)/, () => MINUS],
  [
    /^(H?)(\d?)In(\d?[+-])(?![\w+-])/,
    (m) => `${m[1] ?? ""}${m[2] ? `<sub>${m[2]}</sub>` : ""}In${chargeHtml(m[3] ?? "")}`,
  ],
];

function setText(text: string, spellings: ReadonlyMap<string, string>): string {
  let out = "";
  let plainFrom = 0;
  let at = 0;
  while (at < text.length) {
    const found = /[\w^+-]/.test(text[at - 1] ?? " ") ? null : setAt(text, at, spellings);
    if (found === null) {
      at++;
      continue;
    }
    out += escapeHtml(text.slice(plainFrom, at)) + found.html;
    at += found.length;
    plainFrom = at;
  }
  return out + escapeHtml(text.slice(plainFrom));
}

function setAt(
  text: string,
  at: number,
  spellings: ReadonlyMap<string, string>,
): { readonly html: string; readonly length: number } | null {
  const rest = text.slice(at, at + LONGEST);
  for (const [pattern, set] of SIGNS) {
    const match = pattern.exec(rest);
    if (match) return { html: set(match), length: match[0].length };
  }
  if (!/^[A-Za-z(]/.test(rest)) return null;
  for (let length = rest.length; length > 1; length--) {
    const html = spellings.get(rest.slice(0, length));
    if (html !== undefined && !/[\w^]/.test(rest[length] ?? " ")) return { html, length };
  }
  return null;
}

/** Sets the text of a reaction: "[M2L]/([ML][M])", "CDTA Be2+ [ML]/([M][L]^2)"; words before the first bracket as running text. */
export function reactionMarkup(text: string, set: Typesetter): Markup {
  const bracket = text.indexOf("[");
  if (bracket < 0) return set(text);
  const quotient = escapeHtml(text.slice(bracket))
    .replace(/\^(\d+)/g, "<sup>$1</sup>")
    .replace(/([A-Za-z)])(\d+)/g, "$1<sub>$2</sub>");
  return new Markup(set(text.slice(0, bracket)).html + quotient);
}
