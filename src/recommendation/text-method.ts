import type { Because, RecommendedMethod, StageDocument } from "./contract.ts";
import { bullet, row, wrap } from "./text-layout.ts";
import { LIMIT_END_WORDS } from "./limit-words.ts";
import { causeWords } from "./cause-words.ts";
import { mergedStatements } from "./merge-statements.ts";
import { changeWords } from "./text-amounts.ts";
import { figures, listed, percent, reagentWords, signedPercent } from "./text-words.ts";

const END_POINT_BASIS = {
  constants: "computed from the constants of the dye",
  table: "by its published transition table",
  empirical: "by an empirical record: no constants of the dye are known",
  electrode: "at the inflection of the computed potential",
} as const;

const MASKING_BASIS = {
  equilibrium: "constants",
  empirical: "an empirical record",
  conversion: "a complete conversion",
} as const;

/** Below this a metal takes no titrant worth a word. */
const LEAST_LOG10_K = 2;
/** Parts of a bias and of an uncertainty below these, %, change no figure that is shown. */
const LEAST_BIAS_PERCENT = 0.005;
const LEAST_UNCERTAINTY_PERCENT = 0.01;
/** A shift of the pH that a meter shows. */
const SEEN_PH = 0.02;
/** Limits this many times above what is there are no limits to mind. */
const FAR_ABOVE = 100;

/** Where the method is carried out: titrant, pH, end point, titre and what stands behind them, titration by titration. */
export function conditions(method: RecommendedMethod): readonly (readonly string[])[] {
  return method.stages.flatMap((stage, index) => [
    ...(method.stages.length > 1
      ? [[`  Titration ${index + 1}: ${stage.determines.length > 0 ? listed(stage.determines) : "reading discarded"}`]]
      : []),
    ...stageConditions(stage, method),
  ]);
}

/** Why each titration is done at its pH and with its amounts. */
export function conditionReasons(method: RecommendedMethod): readonly (readonly string[])[] {
  const several = method.stages.length > 1;
  return method.stages.flatMap((stage, index) =>
    stage.conditions.map(({ statement }) => bullet(`${several ? `titration ${index + 1}: ` : ""}${statement}`)),
  );
}

function stageConditions(stage: StageDocument, method: RecommendedMethod): readonly (readonly string[])[] {
  const titrant = stage.titrant ?? method.titrant;
  const back = backTitrantOf(stage, method);
  const { endPoint, indicator, pH, buffer } = stage;
  const { molPerL, outOfModelRange } = stage.ionicStrength;
  const range = `works from ${figures(pH.low)} to ${figures(pH.high)}`;
  const seen =
    stage.detection === "visual" && indicator !== null
      ? `${reagentWords(indicator.id)}, ${changeWords(indicator.colourChange)}`
      : instrumentWords(stage);
  const bound = stage.conditional.filter((entry) => entry.log10ConditionalK >= LEAST_LOG10_K);
  const constants = bound.map((entry) => `${entry.metal} ${entry.log10ConditionalK.toFixed(1)}`).join(", ");
  const followed = back?.id ?? stage.vessel.detour?.metal ?? stage.determines[0] ?? null;
  const rows: readonly (readonly [string, string | null])[] = [
    ["Titrant", `${titrant.id} ${figures(titrant.molPerL)} mol/L`],
    ["Back titrant", back && `${back.id} ${figures(back.molPerL)} mol/L`],
    [
      "pH",
      `${figures(pH.target)} (${range}${dropWords(pH.drop)}), ${reagentWords(buffer.id)} ${figures(buffer.molPerL)} mol/L`,
    ],
    ["End point", `${seen} (${END_POINT_BASIS[endPoint.basis]})`],
    [
      "Step",
      endPoint.electrode &&
        `${figures(endPoint.electrode.jumpMV)} mV from 99 to 101 % of the volume, read to ${figures(endPoint.electrode.readingMV)} mV; slope ${figures(endPoint.electrode.slopeMVPerDecade)} mV a decade`,
    ],
    [
      followed === null ? "pM" : `pM of ${followed}`,
      endPoint.pM === null || endPoint.pMEquivalence === null
        ? null
        : `${figures(endPoint.pM)} at the end point, ${figures(endPoint.pMEquivalence)} at equivalence`,
    ],
    ["Titre", stage.titreML === null ? null : `${figures(stage.titreML)} mL`],
    ["log K'", constants === "" ? null : constants],
    [
      "Ionic strength",
      molPerL === null ? null : `${figures(molPerL)} mol/L${outOfModelRange ? ", beyond the range of the model" : ""}`,
    ],
  ];
  return rows.flatMap(([name, value]) => (value === null ? [] : [row(name, value)]));
}

/** By how much the pH moves until the end point, where a pH meter would show it. */
const dropWords = (drop: number | null): string =>
  drop === null || Math.abs(drop) < SEEN_PH
    ? ""
    : `; at the end point, ${drop > 0 ? "higher" : "lower"} by ${Math.abs(drop).toFixed(2)} at the start`;

