import type { Because, RecommendedMethod, StageDocument } from "./contract.ts";
import { bullet, row, wrap } from "./text-layout.ts";
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

/** Where the method is carried out: titrant, pH, end point, titre and what stands behind them, titration by titration. */
export function conditions(method: RecommendedMethod): readonly (readonly string[])[] {
  return method.stages.flatMap((stage, index) => [
    ...(method.stages.length > 1
      ? [[`  Titration ${index + 1}: ${stage.determines.length > 0 ? listed(stage.determines) : "reading discarded"}`]]
      : []),
    ...stageConditions(stage, method),
  ]);
}

function stageConditions(stage: StageDocument, method: RecommendedMethod): readonly (readonly string[])[] {
  const titrant = stage.titrant ?? method.titrant;
  const back = backTitrantOf(stage, method);
  const { endPoint, indicator, pH, buffer } = stage;
  const { molPerL, outOfModelRange } = stage.ionicStrength;
  const range = `works from ${figures(pH.low)} to ${figures(pH.high)}`;
  const seen =
    stage.detection === "visual" && indicator !== null
      ? `${reagentWords(indicator.id)}, ${indicator.colourChange.join(" → ")}`
      : instrumentWords(stage);
  const bound = stage.conditional.filter((entry) => entry.log10ConditionalK >= 0); // the rest is not bound at all
  const constants = bound.map((entry) => `${entry.metal} ${entry.log10ConditionalK.toFixed(1)}`).join(", ");
  const rows: readonly (readonly [string, string | null])[] = [
    ["Titrant", `${titrant.id} ${figures(titrant.molPerL)} mol/L`],
    ["Back titrant", back && `${back.id} ${figures(back.molPerL)} mol/L`],
    ["pH", `${figures(pH.target)} (${range}), ${reagentWords(buffer.id)} ${figures(buffer.molPerL)} mol/L`],
    ["End point", `${seen} (${END_POINT_BASIS[endPoint.basis]})`],
    [
      "Step",
      endPoint.electrode &&
        `${figures(endPoint.electrode.jumpMV)} mV from 99 to 101 % of the volume, read to ${figures(endPoint.electrode.readingMV)} mV; slope ${figures(endPoint.electrode.slopeMVPerDecade)} mV a decade`,
    ],
    [
      "pM",
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

/** Bias with its causes, expanded uncertainty with its parts, and both for each result where there are several. */
export function error(method: RecommendedMethod): readonly (readonly string[])[] {
  const { predicted, uncertaintyBudget } = method;
  const causes = predicted.biasBySource.map((part) => `${part.source} ${signedPercent(part.percent)}`);
  const parts = uncertaintyBudget.map((part) => `${part.source} ${percent(part.percent)}`);
  const because = causes.length > 0 ? `: ${causes.join(", ")}` : "";
  const budget = parts.length > 0 ? ` (standard uncertainties: ${parts.join(", ")})` : "";
  const expanded = percent(predicted.relativeExpandedUncertaintyPercent);
  return [
    wrap(`Bias ${signedPercent(predicted.biasPercent)}${because}.`, "  "),
    wrap(`Expanded uncertainty, bias included: ${expanded}${budget}.`, "  "),
    ...(predicted.perAnalyte.length < 2
      ? []
      : predicted.perAnalyte.map((result) =>
          bullet(
            `${listed(result.determines)}: bias ${signedPercent(result.biasPercent)}, expanded uncertainty ${percent(result.relativeExpandedUncertaintyPercent)}`,
          ),
        )),
  ];
}

/** What is masked by what, on what knowledge, and up to which level each component is borne. */
export function masking(method: RecommendedMethod): readonly (readonly string[])[] {
  const steps = method.stages.flatMap((stage) => stage.masking);
  const masked = steps.map((step) =>
    [
      `${listed(step.masks)} by ${reagentWords(step.agent)} (${step.via}; rests on ${MASKING_BASIS[step.basis]})`,
      ...maskWords(step),
    ].join("; "),
  );
  return [
    ...[...new Set(masked)].map(bullet),
    ...method.tolerance.map((limit) =>
      bullet(
        `${limit.component}: ${figures(limit.presentMolPerL)} mol/L is there, up to ${figures(limit.limitMolPerL)} mol/L is borne${steps.length === 0 ? "" : limit.withMasking ? " with the masking" : " without it"}`,
      ),
    ),
  ];
}

/** What the equilibrium and the record say of one mask: how firmly, at what cost to the analyte, what frees the ion again. */
function maskWords({ chemistry, practice }: StageDocument["masking"][number]): readonly string[] {
  const held = chemistry.masked
    .filter((m) => m.log10Alpha !== null || m.titratedFraction !== null)
    .map((m) => {
      const alpha = m.log10Alpha === null ? "" : `log alpha ${m.log10Alpha.toFixed(1)}, `;
      const share = m.titratedFraction === null ? "" : `${percent(100 * Math.max(0, m.titratedFraction))} titrated`;
      return `${m.ion} ${alpha}${share}`.replace(/, $/, "");
    });
  const { onAnalyteLog10Alpha: cost, usedFraction } = chemistry;
  const freed = [...new Set(practice.flatMap((p) => p.freedBy))];
  return [
    ...(held.length > 0 ? [listed(held)] : []),
    ...(cost !== null && cost >= 0.05 ? [`takes log alpha ${cost.toFixed(1)} from the analyte`] : []),
    ...(usedFraction !== null && usedFraction > 0.01 ? [`${percent(100 * usedFraction)} of the agent is used`] : []),
    ...(freed.length > 0 ? [`freed again by ${freed.join(" or ")}`] : []),
  ];
}

/** The rules that spoke of the method, each with its id and source. */
export function reasons(method: RecommendedMethod): readonly (readonly string[])[] {
  const said = (because: Because): string =>
    `${because.effect}: ${because.statement} [${because.rule}; ${because.source}]`;
  return [...new Set(method.because.map(said))].map(bullet);
}
