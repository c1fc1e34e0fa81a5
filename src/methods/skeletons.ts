import type { BufferRecord, ComponentId, IndicatorRecord, IndicatorUse, Knowledge } from "../constants/knowledge.ts";
import { metalKinetics } from "./kinetics.ts";
import { stepAllowed, type Shelf } from "./shelf.ts";
import { vesselSample } from "./solution.ts";
import type { StagePlan, Task } from "./types.ts";

/** How firmly the dye's use for these ions in this mode at this pH is on record. */
export type UseStanding = "published" | "analogous" | "none";

/** A titration before masking: everything decided but what to do about the matrix. */
export interface Skeleton {
  readonly plan: StagePlan;
  readonly use: UseStanding;
  readonly useBasis: "read" | "memory" | "none";
  /** How firmly the record of that use is known; absent where no record stands behind it. */
  readonly useConfidence?: IndicatorUse["provenance"]["confidence"];
  /** pH window of that use. */
  readonly window: readonly [number, number];
}

export type Window = readonly [number, number];
export const overlap = (a: Window, b: Window): Window | null => {
  const low = Math.max(a[0], b[0]);
  const high = Math.min(a[1], b[1]);
  return high - low >= -1e-9 ? [low, high] : null;
};

/** The pH a bench would set inside a window: a half unit near the middle if there is one, else a tenth. */
export function benchPH(window: Window): number {
  const middle = (window[0] + window[1]) / 2;
  const half = Math.round(middle * 2 - 0.01) / 2; // a tie goes to the lower: pH 10, not 10.5
  const inner = (window[1] - window[0]) / 4;
  if (half >= window[0] + inner / 2 && half <= window[1] - inner / 2) return half;
  return Math.round(middle * 10) / 10;
}

/** A use that only one recollection knows stands no firmer than an analogy. */
export const standingOf = (use: IndicatorUse): UseStanding =>
  use.detail.includes("second recollection only") ? "analogous" : "published";

export interface DyeUse {
  readonly window: Window;
  readonly use: IndicatorUse;
  readonly basis: "read" | "memory";
}

const basisOf = (use: IndicatorUse): "read" | "memory" => (use.provenance.basis === "read" ? "read" : "memory");

/** pH windows in which the dye is in use for all of `ions` in this mode (one record for all, or one for each, overlapping). */
export function usesFor(indicator: IndicatorRecord, ions: readonly ComponentId[], modes: readonly string[]): DyeUse[] {
  const rows = indicator.uses.filter((u) => modes.includes(u.mode));
  const whole = rows.filter(
    (u) => ions.every((ion) => u.ions.includes(ion)) && u.ions.length <= ions.length + (ions.length > 1 ? 1 : 0),
  );
  const out: DyeUse[] = whole.map((use) => ({ window: use.pH, use, basis: basisOf(use) }));
  if (ions.length > 1 && out.length === 0) {
    let windows: DyeUse[] = rows
      .filter((u) => u.ions.includes(ions[0]!))
      .map((use) => ({ window: use.pH, use, basis: basisOf(use) }));
    for (const ion of ions.slice(1))
      windows = windows.flatMap((w) =>
        rows
          .filter((u) => u.ions.includes(ion))
          .flatMap((u) => {
            const window = overlap(w.window, u.pH);
            return window ? [{ window, use: w.use, basis: w.basis }] : [];
          }),
      );
    out.push(...windows);
  }
  // The same window recalled twice is one use; the wider of nearly equal ones stays.
  const kept: DyeUse[] = [];
  for (const u of out.sort(
    (a, b) => b.window[1] - b.window[0] - (a.window[1] - a.window[0]) || (a.basis === "read" ? -1 : 1),
  )) {
    const same = kept.find(
      (k) =>
        (k.use.titrant ?? "") === (u.use.titrant ?? "") &&
        k.use.chelate === u.use.chelate &&
        Math.abs(benchPH(k.window) - benchPH(u.window)) < 0.6,
    );
    if (!same) kept.push(u);
  }
  return kept;
}

const BUFFERS_KEPT = 1;

/** Buffers that hold this pH, the best suited first: nearest pKa, on the shelf, not precipitating or disturbing by record. */
export function buffersFor(pH: number, knowledge: Knowledge, shelf: Shelf, blind: ReadonlySet<string>): BufferRecord[] {
  const distance = (b: BufferRecord): number => {
    if (b.kind !== "pair") return 0.2; // strong acid or alkali holds its own pH by amount
    return Math.min(...b.pKa.map((p) => Math.abs(p.value - pH)), 3);
  };
  return [...knowledge.buffers.values()]
    .filter((b) => shelf(b.id) && !blind.has(b.id) && pH >= b.workingPH[0] - 0.05 && pH <= b.workingPH[1] + 0.05)
    .sort((a, b) => rankOfBuffer(a) + distance(a) - (rankOfBuffer(b) + distance(b)));
}

