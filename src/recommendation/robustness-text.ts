import type { DrawnParameter, Robustness } from "./contract.ts";
import { bullet, section, wrap } from "./text-layout.ts";
import { figures, listed, reagentWords } from "./text-words.ts";

/** Why a titration is evaluated as a whole in every draw, in words. */
export const WHOLE_WORDS = {
  release: "the analyte is released in it",
  "way round": "the ion is determined through another metal",
  solid: "a solid stands in the vessel",
  "no end point": "it shows no end point as planned",
} as const;

/** What is drawn and how wide, as standard uncertainties. */
export const spreadWords = ({ spreads }: Robustness): string =>
  `Drawn from normal distributions: each constant with its own standard uncertainty; pH ${figures(spreads.pH)}; buffer, masking and auxiliary reagents ${figures(spreads.reagentPercent)} %; dye ${figures(spreads.dyePercent)} %; levels of the matrix ${figures(spreads.matrixPercent)} % (standard uncertainties of the bench: common practice). Standard solutions, glassware and reading stand in the uncertainty of each draw.`;

/** What a parameter is, in words; the reaction of a constant as the knowledge base writes it. */
export function parameterWords({ kind, id }: DrawnParameter, titrations: number): string {
  if (kind === "pH") return titrations > 1 ? `pH of titration ${id}` : "pH";
  if (kind === "reagent") return `amount of ${reagentWords(id)}`;
  return kind === "matrix" ? `level of ${id}` : `constant ${id}`;
}

const percent = (fraction: number): string => `${(100 * fraction).toFixed(1)} %`;

/** "96.1 %": the share of the draws that meet the requirement. */
export const shareWords = ({ probability }: Robustness): string => percent(probability.fraction);

/** "of 1000 draws (95 % interval 94.7 to 97.1 %)". */
export const drawsWords = ({ probability, done }: Robustness): string =>
  `of ${done} draws (95 % interval ${(100 * probability.low).toFixed(1)} to ${percent(probability.high)})`;

const AT = [0.05, 0.5, 0.95];

/** The quantiles that are printed: 5, 50 and 95 %. */
export const printedQuantiles = ({
  quantiles,
}: Robustness["results"][number]): Robustness["results"][number]["quantiles"] =>
  quantiles.filter((q) => AT.includes(q.probability));

/** Which titrations are evaluated as a whole, and why; empty where none is. */
export function wholeWords({ notCompiled, whole, done }: Robustness): string {
  if (notCompiled.length > 0)
    return `${listed(notCompiled.map(({ titration, why }) => `Titration ${titration}: ${WHOLE_WORDS[why]}`))}: evaluated as a whole in every draw, which is slower.`;
  return whole === 0
    ? ""
    : `In ${whole} of ${done} draws something else happens in the vessel (a solid forms): they were evaluated as a whole.`;
}

/** The robustness of a method as lines of text. */
export function robustnessText(found: Robustness): string {
  const { results, parameters, done, draws, unread, seed, requirementPercent } = found;
  const titrations = Math.max(1, results.length);
  const signed = (x: number): string => `${x > 0 ? "+" : ""}${figures(x)}`;
  const whole = wholeWords(found);
  return [
    ...wrap(`Robustness: ${found.method.summary}`, ""),
    "",
    `The requirement of ${figures(requirementPercent)} % is met in ${shareWords(found)} ${drawsWords(found)}.`,
    ...(unread > 0 ? [`No end point, or a spoilt dye, in ${unread} draws.`] : []),
    ...(done < draws ? [`Stopped: ${done} of ${draws} draws.`] : []),
    "",
    ...section(
      "Error and expanded uncertainty (5, 50 and 95 % of the draws)",
      results.map((r) => {
        const q = printedQuantiles(r);
        return bullet(
          `${r.determines.join(" + ")}: error ${q.map((x) => signed(x.biasPercent)).join(", ")} %; uncertainty ${q.map((x) => figures(x.expandedPercent)).join(", ")} % (as planned ${signed(r.planned.biasPercent)} and ${figures(r.planned.expandedPercent)} %)`,
        );
      }),
    ),
    "",
    ...section(
      "What matters most (share of the scatter of uncertainty and of error that goes with it alone)",
      parameters.length === 0
        ? [bullet("nothing stands out of what chance gives")]
        : parameters.map((p) =>
            bullet(
              `${parameterWords(p, titrations)} (± ${figures(p.standardUncertainty)} ${p.unit}): ${percent(p.shareOfUncertainty)}, ${percent(p.shareOfError)}${p.errorGoes === null ? "" : `; more of it, error ${p.errorGoes}`}`,
            ),
          ),
    ),
    "",
    ...wrap(`${spreadWords(found)} Seed ${seed}: the same figures again.`, ""),
    ...(whole === "" ? [] : wrap(whole, "")),
    "",
  ].join("\n");
}
