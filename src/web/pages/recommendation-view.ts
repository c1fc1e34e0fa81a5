import type { Brief, Recommendation, RecommendedMethod } from "../../recommendation/contract.ts";
import { curveFigure, curveDescription } from "../figures/curve-figure.ts";
import { readingDescription, readingFigure } from "../figures/reading-figure.ts";
import { NARROW, WIDE } from "../figures/frame.ts";
import { logKDescription, logKFigure } from "../figures/log-k-figure.ts";
import { encodeBrief } from "../form/brief-link.ts";
import { linkMarkup, type Names } from "../format/names.ts";
import { amount, fixed, percent, signed, signedPercent } from "../format/numbers.ts";
import { FINDING_WORDS, MODE_WORDS, VERDICT_WORDS, wordsOf } from "../format/words.ts";
import { joinMarkup } from "../render/markup.ts";
import type { FactListing, FigureSeries, WebServices } from "../services.ts";
import { budgetView, causeViews, termViews } from "./error-view.ts";
import { stageViews } from "./method-view.ts";
import { roomViews } from "./room-view.ts";
import { marginFacts, reasonViews } from "./reasons-view.ts";
import { constantViews } from "./constants-used-view.ts";
import { questionRows } from "./question-view.ts";
import { rivalsTable } from "./rivals-view.ts";
import { shell } from "./shell.ts";

/** How full the answer is, as a mark beside its words. */
const VERDICT_MARKS: Readonly<Record<Recommendation["verdict"], string>> = {
  fit: "●",
  "fit-with-reservations": "◐",
  "not-fit": "○",
};

/** What the page of an answer is made from. */
export interface AnswerOnPage {
  readonly recommendation: Recommendation;
  readonly sent: unknown; // the brief as the link carries it
  readonly method: RecommendedMethod | null; // the one laid out in full
  readonly figures: FigureSeries | null;
}

/** The view model of one answer: flat, formatted, in the order in which a chemist asks. */
export function recommendationView(
  services: WebServices,
  names: Names,
  catalogue: ReadonlyMap<string, FactListing>,
  answer: AnswerOnPage,
): object {
  const { recommendation, method, figures } = answer;
  const { brief } = recommendation;
  const link = `brief=${encodeBrief(answer.sent)}`;
  const hrefOf = (id: string): string => `/recommendation?${link}&method=${encodeURIComponent(id)}`;
  const best = recommendation.methods[0];
  return {
    shell: shell(services.knowledge, brief.title, "brief"),
    title: brief.title,
    changeHref: `/?${link}`,
    jsonHref: `/api/recommendations?${link}`,
    turningHref: `/turning-points?${link}`,
    question: questionRows(brief, names),
    verdict: wordsOf(VERDICT_WORDS, recommendation.verdict),
    verdictMark: VERDICT_MARKS[recommendation.verdict],
    asked: percent(brief.requirement.relativeExpandedUncertaintyPercent),
    howWell: method ? percent(method.predicted.relativeExpandedUncertaintyPercent) : "",
    method: method === null ? null : methodView(method, recommendation, names, catalogue, figures, link),
    isBest: method === null || method === best,
    bestHref: best ? hrefOf(best.id) : "",
    findings: recommendation.findings.map((f) => ({
      component: names.link(f.component),
      as: wordsOf(FINDING_WORDS, f.as),
      statement: names.set(f.statement),
      facts: marginFacts(f.facts, names),
    })),
    decidedBy:
      recommendation.decidedBy === null
        ? null
        : {
            statement: names.set(recommendation.decidedBy.statement),
            differences: recommendation.decidedBy.differences.map((d) => ({
              rule: d.rule.includes("/") ? linkMarkup(`/rules/${d.rule}`, d.rule) : joinMarkup([d.rule]),
              first: signed(d.first, 1),
              second: signed(d.second, 1),
              statement: names.set(d.statement),
            })),
          },
    rivals: rivalsTable(recommendation, names, method, hrefOf),
    rejected: recommendation.rejected.map((r) => ({
      what: joinMarkup([
        `${wordsOf(MODE_WORDS, r.mode)} with `,
        names.name(r.titrant),
        ...(r.backTitrant === null ? [] : [", back with ", names.name(r.backTitrant)]),
        ...(r.indicator === null ? [] : [", ", names.name(r.indicator)]),
        r.pH === null ? "" : `, pH ${fixed(r.pH, 1)}`,
      ]),
      reasons: reasonViews(r.because, catalogue, names),
    })),
    constants: constantViews(recommendation, names),
    disagreement: recommendation.disagreement === null ? null : names.set(recommendation.disagreement),
    notes: recommendation.notes.map((n) => names.set(n)),
    knowledge: `${recommendation.knowledge.version}, ${recommendation.knowledge.hash.slice(0, 16)}`,
  };
}