/** Order of the bench among buffers of one pH, before chemistry is calculated (common practice): the usual ones go first. */
const BENCH_ORDER = [
  "ammonia",
  "hexamine",
  "acetate",
  "nitric-acid",
  "sodium-hydroxide",
  "chloroacetate",
  "potassium-hydroxide",
  "hydrochloric-acid",
  "glycine",
  "triethanolamine-buffer",
  "borate",
  "formate",
  "perchloric-acid",
  "diethylamine",
  "ethanolamine",
  "tris",
  "imidazole",
  "piperidine",
  "carbonate",
];
const rankOfBuffer = (b: BufferRecord): number => {
  const i = BENCH_ORDER.indexOf(b.id);
  return (i < 0 ? BENCH_ORDER.length : i) * 0.3;
};

/** Concentration a buffer is used at: the geometric middle of its usual range; strong acid and alkali as the pH demands. */
export function bufferAmount(buffer: BufferRecord, pH: number): number {
  if (buffer.kind === "strong-acid") return Number((10 ** -pH).toPrecision(2));
  if (buffer.kind === "strong-base") return Number((10 ** (pH - 13.8)).toPrecision(2));
  return Number(Math.sqrt(buffer.usualMolPerL[0] * buffer.usualMolPerL[1]).toPrecision(1));
}

/** Titrant strength for which the titre fills a good part of the burette. */
export function strengthFor(amountMol: number, strengths: readonly number[], buretteML: number): number {
  const titre = (c: number): number => (amountMol / c) * 1000;
  const good = [...strengths].sort((a, b) => a - b).filter((c) => titre(c) <= 0.92 * buretteML);
  // The weakest strength that still fits the burette gives the largest titre.
  return good[0] ?? Math.max(...strengths);
}

const EXCESS_OVER_BOUND = 1.4; // 30 to 50 % above what binds

/** Which part of the field is searched: the usual titrant first, then the others, then back titrations by analogy. */
export interface Field {
  readonly titrants: readonly string[];
  /** Only these dyes; null = all. */
  readonly dyes: ReadonlySet<string> | null;
  /** Also back titrations whose dye is on record for the back titrant, not for the analyte. */
  readonly analogous: boolean;
}

export const USUAL_FIELD: Field = { titrants: ["EDTA"], dyes: null, analogous: false };
/** Titrants that can win over EDTA by selectivity or strength; the rest serve only where EDTA is not to be had. */
export const OTHER_TITRANTS = ["CDTA", "DTPA", "EGTA"] as const;
export const LAST_TITRANTS = ["HEDTA", "NTA", "TTHA", "trien"] as const;

/** What skeletons are made from: the task, and what of the field is searched. */
export interface Make {
  readonly task: Task;
  readonly knowledge: Knowledge;
  readonly shelf: Shelf;
  readonly determines: readonly ComponentId[];
  readonly field: Field;
}

/** A direct titration before anything is done about the matrix; without a dye where the end is read otherwise. */
export function basePlan(
  make: Make,
  titrant: string,
  indicator: IndicatorRecord | null,
  pH: number,
  buffer: BufferRecord,
  use: IndicatorUse | null,
): StagePlan {
  const { task, knowledge, determines } = make;
  const amountMol = vesselSample(task)
    .filter((c) => determines.includes(c.component))
    .reduce((s, c) => s + (c.inVesselMolPerL * task.portion.titrationVolumeML) / 1000, 0);
  const strengths = knowledge.titrants.get(titrant)?.usualMolPerL ?? [0.01];
  const chelateId = use?.chelate ?? (indicator?.id === "Cu-PAN" ? "Cu-EDTA" : undefined);
  const chelate =
    chelateId && indicator
      ? chelateOf(chelateId, indicator.usualMolPerL, amountMol / (task.portion.titrationVolumeML / 1000))
      : null;
  const preparation: string[] = [];
  if (chelateId) preparation.push(`add-${chelateId}`);
  if (use?.temperature) preparation.push(use.temperature);
  if (use?.alcohol) preparation.push("alcohol");
  return {
    determines,
    mode: "direct",
    titrant: { id: titrant, molPerL: strengthFor(amountMol, strengths, task.laboratory.buretteML) },
    backTitrant: null,
    pH,
    buffer: { id: buffer.id, molPerL: bufferAmount(buffer, pH) },
    detection: "visual",
    indicator: indicator && { id: indicator.id, molPerL: indicator.usualMolPerL },
    masking: [],
    auxiliary: [],
    added: [],
    preparation,
    removed: [],
    chelate,
    excessTitrantMolPerL: 0,
    carried: null,
    electrode: null,
    detour: null,
    release: null,
    demasked: null,
  };
}

