import type { ComponentForm } from "../constants/knowledge.ts";
import { formulaMassGPerMol, readFormula } from "./units-formula.ts";
import type { Concentration } from "./contract-brief.ts";

/** mol (or g) per litre in one unit of each spelling; the micro sign and the Greek letter mu are both understood. */
const MOLAR: Readonly<Record<string, number>> = { "mol/L": 1, "mmol/L": 1e-3, "umol/L": 1e-6, "µmol/L": 1e-6 };
const MASS: Readonly<Record<string, number>> = { "g/L": 1, "mg/L": 1e-3, "ug/L": 1e-6, "µg/L": 1e-6 };

/** Formulas that stand for one divalent ion each, whatever it is, as water chemistry counts. */
const DIVALENT_EQUIVALENTS = new Set(["CaCO3", "CaO"]);

export type ConvertedLevel =
  | { readonly kind: "converted"; readonly molPerL: number; readonly note: string | null }
  | { readonly kind: "fault"; readonly field: "as" | "unit"; readonly expected: string };

/**
 * Converts a level of `form` to mol/L of its component. Mass units mean the form as written, or the formula named by
 * `as`: any formula that holds the element; CaCO3 and CaO also serve for any divalent ion. A level that cannot be converted is a fault at its field.
 */
export function toComponentMolPerL(
  level: Concentration,
  form: ComponentForm,
  atomicWeights: ReadonlyMap<string, number>,
): ConvertedLevel {
  const molar = MOLAR[level.unit];
  if (molar !== undefined) {
    if (level.as !== undefined)
      return { kind: "fault", field: "as", expected: `no "as" beside ${level.unit}: it counts the ion itself` };
    return { kind: "converted", molPerL: level.value * molar * form.componentsPerFormula, note: null };
  }
  const gramsPerL = level.value * (MASS[level.unit] ?? Number.NaN);
  if (level.as === undefined)
    return { kind: "converted", molPerL: (gramsPerL / form.molarMassGPerMol) * form.componentsPerFormula, note: null };
  const formula = readFormula(level.as, atomicWeights);
  if (formula === null) return { kind: "fault", field: "as", expected: 'a chemical formula, such as "CaCO3"' };
  const formulasMolPerL = gramsPerL / formulaMassGPerMol(formula, atomicWeights);
  const shared = componentsPer(formula, form, atomicWeights);
  if (shared !== null)
    return { kind: "converted", molPerL: formulasMolPerL * shared, note: alkalinityNote(level.as, form) };
  if (DIVALENT_EQUIVALENTS.has(level.as) && Math.abs(form.charge) === 2)
    return { kind: "converted", molPerL: formulasMolPerL * form.componentsPerFormula, note: null };
  return {
    kind: "fault",
    field: "as",
    expected: `a formula that holds ${elementsOf(form, atomicWeights).join(" or ") || `no other thing: ${form.spelling} is counted as itself`}`,
  };
}

/** How many of the component one formula unit brings, by the first element they share that is not oxygen or hydrogen; null when they share none. */
function componentsPer(
  formula: ReadonlyMap<string, number>,
  form: ComponentForm,
  atomicWeights: ReadonlyMap<string, number>,
): number | null {
  const own = readFormula(withoutCharge(form), atomicWeights);
  const element = elementsOf(form, atomicWeights).find((symbol) => formula.has(symbol));
  if (own === null || element === undefined) return null;
  return ((formula.get(element) ?? 0) / (own.get(element) ?? 1)) * form.componentsPerFormula;
}

function elementsOf(form: ComponentForm, atomicWeights: ReadonlyMap<string, number>): readonly string[] {
  const own = readFormula(withoutCharge(form), atomicWeights);
  return own === null ? [] : [...own.keys()].filter((symbol) => symbol !== "O" && symbol !== "H");
}

/** "SO4^2-" -> "SO4", "Zn2+" -> "Zn", "NO3-" -> "NO3": the figure before the sign is the charge only where the charge is not one. */
function withoutCharge(form: ComponentForm): string {
  const [formula = "", caret] = form.spelling.split("^");
  if (caret !== undefined) return formula;
  return formula.replace(Math.abs(form.charge) > 1 ? /\d*[+-]$/ : /[+-]$/, "");
}

function alkalinityNote(as: string, form: ComponentForm): string | null {
  if (as !== "CaCO3" || form.spelling !== "HCO3-") return null;
  return "HCO3- given as CaCO3 was read as one carbonate per CaCO3; alkalinity as CaCO3 would be two HCO3- per CaCO3.";
}