function methodView(
  method: RecommendedMethod,
  recommendation: Recommendation,
  names: Names,
  catalogue: ReadonlyMap<string, FactListing>,
  figures: FigureSeries | null,
  link: string,
): object {
  const csv = (kind: string): string => `/figures/${kind}.csv?${link}&method=${encodeURIComponent(method.id)}`;
  const conditions = conditionsText(method, recommendation.brief);
  const plainSet = names.set;
  return {
    rank: String(method.rank),
    summary: names.set(method.summary),
    precedents: method.precedents.map((p) => ({
      statement: names.set(p.statement),
      sources: names.set(p.sources.map(({ cite, basis }) => `${cite} (${basis})`).join("; ")),
    })),
    heading: method.meetsRequirement ? "The method" : "The nearest method",
    meets: method.meetsRequirement ? "keeps the requirement" : "does not keep the requirement",
    uncertainty: percent(method.predicted.relativeExpandedUncertaintyPercent),
    bias: signedPercent(method.predicted.biasPercent),
    titre: `${fixed(method.predicted.titreML, 2)} mL`,
    reservations: method.reservations.map((r) => names.set(r)),
    cautions: method.cautions.map((c) => names.set(c)),
    stages: stageViews(method, recommendation.brief, names),
    calculation: method.calculation.map((c) => names.set(c)),
    perAnalyte:
      method.predicted.perAnalyte.length < 2
        ? []
        : method.predicted.perAnalyte.map((p) => ({
            what: joinMarkup(
              p.determines.map((d) => names.name(d)),
              " + ",
            ),
            bias: signedPercent(p.biasPercent),
            uncertainty: percent(p.relativeExpandedUncertaintyPercent),
          })),
    biasBefore: signedPercent(method.predicted.biasUncancelledPercent),
    causes: causeViews(method, names),
    terms: termViews(method, names),
    budget: budgetView(method, names),
    // Several results: cause and term are those of the worst.
    worst: method.predicted.perAnalyte.length > 1 ? names.set(method.budget.determines.join(" + ")) : null,
    wouldMeet: method.wouldMeet === null ? null : names.set(method.wouldMeet.statement),
    room: roomViews(method.tolerance, names),
    robustnessHref: `/robustness?${link}&method=${encodeURIComponent(method.id)}`,
    limitsHref: `/limits?${link}&method=${encodeURIComponent(method.id)}`,
    interferents: method.stages.flatMap((stage, i) =>
      stage.interferents.map((x) => ({
        stage: String(i + 1),
        component: names.link(x.component),
        titrated: x.titratedFraction === null ? "not computed" : percent(x.titratedFraction * 100),
        bias: x.biasPercent === null ? "–" : signedPercent(x.biasPercent),
        maskedBy: x.maskedBy === null ? joinMarkup(["not masked"]) : names.link(x.maskedBy),
      })),
    ),
    severalStages: method.stages.length > 1,
    reasons: reasonViews(method.because, catalogue, names),
    scores: method.scores.map((s) => ({
      rule: linkMarkup(`/rules/${s.rule}`, s.rule),
      weight: signed(s.weight, 1),
      statement: names.set(s.statement),
    })),
    figures:
      figures === null
        ? []
        : [
            {
              wide: logKFigure("logk-wide", figures.logK, WIDE, plainSet),
              narrow: logKFigure("logk-narrow", figures.logK, NARROW, plainSet),
              caption: names.set(`log K' against pH. ${conditions}`),
              description: names.set(logKDescription(figures.logK)),
              csvHref: csv("log-k"),
            },
            {
              wide: curveFigure("curve-wide", figures.curve, WIDE, plainSet),
              narrow: curveFigure("curve-narrow", figures.curve, NARROW, plainSet),
              caption: names.set(`Titration curve with the band in which the end point is seen. ${conditions}`),
              description: names.set(curveDescription(figures.curve)),
              csvHref: csv("curve"),
            },
            ...(figures.reading === null
              ? []
              : [
                  {
                    wide: readingFigure("reading-wide", figures.reading, WIDE),
                    narrow: readingFigure("reading-narrow", figures.reading, NARROW),
                    caption: names.set(`${READING_CAPTION[figures.reading.kind]} ${conditions}`),
                    description: names.set(readingDescription(figures.reading)),
                    csvHref: csv("reading"),
                  },
                ]),
          ],
  };
}

const READING_CAPTION = {
  potential: "What the electrode shows, with the inflection.",
  absorbance: "What the photometer shows, with the two straight branches and where they meet.",
} as const;

/** The conditions a figure was computed for, as one sentence. */
function conditionsText(method: RecommendedMethod, brief: Brief): string {
  const stage = method.stages[0];
  const strength = method.workingConditions.ionicStrengthMolPerL;
  return [
    `Computed for ${fixed(method.workingConditions.temperatureC, 0)} °C`,
    strength === null ? "" : `, ionic strength ${amount(strength, 2)}`,
    stage ? `, pH ${fixed(stage.pH.target, 1)}` : "",
    `, ${fixed(brief.portion.titrationVolumeML, 0)} mL titrated.`,
  ].join("");
}