function chelateOf(
  id: "Mg-EDTA" | "Zn-EDTA" | "Zn-EGTA" | "Cu-EDTA",
  dyeMolPerL: number,
  analyteMolPerL: number,
): StagePlan["chelate"] {
  const [metal, ligand] = id.split("-") as [string, string];
  // Enough that the indicator metal stays ten times over the dye, and a few per cent of the analyte.
  const molPerL = Math.max(10 * dyeMolPerL, 0.05 * analyteMolPerL);
  return { metal: `${metal}2+`, ligand, molPerL: Number(molPerL.toPrecision(1)) };
}

/** Whether a step asks for what the laboratory cannot or will not give: heat, a chelate, alcohol. */
export const forbidden = (task: Task, preparation: readonly string[]): boolean =>
  preparation.some((p) => !stepAllowed(task, p)) ||
  (!task.laboratory.heating && preparation.some((p) => p === "warm" || p === "heat" || p === "boil"));

/** Direct titrations, also with a chelate that lends the dye its metal. */
export function directSkeletons(make: Make): Skeleton[] {
  const { task, knowledge, shelf, determines, field } = make;
  const out: Skeleton[] = [];
  for (const indicator of knowledge.indicators.values()) {
    if (field.dyes && !field.dyes.has(indicator.id)) continue;
    if (!shelf(indicator.id) && !(indicator.id === "Cu-PAN" && shelf("PAN") && task.laboratory.available === null))
      continue;
    for (const { window, use, basis } of usesFor(indicator, determines, ["direct", "displacement"])) {
      // A use that names its titrant belongs to the first round: EGTA with zincon is not a variant of EDTA.
      const named = use.titrant ? (field.titrants.includes("EDTA") ? [use.titrant] : []) : field.titrants;
      // A chelate lends its metal to the dye because the titrant takes it back: it is the chelate of the titrant itself.
      const lent = use.chelate ?? (indicator.id === "Cu-PAN" ? "Cu-EDTA" : null);
      const titrants = named.filter((t) => lent === null || lent.endsWith(`-${t}`));
      for (const titrant of titrants) {
        if (!shelf(titrant)) continue;
        const pH = benchPH(window);
        for (const buffer of buffersFor(pH, knowledge, shelf, new Set()).slice(
          0,
          titrant === "EDTA" || use.titrant ? BUFFERS_KEPT : 1,
        )) {
          let plan = basePlan(make, titrant, indicator, pH, buffer, use);
          const kinetics = determines.map((ion) => metalKinetics(knowledge, ion, titrant));
          // A slow metal is titrated directly only where the use itself is hot.
          if (
            kinetics.some((k) => k.class !== "fast") &&
            !plan.preparation.includes("boil") &&
            !plan.preparation.includes("heat")
          )
            continue;
          if (kinetics.some((k) => k.polymeric)) plan = { ...plan, preparation: ["depolymerise", ...plan.preparation] };
          if (forbidden(task, plan.preparation)) continue;
          if (use.auxiliaryAnyOf) {
            const agent = use.auxiliaryAnyOf.find((a) => shelf(a) && knowledge.agents.has(a));
            if (agent) plan = withAuxiliary(plan, knowledge, agent, `asked for by the use of ${indicator.name}`);
          }
          out.push({
            plan,
            use: standingOf(use),
            useBasis: basis,
            useConfidence: use.provenance.confidence,
            window,
          });
        }
      }
    }
  }
  return out;
}

export function withAuxiliary(plan: StagePlan, knowledge: Knowledge, agent: string, purpose: string): StagePlan {
  if (plan.auxiliary.some((a) => a.id === agent)) return plan;
  const molPerL = knowledge.agents.get(agent)?.usualMolPerL ?? 0.05;
  return { ...plan, auxiliary: [...plan.auxiliary, { id: agent, molPerL, purpose }] };
}