/** How the end is read when no eye reads it: the electrode, or the dye, the photometer and its wavelength. */
export function instrumentWords(stage: StageDocument): string {
  const { electrode, wavelengthNm } = stage.endPoint;
  if (stage.detection === "electrode") return electrode?.name ?? "an electrode";
  const what = stage.indicator === null ? "the colour of the complex itself" : reagentWords(stage.indicator.id);
  return `${what}, read with a photometer${wavelengthNm ? ` at ${wavelengthNm.join(" to ")} nm` : ""}`;
}

/** The metal that a titration is finished with; a direct titration has none, whatever the others of its method have. */
export function backTitrantOf(stage: StageDocument, method: RecommendedMethod): RecommendedMethod["backTitrant"] {
  return stage.mode === "direct" ? null : (stage.backTitrant ?? method.backTitrant);
}

type Figures = Omit<RecommendedMethod["predicted"]["perAnalyte"][number], "determines">;

/** Bias with its causes, expanded uncertainty with its terms, for each result where there are several, and what would meet the requirement. */
export function error(method: RecommendedMethod): readonly (readonly string[])[] {
  const { predicted, budget, wouldMeet } = method;
  const several = predicted.perAnalyte.length > 1;
  const worst = several ? " of the worst result" : "";
  const expanded = percent(predicted.relativeExpandedUncertaintyPercent);
  const degrees =
    budget.effectiveDegreesOfFreedom === null
      ? ""
      : `, ${Math.floor(budget.effectiveDegreesOfFreedom)} effective degrees of freedom`;
  return [
    // The causes stand with each result where there are several.
    wrap(`${biasWords(several ? { ...predicted, biasBySource: [] } : predicted, worst)}.`, "  "),
    wrap(
      `Expanded uncertainty${worst}, bias included: ${expanded} (k = ${budget.coverageFactor}; combined standard uncertainty ${percent(budget.combinedPercent)}${degrees}).`,
      "  ",
    ),
    ...budgetTable(method),
    ...budget.notCounted.map((left) => bullet(`not counted: ${left}`)),
    ...(several
      ? predicted.perAnalyte.map((result) =>
          bullet(
            `${listed(result.determines)}: b${biasWords(result, "").slice(1)}; expanded uncertainty ${percent(result.relativeExpandedUncertaintyPercent)}`,
          ),
        )
      : []),
    ...(wouldMeet === null ? [] : [wrap(wouldMeet.statement, "  ")]),
  ];
}

/** A bias, what of it the standardisation takes back, and what makes it, without what changes no figure. */
function biasWords(result: Figures, of: string): string {
  const { biasPercent, biasUncancelledPercent, biasBySource } = result;
  const changed = (after: number, before: number): boolean => Math.abs(after - before) >= LEAST_BIAS_PERCENT;
  const before = changed(biasPercent, biasUncancelledPercent)
    ? ` (${signedPercent(biasUncancelledPercent)} before the standardisation takes its part back)`
    : "";
  const causes = biasBySource
    .filter((c) => Math.max(Math.abs(c.percent), Math.abs(c.uncancelledPercent)) >= LEAST_BIAS_PERCENT)
    .map(
      (c) =>
        `${causeWords(c)} ${signedPercent(c.percent)}${changed(c.percent, c.uncancelledPercent) ? ` (${signedPercent(c.uncancelledPercent)} before)` : ""}`,
    );
  return `Bias${of} ${signedPercent(biasPercent)}${before}${causes.length > 0 ? `: ${causes.join("; ")}` : ""}`;
}

/** Standard uncertainties by term, largest first, each with the quantities it is made of. */
function budgetTable({ uncertaintyBudget, budget }: RecommendedMethod): readonly (readonly string[])[] {
  return uncertaintyBudget
    .filter((term) => term.percent >= LEAST_UNCERTAINTY_PERCENT)
    .map((term) => {
      const made = budget.rows
        .filter((r) => r.term === term.source && r.percent >= LEAST_UNCERTAINTY_PERCENT)
        .map((r) => `${r.quantity} ${quantityWords(r)} ${percent(r.percent)}`);
      return bullet(`${term.source} ${percent(term.percent)}${made.length > 0 ? `: ${made.join("; ")}` : ""}`);
    });
}

/** How far a quantity may be off, in its unit. */
function quantityWords({ halfWidth, unit, distribution }: RecommendedMethod["budget"]["rows"][number]): string {
  const amount = `${figures(halfWidth)}${unit === "" ? "" : ` ${unit}`}`;
  return distribution === "normal" ? `(u ${amount})` : `(±${amount}, ${distribution})`;
}

