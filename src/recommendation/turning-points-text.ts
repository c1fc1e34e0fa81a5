import type { Standing, TurningPoint, TurningPoints, UnmovedChange } from "./contract.ts";
import { bullet, section, wrap } from "./text-layout.ts";
import { figures, reagentWords, VERDICT_WORDS } from "./text-words.ts";

/** What makes two methods the same one here, in words. */
export const SAME_METHOD =
  "Methods count as the same where mode, way round, titrants, dye or electrode, masking agents and separation are the same; buffer, amounts and pH may differ.";

/** A level or a percentage as it is printed. */
const value = (x: number, unit: "mol/L" | "%" | null): string => {
  if (unit === "%") return `${figures(x, 4)} %`;
  if (x >= 0.1 || x === 0) return `${figures(x, 4)} mol/L`;
  return x >= 1e-4 ? `${figures(x * 1e3, 4)} mmol/L` : `${figures(x * 1e6, 4)} µmol/L`;
};

/** What is changed, in words: "Cd2+ in the sample". */
export function changeWords({ what, subject }: Pick<TurningPoint, "what" | "subject">): string {
  if (what === "requirement") return "the requirement";
  if (what === "forbid") return `forbid ${reagentWords(subject)}`;
  if (what === "allow") return `allow ${reagentWords(subject)}`;
  return what === "analyte-level" ? `${subject} (determined)` : subject;
}

/** "10 µmol/L to 32.5 µmol/L, 3.25 times"; nothing for a reagent. */
export function fromTo({ from, to, unit, factor }: TurningPoint): string {
  if (from === null || to === null) return "";
  return `${value(from, unit)} to ${value(to, unit)}${factor === null ? "" : `, ${figures(factor)} times`}`;
}

/** What becomes of the answer: verdict and method where they change. */
export function afterWords(before: Standing, { changes, after }: TurningPoint): string {
  const verdict = `verdict ${VERDICT_WORDS[before.verdict].toLowerCase()} becomes ${VERDICT_WORDS[after.verdict].toLowerCase()}`;
  const method = after.method ? `first is then ${after.method.words}` : "no method is left";
  return [...(changes.includes("verdict") ? [verdict] : []), ...(changes.includes("method") ? [method] : [])].join(
    "; ",
  );
}

const unmovedWords = (change: UnmovedChange): string => {
  const { direction, upTo, unit, settled } = change;
  const where = upTo === null ? "" : `, ${direction ?? ""} to ${value(upTo, unit)}`;
  return `${changeWords(change)}${where}${settled ? "" : " (something changes there, but how near is not settled)"}`;
};

/** Turning points as lines of text, smallest change first. */
export function turningPointsText(found: TurningPoints): string {
  const { before, points, unmoved, done, total, runs, brief } = found;
  const complete = total > 0 && done === total;
  return [
    `Turning points: ${brief.title}`,
    `${complete ? `All ${total} changes` : `${done} of ${total} changes`} looked at in ${runs} recommendations.${complete ? "" : " Stopped before the end."}`,
    "",
    ...wrap(`As it is: ${VERDICT_WORDS[before.verdict].toLowerCase()}; ${before.method?.words ?? "no method"}.`, ""),
    "",
    ...section(
      "What changes the answer, smallest change first",
      points.length === 0
        ? [bullet("nothing that was looked at")]
        : points.map((p) =>
            bullet([changeWords(p), fromTo(p), afterWords(before, p)].filter((t) => t !== "").join(": ")),
          ),
    ),
    "",
    ...section(
      "What changes nothing",
      unmoved.map((u) => bullet(unmovedWords(u))),
    ),
    "",
    ...wrap(
      `Each point was found by answering the changed brief; nine tenths of the change, by difference and by ratio, change nothing. ${SAME_METHOD}`,
      "",
    ),
    "",
  ].join("\n");
}

/** One line while the search runs. */
export const turningProgress = ({ done, total, runs, points }: TurningPoints): string =>
  `${done} of ${total || "?"} changes looked at, ${runs} recommendations, ${points.length} turning points`;
