import type { Because, Recommendation, RecommendedMethod } from "./contract.ts";
import { stepsOf } from "./text-steps.ts";
import {
  FINDING_WORDS,
  figures,
  listed,
  MODE_WORDS,
  percent,
  reagentWords,
  signedPercent,
  VERDICT_WORDS,
} from "./text-words.ts";

const LINE_CHARACTERS = 100;
const RIVALS_SHOWN = 4;
const REJECTED_SHOWN = 8;

/** The recommendation as a chemist reads it aloud: verdict, method, cautions, conditions, steps, error, masking, rivals, what was rejected. Ends with a newline. */
export function recommendationText(document: Recommendation): string {
  const first = document.methods[0];
  return `${[
    [document.brief.title, "=".repeat(Math.min(document.brief.title.length, LINE_CHARACTERS))],
    verdict(document, first),
    ...(first === undefined ? [] : firstMethod(document, first)),
    section("What the components would do, if nothing were done", findings(document)),
    section("Rivals", rivals(document)),
    section("Rejected", rejected(document)),
    section(
      "Notes on the brief",
      document.notes.map((note) => bullet(note)),
    ),
    [
      ...wrap(
        `Knowledge ${document.knowledge.version}, ${document.knowledge.hash}. ${document.constants.length} constants were used; --json lists each with its source, the conditions it was found under and the value it was moved to.`,
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
    section(
      "Steps",
      stepsOf(method, document.brief).map((step, index) => wrap(step, `  ${String(index + 1).padStart(2)}. `)),
    ),
    section("Error of one determination", error(method)),
    section("Masking and limits", masking(method)),
    section(
      "Why",
      method.because.filter(speaks).map((because) => bullet(reason(because))),
    ),
  ];
}

function conditions(method: RecommendedMethod): readonly (readonly string[])[] {
  const row = (name: string, value: string): readonly string[] => wrap(value, `  ${name.padEnd(20)}`);
  return method.stages.flatMap((stage, index) => {
    const titrant = stage.titrant ?? method.titrant;
    const back = stage.backTitrant ?? method.backTitrant;
    const { endPoint, indicator } = stage;
    const { molPerL, outOfModelRange } = stage.ionicStrength;
    return [
      ...(method.stages.length > 1
        ? [
            [
              `  Titration ${index + 1}: ${stage.determines.length > 0 ? listed(stage.determines) : "reading discarded"}`,
            ],
          ]
        : []),
      row("Titrant", `${titrant.id} ${figures(titrant.molPerL)} mol/L`),
      ...(back === null ? [] : [row("Back titrant", `${back.id} ${figures(back.molPerL)} mol/L`)]),
      row(
        "pH",
        `${figures(stage.pH.target)} (works from ${figures(stage.pH.low)} to ${figures(stage.pH.high)}), ${reagentWords(stage.buffer.id)} ${figures(stage.buffer.molPerL)} mol/L`,
      ),
      row(
        "End point",
        indicator === null
          ? stage.detection
          : `${reagentWords(indicator.id)}, ${indicator.colourChange.join(" to ")} (${endPoint.basis === "empirical" ? "an empirical record: no constants are known" : `from ${endPoint.basis}`})`,
      ),
      ...(endPoint.pM === null || endPoint.pMEquivalence === null
        ? []
        : [row("pM", `${figures(endPoint.pM)} at the end point, ${figures(endPoint.pMEquivalence)} at equivalence`)]),
      ...(stage.titreML === null ? [] : [row("Titre", `${figures(stage.titreML)} mL`)]),
      ...(stage.conditional.length === 0
        ? []
        : [
            row(
              "log K'",
              stage.conditional.map((entry) => `${entry.metal} ${entry.log10ConditionalK.toFixed(1)}`).join(", "),
            ),
          ]),
      ...(molPerL === null
        ? []
        : [
            row(
              "Ionic strength",
              `${figures(molPerL)} mol/L${outOfModelRange ? ", beyond the range of the model" : ""}`,
            ),
          ]),
    ];
  });
}

function error(method: RecommendedMethod): readonly (readonly string[])[] {
  const { predicted, uncertaintyBudget } = method;
  const causes = predicted.biasBySource.map((part) => `${part.source} ${signedPercent(part.percent)}`);
  const parts = uncertaintyBudget.map((part) => `${part.source} ${percent(part.percent)}`);
  return [
    wrap(`Bias ${signedPercent(predicted.biasPercent)}${causes.length > 0 ? `: ${causes.join(", ")}` : ""}.`, "  "),
    wrap(
      `Expanded uncertainty, bias included: ${percent(predicted.relativeExpandedUncertaintyPercent)}${parts.length > 0 ? ` (standard uncertainties: ${parts.join(", ")})` : ""}.`,
      "  ",
    ),
    ...(predicted.perAnalyte.length < 2
      ? []
      : predicted.perAnalyte.map((result) =>
          bullet(
            `${listed(result.determines)}: bias ${signedPercent(result.biasPercent)}, expanded uncertainty ${percent(result.relativeExpandedUncertaintyPercent)}`,
          ),
        )),
  ];
}

function masking(method: RecommendedMethod): readonly (readonly string[])[] {
  const masked = new Set<string>();
  for (const stage of method.stages)
    for (const step of stage.masking)
      masked.add(
        `${listed(step.masks)} by ${reagentWords(step.agent)} (${step.via}; rests on ${step.basis === "equilibrium" ? "constants" : step.basis === "conversion" ? "a complete conversion" : "an empirical record"})`,
      );
  return [
    ...[...masked].map((line) => bullet(line)),
    ...method.tolerance.map((limit) =>
      bullet(
        `${limit.component}: holds up to ${figures(limit.limitMolPerL)} mol/L in the sample${limit.withMasking ? " with the masking" : ""}, ${figures(limit.presentMolPerL)} mol/L is there`,
      ),
    ),
  ];
}

function findings(document: Recommendation): readonly (readonly string[])[] {
  return document.findings.map((finding) =>
    bullet(`${finding.component} ${FINDING_WORDS[finding.as]}: ${finding.statement}`),
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
    ...(document.decidedBy === null ? [] : [wrap(`First against second: ${document.decidedBy.statement}`, "  ")]),
  ];
}

function rejected(document: Recommendation): readonly (readonly string[])[] {
  const shown = document.rejected.slice(0, REJECTED_SHOWN);
  const more = document.rejected.length - shown.length;
  return [
    ...shown.map((entry) =>
      bullet(
        `${MODE_WORDS[entry.mode]} with ${entry.titrant}${entry.backTitrant === null ? "" : ` and ${entry.backTitrant}`}${entry.indicator === null ? "" : `, ${reagentWords(entry.indicator)}`}${entry.pH === null ? "" : `, pH ${figures(entry.pH)}`}: ${entry.because.map((because) => because.statement).join(" ")}`,
      ),
    ),
    ...(more > 0 ? [wrap(`and ${more} more in --json.`, "    ")] : []),
  ];
}

const speaks = (because: Because): boolean => because.effect !== "excludes";
const reason = (because: Because): string =>
  `${because.effect}: ${because.statement} [${because.rule}; ${because.source}]`;

const section = (title: string, paragraphs: readonly (readonly string[])[]): readonly string[] =>
  paragraphs.length === 0 ? [] : [title, ...paragraphs.flat()];

const bullet = (text: string): readonly string[] => wrap(text, "  - ");

/** Breaks a text into lines; the first starts with `lead`, the others with as many blanks. */
function wrap(text: string, lead: string): readonly string[] {
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
