import type { Recommendation, RecommendedMethod } from "../../src/recommendation/contract.ts";

/** How far figures of two answers may lie apart, percentage points of the result, and which components are left out of the comparison. */
export interface Allowance {
  readonly biasPoints: number;
  readonly leaveOut?: readonly string[];
}

/** In what two answers differ, in words: verdict, ranking, figures, reservations, cautions, findings, tolerance. Empty where they say the same. */
export function differencesOf(
  a: Recommendation,
  b: Recommendation,
  { biasPoints, leaveOut = [] }: Allowance,
): string[] {
  const out: string[] = [];
  const compare = (what: string, x: unknown, y: unknown): void => {
    const [left, right] = [JSON.stringify(x), JSON.stringify(y)];
    if (left !== right) out.push(`${what}: ${left} against ${right}`);
  };
  compare("verdict", a.verdict, b.verdict);
  compare("ranking", a.methods.map(idOf), b.methods.map(idOf));
  if (out.length > 0) return out;
  const findings = (d: Recommendation): string[] =>
    d.findings
      .filter((f) => !leaveOut.includes(f.component))
      .map((f) => `${f.component} ${f.as}`)
      .sort();
  compare("findings", findings(a), findings(b));
  a.methods.forEach((method, i) => {
    const other = b.methods[i]!;
    const where = `method ${i + 1}`;
    compare(`${where} verdict`, method.verdict, other.verdict);
    compare(`${where} cautions`, [...method.cautions].sort(), [...other.cautions].sort());
    compare(`${where} rules`, rulesOf(method, leaveOut), rulesOf(other, leaveOut));
    compare(`${where} masks`, masksOf(method, leaveOut), masksOf(other, leaveOut));
    const near = (what: string, x: number, y: number, within: number): void => {
      if (!(Math.abs(x - y) <= within)) out.push(`${where} ${what}: ${x} against ${y}`);
    };
    near("bias", method.predicted.biasPercent, other.predicted.biasPercent, biasPoints);
    near(
      "uncertainty",
      method.predicted.relativeExpandedUncertaintyPercent,
      other.predicted.relativeExpandedUncertaintyPercent,
      2 * biasPoints,
    );
    // The excess of a back titration is a round figure: the back titre moves with it, the result does not.
    if (method.backTitrant === null)
      near(
        "titre",
        method.predicted.titreML,
        other.predicted.titreML,
        1e-6 + 0.01 * biasPoints * method.predicted.titreML,
      );
  });
  return out;
}

/** The key of a method, its lists in one order: they are written in the order of the brief. */
export const idOf = (method: RecommendedMethod): string =>
  method.id
    .split("|")
    .map((part) =>
      part
        .split(/(?<=\+)\+/)
        .sort()
        .join("+"),
    ) // ions end in a plus of their own
    .join("|");

/** Ids of the rules that spoke of a method, those about one of the components left out apart. */
const rulesOf = (method: RecommendedMethod, leaveOut: readonly string[]): string[] =>
  method.because
    .filter(({ facts }) => !leaveOut.includes(String(facts["component"] ?? "")))
    .map(({ rule, stage }) => `${rule} ${stage ?? ""}`)
    .sort();

const masksOf = (method: RecommendedMethod, leaveOut: readonly string[]): string[] =>
  method.stages
    .flatMap((stage) =>
      stage.masking.map(
        (m) =>
          `${m.agent} ${m.masks
            .filter((c) => !leaveOut.includes(c))
            .sort()
            .join("+")}`,
      ),
    )
    .sort();
