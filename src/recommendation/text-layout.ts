/** Longest line of the readable text. */
export const LINE_CHARACTERS = 100;

/** A titled block; nothing where there is nothing to say. */
export const section = (title: string, paragraphs: readonly (readonly string[])[]): readonly string[] =>
  paragraphs.length === 0 ? [] : [title, ...paragraphs.flat()];

/** One entry of a list, as lines. */
export const bullet = (text: string): readonly string[] => wrap(text, "  - ");

/** One line of a table, as lines: a name and what stands beside it. */
export const row = (name: string, value: string): readonly string[] => wrap(value, `  ${name.padEnd(20)}`);

/** Breaks a text into lines; the first starts with `lead`, the others with as many blanks. */
export function wrap(text: string, lead: string): readonly string[] {
  const lines: string[] = [];
  let line = "";
  for (const word of text.split(/\s+/).filter((part) => part !== "")) {
    if (line !== "" && lead.length + line.length + 1 + word.length > LINE_CHARACTERS) {
      lines.push(line);
      line = word;
    } else line = line === "" ? word : `${line} ${word}`;
  }
  return [...lines, line].map((part, index) => (index === 0 ? lead : " ".repeat(lead.length)) + part);
}