/** What is masked by what, on what knowledge, and up to which level each component is borne. */
export function masking(method: RecommendedMethod): readonly (readonly string[])[] {
  const steps = method.stages.flatMap((stage) => stage.masking);
  // A mask carried on into a later titration is told with the first.
  const first = steps.filter(
    (step, i) => steps.findIndex((s) => s.agent === step.agent && s.masks.join() === step.masks.join()) === i,
  );
  const masked = first.map((step) =>
    [
      `${listed(step.masks)} by ${step.agent === "hydroxide" ? "the alkali" : reagentWords(step.agent)} (${step.via}; rests on ${MASKING_BASIS[step.basis]})`,
      ...maskWords(step),
    ].join("; "),
  );
  return [
    ...[...new Set(masked)].map(bullet),
    ...method.tolerance.map((limit) =>
      bullet(
        `${limit.component}: ${limitWords(limit.presentMolPerL, limit.limitMolPerL)}${steps.length === 0 ? "" : limit.withMasking ? " with the masking" : " without it"}${endWords(limit)}`,
      ),
    ),
  ];
}

/** What ends the room, where it is not the requirement. */
const endWords = ({ endsBy, limitMolPerL, presentMolPerL }: RecommendedMethod["tolerance"][number]): string =>
  endsBy === "requirement" || endsBy === "none" || limitMolPerL === 0 || limitMolPerL > FAR_ABOVE * presentMolPerL
    ? ""
    : `; ${LIMIT_END_WORDS[endsBy]}`;

/** What is there and what is borne, in the unit in which the first reads well. */
function limitWords(presentMolPerL: number, limitMolPerL: number): string {
  const [times, unit] =
    presentMolPerL >= 0.1 ? [1, "mol/L"] : presentMolPerL >= 1e-4 ? [1e3, "mmol/L"] : [1e6, "µmol/L"];
  const borne =
    limitMolPerL === 0
      ? "not even a trace"
      : limitMolPerL > FAR_ABOVE * presentMolPerL
        ? "more than a hundred times as much"
        : `up to ${figures(times * limitMolPerL)} ${unit}`;
  return `${figures(times * presentMolPerL)} ${unit} is there, ${borne} is borne`;
}

/** A share that is practically nothing is said as such. */
const shareWords = (fraction: number): string => (fraction < 1e-4 ? "under 0.01 %" : percent(100 * fraction));

/** What the equilibrium and the record say of one mask: how firmly, at what cost to the analyte, what frees the ion again. */
function maskWords({ chemistry, practice }: StageDocument["masking"][number]): readonly string[] {
  const held = chemistry.masked
    .filter((m) => m.log10Alpha !== null || m.titratedFraction !== null)
    .map((m) => {
      const alpha = m.log10Alpha === null ? "" : `log alpha ${m.log10Alpha.toFixed(1)}, `;
      const share = m.titratedFraction === null ? "" : `${shareWords(m.titratedFraction)} titrated`;
      return `${m.ion} ${alpha}${share}`.replace(/, $/, "");
    });
  const { onAnalyteLog10Alpha: cost, usedFraction } = chemistry;
  const freed = [...new Set(practice.flatMap((p) => p.freedBy))];
  return [
    ...(held.length > 0 ? [listed(held)] : []),
    ...(cost !== null && cost >= 0.05 ? [`it holds the analyte too: log alpha ${cost.toFixed(1)}`] : []),
    ...(usedFraction !== null && usedFraction > 0.01 ? [`${percent(100 * usedFraction)} of the agent is used`] : []),
    ...(freed.length > 0 ? [`freed again by ${freed.map(reagentWords).join(" or ")}`] : []),
  ];
}

/** The source of a claim; common practice is known by that name. */
const sourceWords = (source: string): string =>
  source.startsWith("Common practice of laboratories") ? "common practice" : source;

const said = (because: Because): string => `${because.statement} [${because.rule}; ${sourceWords(because.source)}]`;

/** What speaks for and against the method by the rules, each with its id and source. */
export function reasons(method: RecommendedMethod): readonly (readonly string[])[] {
  const weighed = method.because.filter((because) => because.effect !== "cautions");
  return [...new Set(mergedStatements(weighed).map((because) => `${because.effect}: ${said(because)}`))].map(bullet);
}

/** What the rules ask to mind at the bench, without the hazards and reservations that are told above. */
export function minded(method: RecommendedMethod): readonly (readonly string[])[] {
  const cautions = method.because.filter(
    ({ effect, rule }) => effect === "cautions" && !TOLD_AS_HAZARD.test(rule) && !TOLD_IN_STEPS.has(rule),
  );
  const told = new Set(method.reservations);
  return [
    ...new Set(
      mergedStatements(cautions)
        .filter(({ statement }) => !told.has(statement))
        .map(said),
    ),
  ].map(bullet);
}

/** Rules whose cautions the cautions of the reagents say in full. */
const TOLD_AS_HAZARD = /^safety\/|^release\/fluoride-in-hot-acid$/;
/** Rules that the order and the words of the steps follow to the letter. */
const TOLD_IN_STEPS = new Set([
  "practicability/hexamine-hot",
  "release/agent-after-first-end-point",
  "detection/wavelength",
]);
