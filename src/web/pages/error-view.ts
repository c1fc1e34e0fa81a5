import { causeWords } from "../../recommendation/cause-words.ts";
import type { RecommendedMethod } from "../../recommendation/contract.ts";
import type { Names } from "../format/names.ts";
import { percent, signedPercent, significant } from "../format/numbers.ts";
import { Markup } from "../render/markup.ts";

/** One term of the uncertainty, with a bar against the largest. */
export interface PartView {
  readonly source: Markup;
  readonly value: string;
  readonly bar: Markup;
}

/** One cause of the bias, as it is in the titration and as it counts, with a bar for what counts. */
export interface CauseView extends PartView {
  readonly before: string;
}

/** A bar of up to 60 units; with negative parts about, it grows from the middle to either side, so the side says the sign. */
const bar = (share: number, negative: boolean, twoSided: boolean): Markup => {
  const length = Math.round(Math.min(1, Math.max(0, share)) * 600) / 10;
  const zero = twoSided ? 60 : 0;
  const total = twoSided ? 120 : 60;
  return new Markup(
    `<svg class="bar" viewBox="0 0 ${total} 10" width="${total}" height="10" aria-hidden="true" focusable="false"><path class="tick" d="M${zero + 0.5} 0V10"/><rect class="${negative ? "bar-minus" : "bar-plus"}" x="${negative ? zero - length : zero}" y="2" width="${length}" height="6"/></svg>`,
  );
};

/** The bias of the worst result by its causes, before and after the standardisation takes its part back. */
export function causeViews({ predicted }: RecommendedMethod, names: Names): readonly CauseView[] {
  const causes = predicted.biasBySource;
  const twoSided = causes.some((c) => c.percent < 0);
  const largest = Math.max(...causes.map((c) => Math.abs(c.percent)), 1e-12);
  return causes.map((cause) => ({
    source: names.set(causeWords(cause)),
    value: signedPercent(cause.percent),
    before: signedPercent(cause.uncancelledPercent),
    bar: bar(Math.abs(cause.percent) / largest, cause.percent < 0, twoSided),
  }));
}

/** The uncertainty of the worst result by its terms. */
export function termViews({ uncertaintyBudget }: RecommendedMethod, names: Names): readonly PartView[] {
  const largest = Math.max(...uncertaintyBudget.map((t) => t.percent), 1e-12);
  return uncertaintyBudget.map((term) => ({
    source: names.set(term.source),
    value: percent(term.percent),
    bar: bar(term.percent / largest, false, false),
  }));
}

type Row = RecommendedMethod["budget"]["rows"][number];

/** One quantity of the budget: what is known of it, and what it does to the result. */
interface QuantityView {
  readonly quantity: Markup;
  readonly known: string;
  readonly standardUncertainty: string;
  readonly sensitivity: string;
  readonly contribution: string;
}

/** The whole budget, term by term, quantity by quantity, and its sum. */
export interface BudgetView {
  readonly determines: Markup;
  readonly terms: readonly {
    readonly term: Markup;
    readonly contribution: string;
    readonly rows: readonly QuantityView[];
  }[];
  readonly sums: readonly { readonly label: string; readonly value: string }[];
  readonly notCounted: readonly Markup[];
}

/** A figure without the zeros that would claim more of it than is known. */
const short = (value: number, digits: number): string =>
  Math.abs(value) >= 1e-3 && Math.abs(value) < 1e5
    ? String(Number(value.toPrecision(digits))).replace("-", "−")
    : significant(value, digits);

const withUnit = (value: number, digits: number, unit: string): string =>
  `${short(value, digits)}${unit === "" ? "" : ` ${unit}`}`;

/** What is known of a quantity: its value where it has one, how far it may be off, and of how many observations that speaks. */
function known({ value, unit, distribution, halfWidth, degreesOfFreedom }: Row): string {
  const parts = [
    value === 0 ? "" : withUnit(value, 4, unit),
    distribution === "normal" ? "normal" : `± ${withUnit(halfWidth, 3, unit)}, ${distribution}`,
    degreesOfFreedom === null ? "" : `degrees of freedom ${Math.floor(degreesOfFreedom)}`,
  ];
  return parts.filter((p) => p !== "").join("; ");
}

function quantityView(row: Row, names: Names): QuantityView {
  return {
    quantity: names.set(row.quantity),
    known: known(row),
    standardUncertainty: withUnit(row.standardUncertainty, 2, row.unit),
    sensitivity: `${short(row.sensitivityPercentPerUnit, 3)} %${row.unit === "" ? "" : `/${row.unit}`}`,
    contribution: percent(row.percent),
  };
}

/** The budget laid out; null where the titration came to nothing. */
export function budgetView(method: RecommendedMethod, names: Names): BudgetView | null {
  const { budget, uncertaintyBudget, predicted } = method;
  if (budget.rows.length === 0) return null;
  return {
    determines: names.set(budget.determines.join(" + ")),
    terms: uncertaintyBudget.map((term) => ({
      term: names.set(term.source),
      contribution: percent(term.percent),
      rows: budget.rows.filter((r) => r.term === term.source).map((row) => quantityView(row, names)),
    })),
    sums: [
      { label: "Combined standard uncertainty", value: percent(budget.combinedPercent) },
      {
        label: "Effective degrees of freedom (Welch and Satterthwaite)",
        value:
          budget.effectiveDegreesOfFreedom === null ? "infinite" : `${Math.floor(budget.effectiveDegreesOfFreedom)}`,
      },
      { label: "Coverage factor k", value: short(budget.coverageFactor, 2) },
      { label: "Bias, added by its size", value: signedPercent(predicted.biasPercent) },
      { label: "Expanded uncertainty", value: `±${percent(predicted.relativeExpandedUncertaintyPercent)}` },
    ],
    notCounted: budget.notCounted.map((n) => names.set(n)),
  };
}
