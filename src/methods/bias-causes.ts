import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { LedgerLine } from "./account.ts";
import { ALSO_PRECIPITATED, LEFT_BEHIND } from "./detour-account.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { bufferStrain } from "./protons.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import { calibrationOf, leftOf } from "./standardise.ts";
import type { Task } from "./types.ts";

/** What shifts a result. */
export type CauseKind =
  | "end-point"
  | "interferent"
  | "incomplete-masking"
  | "analyte-lost"
  | "analyte-held"
  | "back-titrant-displacement"
  | "indicator-consumption"
  | "carbonate"
  | "buffer-drift";

/** One cause of a bias; fractions relative to the amount present. */
export interface BiasCause {
  readonly kind: CauseKind;
  readonly source: string;
  /** The agent that leaves this much of an ion it masks. */
  readonly by: string | null;
  readonly fraction: number; // after what cancels by standardising alike
  readonly uncancelledFraction: number;
}

type Line = Omit<BiasCause, "fraction" | "uncancelledFraction"> & { readonly fraction: number };

/** Below this part of the result a cause is not worth a line. */
const LEAST_LINE = 1e-7;
/** A fall of the pH below this changes no figure. */
const LEAST_DROP = 0.005;

const CARBONATE = "carbonate";

/**
 * The bias of a titration by its causes, both as it is in the titration and as it counts when standardised alike. Each is a line of the
 * balance of titrant and analyte at the end point, so it is what switching the cause off in the same solution would take away (to
 * first order), and the lines add up to the bias. The buffer's drift has no line in a balance: it is switched off in a second
 * evaluation, at the pH from which the freed protons brought the solution to that of the plan.
 */
export function biasCauses(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): BiasCause[] {
  if (evaluation.status === "failed") return [];
  const standard = calibrationOf(task, evaluation, knowledge);
  const own = linesOf(evaluation, knowledge);
  const taken = standard ? linesOf(standard.alone, knowledge) : [];
  const amount = (lines: readonly Line[], source: string): number =>
    lines.filter((l) => l.source === source).reduce((sum, l) => sum + l.fraction, 0);
  const bySource = new Map([...taken, ...own].map((line) => [line.source, line]));
  const causes = [...bySource.values()].map((line): BiasCause => {
    const uncancelledFraction = amount(own, line.source);
    return {
      ...line,
      uncancelledFraction,
      fraction: standard ? leftOf(standard, uncancelledFraction, amount(taken, line.source)) : uncancelledFraction,
    };
  });
  const drift = bufferDrift(task, evaluation, knowledge);
  return (drift ? withDrift(causes, drift) : causes).filter(
    (c) => Math.max(Math.abs(c.fraction), Math.abs(c.uncancelledFraction)) > LEAST_LINE,
  );
}

/** The drift acts through where the end point lies: what it does is taken out of that line. */
const withDrift = (causes: readonly BiasCause[], drift: BiasCause): BiasCause[] => [
  ...causes.map((c) =>
    c.kind === "end-point"
      ? {
          ...c,
          fraction: c.fraction - drift.fraction,
          uncancelledFraction: c.uncancelledFraction - drift.uncancelledFraction,
        }
      : c,
  ),
  drift,
];

/** The pH of a plan is that at the end point; had no proton been set free it would have stayed where it started. */
function bufferDrift(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): BiasCause | null {
  const { plan } = evaluation.model;
  if (plan.release !== null || plan.detour !== null) return null;
  const drop = bufferStrain(evaluation, task.temperatureC, knowledge)?.pHDrop ?? 0;
  if (!(Math.abs(drop) >= LEAST_DROP)) return null;
  const still = evaluate(task, { ...plan, pH: plan.pH + Number(drop.toFixed(3)) }, knowledge);
  if (still.status === "failed") return null;
  return {
    kind: "buffer-drift",
    source: "buffer drift",
    by: null,
    fraction: evaluation.biasFraction - still.biasFraction,
    uncancelledFraction: evaluation.uncancelledBiasFraction - still.uncancelledBiasFraction,
  };
}

/** The account of a titration, with the line of the end point parted further; adds up to the bias before anything cancels. */
function linesOf(evaluation: StageEvaluation, knowledge: Knowledge): Line[] {
  const { model, ledger, uncancelledBiasFraction } = evaluation;
  const counted = ledger.filter((l) => l.source !== "standardised alike" && l.source !== "end-point");
  const lines = [
    ...counted.map((line) => named(line, evaluation, knowledge)),
    ...(model.solution.way || model.plan.release ? [] : partsOfEndPoint(evaluation)),
  ];
  const rest = uncancelledBiasFraction - lines.reduce((sum, l) => sum + l.fraction, 0);
  return [{ kind: "end-point", source: "end-point", by: null, fraction: rest }, ...lines];
}

