import type { FieldFault } from "../form/form-to-brief.ts";
import { readDecimal } from "../form/decimal.ts";

/** The two calculators as typed in their address: every field text, so that a question can be linked. */
export interface CalculatorForm {
  readonly rows: readonly { readonly component: string; readonly amount: string; readonly how: "total" | "free" }[];
  readonly pH: string;
  readonly ionicStrength: string;
  readonly temperatureC: string;
  readonly solids: "yes" | "no";
  readonly sampleML: string;
  readonly titrant: string;
  readonly titrantMolPerL: string;
  readonly follow: string;
  readonly upToML: string;
}

type Query = Readonly<Record<string, unknown>>;
const BLANK = { component: "", amount: "", how: "total" } as const;
/** How many points a curve is drawn from. */
const CURVE_POINTS = 121;

/** Reads a calculator's fields from its address; `defaults` fill what is absent. Two blank rows are always left at the end. */
export function calculatorForm(query: Query, defaults: Omit<CalculatorForm, "rows">): CalculatorForm {
  const texts = (name: string): readonly string[] => {
    const value = query[name];
    return [value].flat().filter((v): v is string => typeof v === "string");
  };
  const one = (name: keyof typeof defaults): string => texts(name)[0] ?? defaults[name];
  const [components, amounts, how] = [texts("component"), texts("amount"), texts("how")];
  const rows = components
    .slice(0, 30)
    .map((component, i) => ({
      component,
      amount: amounts[i] ?? "",
      how: how[i] === "free" ? ("free" as const) : ("total" as const),
    }))
    .filter((row) => row.component.trim() !== "" || row.amount.trim() !== "");
  return {
    rows: [...rows, BLANK, BLANK],
    pH: one("pH"),
    ionicStrength: one("ionicStrength"),
    temperatureC: one("temperatureC"),
    solids: one("solids") === "no" ? "no" : "yes",
    sampleML: one("sampleML"),
    titrant: one("titrant"),
    titrantMolPerL: one("titrantMolPerL"),
    follow: one("follow"),
    upToML: one("upToML"),
  };
}

export type Question =
  | { readonly ok: true; readonly question: Readonly<Record<string, unknown>> }
  | { readonly ok: false; readonly faults: readonly FieldFault[] };

/** The question the fields ask of a calculator, in the shape of the contract, or what is wrong with them. */
export function questionOf(form: CalculatorForm, kind: "equilibrium" | "curve"): Question {
  const faults: FieldFault[] = [];
  const number = (field: string, typed: string): number => {
    const reading = readDecimal(typed);
    if (reading.ok) return reading.value;
    faults.push({ field, message: reading.message });
    return Number.NaN;
  };
  const totals: Record<string, number> = {};
  const free: Record<string, number> = {};
  form.rows.forEach((row, i) => {
    const name = row.component.trim();
    if (name === "" && row.amount.trim() === "") return;
    if (name === "") faults.push({ field: `row[${i}]`, message: "name the component" });
    const into = row.how === "free" ? free : totals;
    if (name in into) faults.push({ field: `row[${i}]`, message: `${name} stands in two rows` });
    into[name] = number(`row[${i}]`, row.amount);
  });
  if (Object.keys(totals).length === 0)
    faults.push({ field: "row[0]", message: "name at least one component with its total" });
  const common = {
    pH: number("pH", form.pH),
    temperatureC: number("temperatureC", form.temperatureC),
    ionicStrengthMolPerL:
      form.ionicStrength.trim() === "" || form.ionicStrength.trim() === "auto"
        ? "auto"
        : number("ionicStrength", form.ionicStrength),
    solids: form.solids === "yes",
    ...(Object.keys(free).length > 0 ? { free } : {}),
  };
  if (kind === "equilibrium")
    return faults.length > 0 ? { ok: false, faults } : { ok: true, question: { ...common, totals } };
  const upTo = number("upToML", form.upToML);
  const curve = {
    ...common,
    sample: { volumeML: number("sampleML", form.sampleML), totals },
    titrant: { id: form.titrant.trim(), molPerL: number("titrantMolPerL", form.titrantMolPerL) },
    follow: form.follow.trim(),
    volumesML: Array.from({ length: CURVE_POINTS }, (_, i) =>
      Number(((upTo * i) / (CURVE_POINTS - 1)).toPrecision(12)),
    ),
  };
  if (curve.titrant.id === "") faults.push({ field: "titrant", message: "name the titrant" });
  if (curve.follow === "") faults.push({ field: "follow", message: "name the ion to follow" });
  return faults.length > 0 ? { ok: false, faults } : { ok: true, question: curve };
}
