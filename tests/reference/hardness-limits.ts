/**
 * Tolerance limits beside the published interference limits of water hardness methods, component by component:
 * `node --import tsx tests/reference/hardness-limits.ts` prints the table.
 */
import { readFileSync } from "node:fs";
import { loadKnowledge } from "../../src/constants/index.ts";
import type { Knowledge } from "../../src/constants/knowledge.ts";
import { alsoMasked } from "../../src/methods/also-masked.ts";
import { evaluate } from "../../src/methods/evaluate.ts";
import { toleranceLimits, withLevel, type ToleranceLimit } from "../../src/methods/tolerance.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";

/** A published limit; `mgPerL` null: the ion is said to be titrated as hardness, and no limit is given. */
export interface PublishedLimit {
  readonly method: string;
  readonly inhibitor: "none" | "cyanide" | "sulfide" | "triethanolamine";
  readonly ion: string;
  readonly mgPerL: number | null;
  /** True where the print says "over" this level. */
  readonly atLeast?: true;
  readonly basis: "read" | "memory";
  /** Why ours and theirs part by more than a factor of 5. */
  readonly reason?: string;
}

/** A published limit with ours beside it. */
export interface ComparedLimit extends PublishedLimit {
  readonly ours: ToleranceLimit;
  readonly oursMgPerL: number;
  /** The same by the calculation alone, as if no level stood in any record of a mask. */
  readonly calculatedMgPerL: number;
  /** Ours over theirs; null where they give none. */
  readonly ratio: number | null;
  readonly calculatedRatio: number | null;
  /** Share of a little of the ion that is counted as hardness. */
  readonly titratedFraction: number | null;
}

export const PUBLISHED = JSON.parse(
  readFileSync(new URL("hardness-limits.json", import.meta.url), "utf8"),
) as readonly PublishedLimit[];

/** Beyond this, either way, a reason is asked for. */
export const RATIO_WITHOUT_REASON = 5;

const MG_PER_MMOL: Readonly<Record<string, number>> = {
  "Al3+": 26.982,
  "Ba2+": 137.33,
  "Cd2+": 112.41,
  "Co2+": 58.933,
  "Cu2+": 63.546,
  "Fe3+": 55.845,
  "Mn2+": 54.938,
  "Ni2+": 58.693,
  "Pb2+": 207.2,
  "Sr2+": 87.62,
  "Zn2+": 65.38,
  "Cl-": 35.453,
  "SO4^2-": 96.06,
  "PO4^3-": 94.971,
};

/** Inhibitors as the methods add them, mol/L of the vessel: 250 mg NaCN, or 1 mL of 5 % Na2S nonahydrate, in 50 mL (memory). */
const INHIBITOR_MOL_PER_L = { cyanide: 0.1, sulfide: 0.0042, triethanolamine: 0.1 } as const;

/** A water of 200 mg/L as CaCO3, three quarters of it calcium; 25 mL made up to 50 mL, 2 % asked for (invented). */
const WATER: Task = {
  title: "An invented water of 200 mg/L hardness",
  analytes: [
    { component: "Ca2+", shown: "Ca2+", molPerL: 0.0015, protonsPerComponent: 0, report: "sum" },
    { component: "Mg2+", shown: "Mg2+", molPerL: 0.0005, protonsPerComponent: 0, report: "sum" },
  ],
  matrix: [],
  portion: { volumeML: 25, titrationVolumeML: 50 },
  requirementPercent: 2,
  laboratory: { avoid: [], available: null, detection: ["visual"], heating: true, buretteML: 25 },
  temperatureC: 25,
  notes: [],
};