/** Back titrations: titrant in excess first, then a metal that the dye shows. */
export function backSkeletons(make: Make): Skeleton[] {
  const { task, knowledge, shelf, determines, field } = make;
  const out: Skeleton[] = [];
  for (const indicator of knowledge.indicators.values()) {
    // Cu-PAN lends PAN its copper; a back titration with copper brings it.
    if (indicator.id === "Cu-PAN" || !shelf(indicator.id) || (field.dyes && !field.dyes.has(indicator.id))) continue;
    const published = usesFor(indicator, determines, ["back"]);
    let byAnalogy = 0;
    for (const backTitrant of knowledge.metalTitrants.values()) {
      if (byAnalogy >= ANALOGIES_PER_DYE) break;
      if (!shelf(backTitrant.ion) || (determines.includes(backTitrant.ion) && determines.length > 1)) continue;
      const shown = indicator.uses.filter(
        (u) => u.mode === "direct" && u.ions.length === 1 && u.ions[0] === backTitrant.ion && !u.titrant,
      );
      const windows: { window: Window; standing: UseStanding; basis: "read" | "memory"; use: IndicatorUse }[] = [];
      for (const p of published)
        if (p.use.backTitrant === backTitrant.ion)
          windows.push({ window: p.window, standing: standingOf(p.use), basis: p.basis, use: p.use });
      for (const s of shown) {
        const named = published.filter((p) => p.use.backTitrant === undefined);
        for (const p of named) {
          const window = overlap(p.window, s.pH);
          if (window) windows.push({ window, standing: standingOf(p.use), basis: p.basis, use: p.use });
        }
        if (published.length === 0 && field.analogous && calculable(indicator, backTitrant.ion))
          windows.push({ window: s.pH, standing: "analogous", basis: basisOf(s), use: s });
      }
      const seen: number[] = [];
      for (const { window, standing, basis, use } of windows) {
        const pH = benchPH(window);
        if (seen.some((p) => Math.abs(p - pH) < 0.6)) continue;
        seen.push(pH);
        for (const titrant of field.titrants) {
          if (!shelf(titrant)) continue;
          const buffer = buffersFor(pH, knowledge, shelf, new Set())[0];
          if (!buffer) continue;
          const plan = backPlan(make, titrant, indicator, pH, buffer, backTitrant.ion, use);
          if (forbidden(task, plan.preparation)) continue;
          if (standing === "analogous") byAnalogy++;
          out.push({ plan, use: standing, useBasis: basis, useConfidence: use.provenance.confidence, window });
        }
      }
    }
  }
  return out;
}

/** Back titrants tried with one dye on no more than analogy. */
const ANALOGIES_PER_DYE = 2;

/** A back titration by analogy has to be calculable at least: the dye has constants, or a transition with the back titrant. */
export const calculable = (indicator: IndicatorRecord, metal: ComponentId): boolean =>
  indicator.hasConstants || indicator.transitions.some((t) => t.ion === metal);

/** A back titration with this metal: titrant in excess first, hot where the analyte is slow. */
export function backPlan(
  make: Make,
  titrant: string,
  indicator: IndicatorRecord | null,
  pH: number,
  buffer: BufferRecord,
  metal: ComponentId,
  use: IndicatorUse | null,
): StagePlan {
  const { task, knowledge, determines } = make;
  const direct = basePlan(make, titrant, indicator, pH, buffer, use);
  const kinetics = determines.map((ion) => metalKinetics(knowledge, ion, titrant));
  const preparation = [...(kinetics.some((k) => k.polymeric) ? ["depolymerise"] : []), "excess-titrant-first"];
  const needs = kinetics.map((k) => k.needs);
  if (needs.includes("boil")) preparation.push("boil", "cool");
  else if (needs.includes("heat")) preparation.push("heat", "cool");
  else if (needs.includes("wait")) preparation.push("wait");
  if (use?.temperature && !preparation.includes("boil") && !preparation.includes("heat"))
    preparation.push(use.temperature);
  if (use?.alcohol) preparation.push("alcohol");
  const analyteMolPerL = vesselSample(task)
    .filter((c) => determines.includes(c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  const strengths = knowledge.metalTitrants.get(metal)?.usualMolPerL ?? [0.01];
  return {
    ...direct,
    mode: "back",
    preparation,
    chelate: null,
    backTitrant: {
      id: metal,
      molPerL: strengths.includes(direct.titrant.molPerL) ? direct.titrant.molPerL : Math.min(...strengths),
    },
    excessTitrantMolPerL: EXCESS_OVER_BOUND * analyteMolPerL,
  };
}

/** Titrant in excess that the whole vessel needs: a good third above everything that binds, mol/L. */
export const excessFor = (boundMolPerL: number): number => Number((EXCESS_OVER_BOUND * boundMolPerL).toPrecision(3));
