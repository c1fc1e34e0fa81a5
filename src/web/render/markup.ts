/** HTML that this program built itself, character by character; the only thing a view prints without escaping. */
export class Markup {
  readonly html: string;
  constructor(html: string) {
    this.html = html;
  }
}

const ENTITIES: Readonly<Record<string, string>> = {
  "&": "&amp;",
  "<": "&lt;",
  ">": "&gt;",
  '"': "&quot;",
  "'": "&#39;",
};

/** Escapes text for HTML element content and quoted attributes. */
export function escapeHtml(text: string): string {
  return text.replace(/[&<>"']/g, (c) => ENTITIES[c] ?? c);
}

/** Joins pieces of markup and plain text; plain text is escaped. */
export function joinMarkup(pieces: readonly (Markup | string)[], separator = ""): Markup {
  return new Markup(pieces.map((p) => (p instanceof Markup ? p.html : escapeHtml(p))).join(escapeHtml(separator)));
}

/** The text of markup without its tags, for titles, text alternatives and CSV. */
export function markupText(markup: Markup): string {
  return markup.html
    .replace(/<[^>]*>/g, "")
    .replace(/&lt;/g, "<")
    .replace(/&gt;/g, ">")
    .replace(/&quot;/g, '"')
    .replace(/&#39;/g, "'")
    .replace(/&amp;/g, "&");
}
