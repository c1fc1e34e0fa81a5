import { bufferCapacity, bufferModel, pHDrop } from "../chemistry/buffer.ts";
import type { BufferRecord, Knowledge } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { vesselSample } from "./solution.ts";
import type { VesselState } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/** How a buffer stands up to the protons that its titration sets free. */
export interface BufferStrain {
  readonly capacityMolPerLPerPH: number;
  readonly pHDrop: number;
}

/** Charge of the anion that the bottle of a titrant holds: complexones are made up as disodium salts (common practice). */
const CHARGE_IN_BOTTLE = -2;

/**
 * Protons set free from the start of a titration to its end point at constant pH, mol/L of the vessel at the end point; negative where
 * protons are bound. What the species of the vessel hold at the start and what comes with a complexone from the burette, less what they
 * hold at the end.
 */
export function protonsFreed(evaluation: StageEvaluation, knowledge: Knowledge): number {
  const { model } = evaluation;
  const endL = evaluation.endPointML / 1000;
  const held = (state: VesselState): number =>
    model.system.rows.reduce((sum, { components }, row) => {
      const protons = components["H+"] ?? 0;
      const water = Object.keys(components).every((id) => id === "H+");
      return protons === 0 || water ? sum : sum + protons * state.result.species(row);
    }, 0);
  const titrant = knowledge.components.get(model.burette.component);
  const protonsInBottle = titrant?.kind === "ligand" ? Math.max(0, CHARGE_IN_BOTTLE - titrant.charge) : 0;
  const endVolumeL = model.volumeL + endL;
  const before = held(model.at(0)) * model.volumeL + protonsInBottle * model.burette.molPerL * endL;
  return before / endVolumeL - held(model.at(endL));
}

/** Capacity of the buffer at the pH of a titration that converged, and how far the freed protons bring that pH down. */
export function bufferStrain(
  evaluation: StageEvaluation,
  temperatureC: number,
  knowledge: Knowledge,
): BufferStrain | null {
  const { model } = evaluation;
  const buffer = knowledge.buffers.get(model.plan.buffer.id);
  if (buffer === undefined) return null;
  const { ionicStrengthMolPerL } = model;
  const chemistry = bufferModel(knowledge, buffer, { ionicStrengthMolPerL, temperatureC });
  const { pH } = model.plan;
  const molPerL = (model.plan.buffer.molPerL * model.volumeL) / (model.volumeL + evaluation.endPointML / 1000);
  return {
    capacityMolPerLPerPH: bufferCapacity(chemistry, molPerL, pH),
    pHDrop: pHDrop(chemistry, molPerL, pH, protonsFreed(evaluation, knowledge)),
  };
}

/** A fall of the pH by 0.2 is borne while titrating (common practice); a little less, for it falls faster the further it goes. */
const BORNE_PH_DROP = 0.18;

/** The least of its usual amounts with which a buffer holds the pH while the analyte sets two protons free for each titrant (mol/L). */
export function leastBuffer(task: Task, plan: StagePlan, buffer: BufferRecord, knowledge: Knowledge): number {
  const analyte = vesselSample(task, plan)
    .filter((c) => plan.determines.includes(c.component))
    .reduce((sum, c) => sum + c.inVesselMolPerL, 0);
  const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: task.temperatureC };
  const capacityPerMol = bufferCapacity(bufferModel(knowledge, buffer, conditions), 1, plan.pH);
  const needed = (2 * analyte) / (BORNE_PH_DROP * capacityPerMol);
  const [least, most] = buffer.usualMolPerL;
  return Number(Math.min(most, Math.max(least, needed)).toPrecision(2));
}