/** A line of the account under the name of its cause. */
function named({ source, fraction }: LedgerLine, { model }: StageEvaluation, knowledge: Knowledge): Line {
  const line = (kind: CauseKind, by: string | null = null): Line => ({ kind, source, by, fraction });
  if (source === LEFT_BEHIND) return line("analyte-lost");
  if (source.startsWith(ALSO_PRECIPITATED)) return line("interferent");
  const solid = /^lost as (.*)$/.exec(source)?.[1];
  if (solid !== undefined) return line(ofCarbonate(solid, knowledge) ? "carbonate" : "analyte-lost");
  if (!model.metals.includes(source) && / not (bound|freed)|: /.test(source)) return line("analyte-held");
  const { plan, solution } = model;
  const from = solution.converted.find((c) => c.to === source);
  const mask = plan.masking.find((m) => m.masks.includes(from?.from ?? source));
  return mask ? line("incomplete-masking", mask.agent) : line("interferent");
}

const ofCarbonate = (solid: string, knowledge: Knowledge): boolean =>
  (knowledge.solids.find((s) => s.id === solid)?.components[CARBONATE] ?? 0) > 0;

/** What of the end point's line is dye, ligands that hold the analyte, deposits and the back titrant: the rest is where the observer stops. */
function partsOfEndPoint(evaluation: StageEvaluation): Line[] {
  const { model, presentMol, endPointML } = evaluation;
  const { plan } = model;
  const volumeL = endPointML / 1000;
  const end = model.at(volumeL);
  const vesselL = model.volumeL + volumeL;
  const determined = new Set(plan.determines);
  const own = [...determined, plan.chelate?.metal, plan.backTitrant?.id].filter((m) => m !== undefined);
  const onDye = [...new Set(own)].reduce((sum, m) => sum + end.onDye(m), 0);
  const lines: Line[] = [];
  const add = (kind: CauseKind, source: string, mol: number): void => {
    if (Math.abs(mol / presentMol) > LEAST_LINE) lines.push({ kind, source, by: null, fraction: -mol / presentMol });
  };
  add("indicator-consumption", "indicator consumption", onDye * vesselL);
  const dyeId = model.dyeBasis.dye;
  if (plan.backTitrant === null) addHeld(add, heldByLigands(model, end, determined, dyeId), vesselL);
  else {
    // What the excess left unbound is held; what the back titrant sets free besides is its own doing.
    const start = model.at(0);
    addHeld(add, heldByLigands(model, start, determined, dyeId), model.volumeL);
    const unbound = (state: VesselState): number =>
      [...determined].reduce((sum, m) => sum + state.unbound(m) - state.onDye(m), 0);
    add(
      "back-titrant-displacement",
      `displaced by ${plan.backTitrant.id}`,
      unbound(end) * vesselL - unbound(start) * model.volumeL,
    );
  }
  model.system.solids.forEach((solid, i) => {
    const metals = [...determined].reduce((sum, m) => sum + (solid.components[m] ?? 0), 0);
    const kind = (solid.components[CARBONATE] ?? 0) > 0 ? "carbonate" : "analyte-lost";
    add(kind, `lying as ${solid.id}`, metals * (end.result.solidsMolPerL[i] ?? 0) * vesselL);
  });
  return lines;
}

type Add = (kind: CauseKind, source: string, mol: number) => void;

function addHeld(add: Add, held: ReadonlyMap<string, number>, litres: number): void {
  for (const [key, molPerL] of held) {
    const kind = key.endsWith(` ${CARBONATE}`) ? "carbonate" : "analyte-held";
    add(kind, key, molPerL * litres);
  }
}

/** Analyte in species without titrant and dye, mol/L, by the ligand that holds it; the free ion and its hydroxo complexes are held by none. */
function heldByLigands(
  model: StageModel,
  state: VesselState,
  determined: ReadonlySet<ComponentId>,
  dye: ComponentId | null,
): ReadonlyMap<string, number> {
  const held = new Map<string, number>();
  model.system.species.forEach(({ components }, row) => {
    const ids = Object.keys(components);
    if (ids.includes(model.plan.titrant.id) || (dye !== null && ids.includes(dye))) return;
    const ligand = ids.find((id) => id !== "H+" && !model.metals.includes(id));
    if (ligand === undefined) return;
    for (const metal of ids)
      if (determined.has(metal)) {
        const key = `${metal} held by ${ligand}`;
        held.set(key, (held.get(key) ?? 0) + components[metal]! * state.result.species(row));
      }
  });
  return held;
}
