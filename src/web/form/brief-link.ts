import { InputError } from "../../errors.ts";

/** Longest link that is read, in characters of base64url. */
const LONGEST = 48 * 1024;

/** A brief as the text of a link: base64url of its JSON, so that an answer can be reloaded and shared. */
export function encodeBrief(brief: unknown): string {
  return Buffer.from(JSON.stringify(brief), "utf8").toString("base64url");
}

/** Reads a brief out of a link; throws InputError where it is not base64url of JSON. */
export function decodeBrief(link: string): unknown {
  if (link.length > LONGEST || !/^[A-Za-z0-9_-]+$/.test(link)) throw unreadable(link);
  try {
    const brief: unknown = JSON.parse(Buffer.from(link, "base64url").toString("utf8"));
    return brief;
  } catch {
    throw unreadable(link);
  }
}

function unreadable(link: string): InputError {
  const found = link === "" ? "nothing" : `${link.slice(0, 40)}${link.length > 40 ? "…" : ""}`;
  return new InputError([{ path: "$", expected: "a brief in the link (base64url of JSON)", found }]);
}
