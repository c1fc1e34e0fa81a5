import type { Recommendation, RecommendedMethod } from "./contract.ts";
import { bullet, LINE_CHARACTERS, section, wrap } from "./text-layout.ts";
import { conditionReasons, conditions, error, masking, minded, reasons } from "./text-method.ts";
import { stepsOf } from "./text-steps.ts";
import {
  FINDING_WORDS,
  figures,
  MODE_WORDS,
  percent,
  reagentWords,
  signedPercent,
  VERDICT_WORDS,
} from "./text-words.ts";

const RIVALS_SHOWN = 4;
const REJECTED_SHOWN = 8;
const DIFFERENCES_SHOWN = 3;

/** The recommendation as a chemist reads it aloud: verdict, method, cautions, conditions, steps, error, masking, rivals, what was rejected. Ends with a newline. */
export function recommendationText(document: Recommendation): string {
  const first = document.methods[0];
  return `${[
    [document.brief.title, "=".repeat(Math.min(document.brief.title.length, LINE_CHARACTERS))],
    verdict(document, first),
    ...(first === undefined ? [] : firstMethod(document, first)),
    section("What the components would do, if nothing were done", findings(document)),
    section("Rivals", rivals(document)),
    section("Published practice differs", document.disagreement === null ? [] : [wrap(document.disagreement, "  ")]),
    section("Rejected", rejected(document)),
    section(
      "Notes on the brief",
      document.notes.map((note) => bullet(note)),
    ),
    [
      ...wrap(
        `Knowledge ${document.knowledge.version}, ${document.knowledge.hash}. Constants used: ${document.constants.length}; --json lists each with its source, the conditions it was found under and the value it was moved to.`,
        "",
      ),
    ],
  ]
    .filter((lines) => lines.length > 0)
    .map((lines) => lines.join("\n"))
    .join("\n\n")}\n`;
}

function verdict(document: Recommendation, first: RecommendedMethod | undefined): readonly string[] {
  const required = percent(document.brief.requirement.relativeExpandedUncertaintyPercent);
  const word = VERDICT_WORDS[document.verdict];
  if (first === undefined) return wrap(`${word}: no method by complexometric titration was found for this brief.`, "");
  const predicted = percent(first.predicted.relativeExpandedUncertaintyPercent);
  const sentence =
    document.verdict === "not-fit"
      ? `${word}: nothing found meets the requirement of ${required} (k = 2). The nearest is shown: ${predicted}.`
      : `${word}: ${predicted} is predicted, ${required} is required (relative expanded uncertainty, k = 2).`;
  return [...wrap(sentence, ""), ...first.reservations.flatMap((reservation) => bullet(reservation))];
}

function firstMethod(document: Recommendation, method: RecommendedMethod): readonly (readonly string[])[] {
  return [
    section("Method", [wrap(method.summary, "  ")]),
    section(
      "Cautions",
      method.cautions.map((caution) => bullet(caution)),
    ),
    section("At the bench", conditions(method)),
    section("Conditions chosen", conditionReasons(method)),
    section(
      "Steps",
      stepsOf(method, document.brief).map((step, index) => wrap(step, `  ${String(index + 1).padStart(2)}. `)),
    ),
    section("To mind", minded(method)),
    section(
      "Result",
      method.calculation.length === 0
        ? []
        : [
            ...method.calculation.map((formula) => bullet(formula)),
            wrap("V: volume read, in mL, less its blank; c: strength found when standardised, in mol/L.", "    "),
          ],
    ),
    section("Error of one determination", error(method)),
    section("Masking and limits", masking(method)),
    section("Why", reasons(method)),
    section("Precedents, looked up after the ranking", precedents(method)),
  ];
}

function precedents(method: RecommendedMethod): readonly (readonly string[])[] {
  return method.precedents.map(({ statement, sources, pHBasis }) =>
    bullet(
      `${statement} [${sources.map(({ cite, basis }) => `${cite}; ${basis}`).join(" | ")}; pH ${pHBasis === "read" ? "read" : "from memory"}]`,
    ),
  );
}

function findings(document: Recommendation): readonly (readonly string[])[] {
  // Sentences of one component stand together.
  const order = [...new Set(document.findings.map((finding) => finding.component))];
  return order.flatMap((component) =>
    document.findings
      .filter((finding) => finding.component === component)
      .map((finding) =>
        bullet(
          finding.statement.startsWith(`${component} `)
            ? finding.statement
            : `${component} ${FINDING_WORDS[finding.as]}: ${finding.statement}`,
        ),
      ),
  );
}

function rivals(document: Recommendation): readonly (readonly string[])[] {
  const others = document.methods.slice(1);
  const shown = others.slice(0, RIVALS_SHOWN);
  return [
    ...shown.map((method) =>
      wrap(
        `${method.summary} ${percent(method.predicted.relativeExpandedUncertaintyPercent)}, bias ${signedPercent(method.predicted.biasPercent)}${method.meetsRequirement ? "" : "; misses the requirement"}.`,
        `  ${String(method.rank).padStart(2)}. `,
      ),
    ),
    ...(others.length > shown.length ? [wrap(`and ${others.length - shown.length} more in --json.`, "      ")] : []),
    ...decided(document),
  ];
}

/** What put the first before the second, with the rules that told most. */
function decided({ decidedBy }: Recommendation): readonly (readonly string[])[] {
  if (decidedBy === null) return [];
  return [
    wrap(`First against second: ${decidedBy.statement}`, "  "),
    ...decidedBy.differences
      .slice(0, DIFFERENCES_SHOWN)
      .map(({ first, second, statement }) => bullet(`${first} against ${second}: ${statement}`)),
  ];
}

/** Methods of several titrations: dye and pH of their first one do not tell them apart. */
const OF_SEVERAL = new Set(["successive", "difference", "portions"]);

function rejected(document: Recommendation): readonly (readonly string[])[] {
  const lines = document.rejected.map((entry) => {
    const back = entry.backTitrant === null ? "" : ` and ${entry.backTitrant}`;
    const seen =
      OF_SEVERAL.has(entry.mode) || entry.indicator === null
        ? ""
        : `, ${reagentWords(entry.indicator)}${entry.pH === null ? "" : `, pH ${figures(entry.pH)}`}`;
    const why = [...new Set(entry.because.map((because) => because.statement))].join(" ");
    return `${MODE_WORDS[entry.mode]} with ${entry.titrant}${back}${seen}: ${why}`;
  });
  const distinct = [...new Set(lines)];
  const more = distinct.length - REJECTED_SHOWN;
  return [
    ...distinct.slice(0, REJECTED_SHOWN).map(bullet),
    ...(more > 0 ? [wrap(`and ${more} more in --json.`, "    ")] : []),
  ];
}
