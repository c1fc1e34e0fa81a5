import type { RecommendedMethod } from "./contract.ts";

type Cause = RecommendedMethod["predicted"]["biasBySource"][number];

const WORDS: Readonly<Partial<Record<Cause["kind"], string>>> = {
  "end-point": "end point beside equivalence",
  "indicator-consumption": "metal held by the dye",
  "buffer-drift": "fall of the pH while titrating",
};

/** A cause of a bias as a reader would name it. */
export function causeWords({ source, kind, by, titration }: Cause): string {
  const where = titration === null ? "" : ` (titration ${titration})`;
  const plain = source.replace(/ \(titration \d+\)$/, "");
  if (kind === "incomplete-masking" && by !== null) return `${plain} left by ${by.replaceAll("-", " ")}${where}`;
  if (kind === "back-titrant-displacement") return `analyte ${plain}${where}`;
  return `${WORDS[kind] ?? plain}${where}`;
}
