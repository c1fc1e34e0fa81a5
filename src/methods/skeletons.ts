import type { BufferRecord, ComponentId, IndicatorRecord, IndicatorUse, Knowledge } from "../constants/knowledge.ts";
import { bufferAmount, buffersFor, pHOfUsualBuffer, strengthFor } from "./buffers.ts";
import { benchPH, standingOf, usesFor, type UseStanding, type Window } from "./dye-uses.ts";
import { metalKinetics } from "./kinetics.ts";
import { stepAllowed, type Shelf } from "./shelf.ts";
import { vesselSample } from "./solution.ts";
import type { StagePlan, Task } from "./types.ts";

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

const BUFFERS_KEPT = 1;

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

/** Chelate over the analyte, by amount, where the analyte is to set its metal free: a fifth more than it can take (common practice). */
const CHELATE_IN_BULK = 1.2;

/** The same titration with the chelate in bulk: the analyte takes the titrant from it, and the end point is that of the chelate's metal. */
function displacing({ task, determines }: Make, plan: StagePlan): StagePlan {
  const analyteMolPerL = vesselSample(task)
    .filter((c) => determines.includes(c.component))
    .reduce((sum, c) => sum + c.inVesselMolPerL, 0);
  const molPerL = Number((CHELATE_IN_BULK * analyteMolPerL).toPrecision(2));
  return { ...plan, mode: "displacement", chelate: plan.chelate && { ...plan.chelate, molPerL } };
}

/** Whether a step asks for what the laboratory cannot or will not give: heat, a chelate, alcohol. */
export const forbidden = (task: Task, preparation: readonly string[]): boolean =>
  preparation.some((p) => !stepAllowed(task, p)) ||
  (!task.laboratory.heating && preparation.some((p) => p === "warm" || p === "heat" || p === "boil"));

/** At which pH of a window, and in which buffers: the middle; and, with the usual titrant, where a usual buffer holds if none does there. */
function buffered(
  { knowledge, shelf }: Make,
  window: Window,
  usualTitrant: boolean,
): { readonly pH: number; readonly buffer: BufferRecord }[] {
  const middle = benchPH(window);
  const beside = usualTitrant ? pHOfUsualBuffer(middle, window, knowledge, shelf) : null;
  const at = (pH: number, kept: number): { pH: number; buffer: BufferRecord }[] =>
    buffersFor(pH, knowledge, shelf, new Set())
      .slice(0, kept)
      .map((buffer) => ({ pH, buffer }));
  return [...at(middle, usualTitrant ? BUFFERS_KEPT : 1), ...(beside === null ? [] : at(beside, 1))];
}

/** Direct titrations, also with a chelate that lends the dye its metal. */
export function directSkeletons(make: Make): Skeleton[] {
  const { task, knowledge, shelf, determines, field } = make;
  const out: Skeleton[] = [];
  for (const indicator of knowledge.indicators.values()) {
    if (field.dyes && !field.dyes.has(indicator.id)) continue;
    const madeUp =
      indicator.id === "Cu-PAN" &&
      shelf("PAN") &&
      task.laboratory.available === null &&
      !task.laboratory.avoid.includes("Cu-PAN");
    if (!shelf(indicator.id) && !madeUp) continue;
    for (const { window, use, basis } of usesFor(indicator, determines, ["direct", "displacement"])) {
      // A use that names its titrant belongs to the first round: EGTA with zincon is not a variant of EDTA.
      const named = use.titrant ? (field.titrants.includes("EDTA") ? [use.titrant] : []) : field.titrants;
      // A chelate lends its metal to the dye because the titrant takes it back: it is the chelate of the titrant itself.
      const lent = use.chelate ?? (indicator.id === "Cu-PAN" ? "Cu-EDTA" : null);
      const titrants = named.filter((t) => lent === null || lent.endsWith(`-${t}`));
      for (const titrant of titrants) {
        if (!shelf(titrant)) continue;
        for (const { pH, buffer } of buffered(make, window, titrant === "EDTA" || use.titrant !== undefined)) {
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
          const standing = {
            use: standingOf(use),
            useBasis: basis,
            useConfidence: use.provenance.confidence,
            window,
          };
          out.push({ plan, ...standing });
          if (use.chelate && use.chelate !== "Cu-EDTA") out.push({ plan: displacing(make, plan), ...standing });
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