/** The titration that the methods share: 0.01 mol/L EDTA, ammonia buffer of pH 10, mordant black 11 (calmagite in NEMI 4725). */
function plan({ method, inhibitor }: PublishedLimit, knowledge: Knowledge): StagePlan {
  const indicator = method === "NEMI 4725" ? "calmagite" : "mordant-black-11";
  return {
    determines: ["Ca2+", "Mg2+"],
    mode: "direct",
    titrant: { id: "EDTA", molPerL: 0.01 },
    backTitrant: null,
    pH: 10,
    buffer: { id: "ammonia", molPerL: 0.1 },
    detection: "visual",
    indicator: { id: indicator, molPerL: knowledge.indicators.get(indicator)!.usualMolPerL },
    masking:
      inhibitor === "none"
        ? []
        : [
            {
              agent: inhibitor,
              masks: [],
              via: inhibitor === "sulfide" ? "precipitation" : "complexation",
              molPerL: INHIBITOR_MOL_PER_L[inhibitor],
              basis: "equilibrium",
            },
          ],
    auxiliary: [],
    added: [],
    preparation: [],
    removed: [],
    chelate: null,
    excessTitrantMolPerL: 0,
    carried: null,
    electrode: null,
    detour: null,
    release: null,
    demasked: null,
  };
}

const componentOf = (ion: string, knowledge: Knowledge): string =>
  [...knowledge.components.values()].find((c) => c.id === ion || c.forms.some((f) => f.spelling === ion))!.id;

/** What else is diluted to: a portion of 50 mL and the reagents (memory). */
const PORTION: Readonly<Record<string, Task["portion"]>> = { "ISO 6059": { volumeML: 50, titrationVolumeML: 55 } };

/** Every published limit with ours beside it. */
export function comparedLimits(knowledge: Knowledge = loadKnowledge()): ComparedLimit[] {
  const unrecorded = { ...knowledge, masking: knowledge.masking.map((r) => ({ ...r, upToMolPerL: null })) };
  return PUBLISHED.map((row) => {
    const component = componentOf(row.ion, knowledge);
    const water = { ...WATER, portion: PORTION[row.method] ?? WATER.portion };
    const own = alsoMasked(plan(row, knowledge), component, knowledge);
    const limit = (by: Knowledge): ToleranceLimit =>
      toleranceLimits(water, { mode: "direct", stages: [{ plan: own }] }, by, [component])[0]!;
    const mgPerL = ({ limitMolPerL }: ToleranceLimit): number => 1000 * limitMolPerL * MG_PER_MMOL[row.ion]!;
    const ours = limit(knowledge);
    const calculated = ours.endsBy === "empirical-record" ? limit(unrecorded) : ours;
    const over = (molPerL: ToleranceLimit): number | null =>
      row.mgPerL === null ? null : mgPerL(molPerL) / row.mgPerL;
    return {
      ...row,
      ours,
      oursMgPerL: mgPerL(ours),
      calculatedMgPerL: mgPerL(calculated),
      ratio: over(ours),
      calculatedRatio: over(calculated),
      titratedFraction: evaluate(withLevel(water, component, 1e-6), own, knowledge).titrated.get(component) ?? null,
    };
  });
}

const short = (x: number): string => String(Number(x.toPrecision(2)));

/** One line of the table. */
export function lineOf(row: ComparedLimit): string {
  const { method, inhibitor, ion, mgPerL, atLeast, basis, ours, ratio, calculatedRatio } = row;
  const published = mgPerL === null ? "titrated as hardness" : `${atLeast ? "over " : ""}${mgPerL} mg/L`;
  const mine =
    ours.endsBy === "none" ? `over ${Math.round(row.oursMgPerL)}` : String(Number(row.oursMgPerL.toPrecision(3)));
  const recorded = ours.endsBy === "empirical-record";
  return [
    `${method} with ${inhibitor === "none" ? "no inhibitor" : inhibitor}, ${ion}: published ${published} (${basis}), ours ${mine} mg/L (${ours.endsBy})`,
    ...(ratio === null ? [] : [`ratio ${short(ratio)}`]),
    ...(recorded ? [`by calculation alone ${short(row.calculatedMgPerL)} mg/L`] : []),
    ...(recorded && calculatedRatio !== null ? [`ratio ${short(calculatedRatio)}`] : []),
  ].join(", ");
}

if (process.argv[1]?.endsWith("hardness-limits.ts"))
  for (const row of comparedLimits()) console.log(`${lineOf(row)}${row.reason ? `\n    ${row.reason}` : ""}`);
