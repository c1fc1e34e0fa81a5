import { bufferModel, pHDrop } from "../chemistry/buffer.ts";
import type { Knowledge } from "../constants/knowledge.ts";
import { type DevelopedStage } from "./develop.ts";
import { protonsFreed } from "./protons.ts";
import type { Task } from "./types.ts";
import type { WorkingRange } from "./working-range.ts";

/** An amount of a buffer, mol/L of the vessel, and how far the pH falls with it until the end point (negative: rises). */
export interface BufferLook {
  readonly molPerL: number;
  readonly pHDrop: number;
}

/** The amount of buffer that was chosen and what it was chosen over. */
export interface BufferChoice {
  readonly id: string;
  readonly chosen: BufferLook;
  readonly start: BufferLook;
  /** The next smaller usual amount, which does not hold the pH; null where there is none. */
  readonly less: BufferLook | null;
  /** Where the chosen amount costs the titration something: the planned one rounded to one figure, down before up. */
  readonly rounded: readonly BufferLook[];
}

/** What a bench makes a vessel up to, mol/L (common practice). */
const BENCH_AMOUNTS = [0.01, 0.02, 0.05, 0.1, 0.2, 0.5];
/** The pH may move by as much as it is uncertain by when it is set, */
const BORNE_PH_CHANGE = 0.1;
/** and nearer to the edge of the working range by half of what is left; never asked for less than this. */
const LEAST_PH_CHANGE = 0.03;
const PART_OF_ROOM = 0.5;
/** Where more buffer costs the titration something, or is more than a bench takes without need, so much is borne (common practice). */
export const MOST_PH_CHANGE = 0.2;
const WITHOUT_NEED_MOL_PER_L = 0.2;

/**
 * The least usual amount of the buffer of a titration with which the protons that it sets free move the pH no further than it can be set, nor
 * over half the way to the edge of the working range. For a strong acid or alkali the pH decides the amount; null without a buffer on record.
 */
export function chooseBuffer(
  task: Task,
  stage: DevelopedStage,
  range: WorkingRange,
  knowledge: Knowledge,
): BufferChoice | null {
  const { model, endPointML } = stage.evaluation;
  const { plan } = stage;
  const buffer = knowledge.buffers.get(plan.buffer.id);
  if (buffer === undefined) return null;
  const { ionicStrengthMolPerL } = model;
  const chemistry = bufferModel(knowledge, buffer, { ionicStrengthMolPerL, temperatureC: task.temperatureC });
  const freed = protonsFreed(stage.evaluation, knowledge);
  const dilution = model.volumeL / (model.volumeL + endPointML / 1000);
  const look = (molPerL: number): BufferLook => ({
    molPerL,
    pHDrop: pHDrop(chemistry, molPerL * dilution, plan.pH, freed),
  });
  const start = look(plan.buffer.molPerL);
  const [least, most] = buffer.usualMolPerL;
  const usual = BENCH_AMOUNTS.filter((c) => c >= least && c <= most);
  if (buffer.kind !== "pair" || usual.length === 0)
    return { id: buffer.id, chosen: start, start, less: null, rounded: [] };
  const room = freed > 0 ? plan.pH - range.low : range.high - plan.pH;
  const borne = Math.max(LEAST_PH_CHANGE, Math.min(BORNE_PH_CHANGE, PART_OF_ROOM * room));
  const looks = usual.map(look);
  const first = (change: number, limit: number): number =>
    looks.findIndex((l) => Math.abs(l.pHDrop) <= change && l.molPerL <= limit);
  const found = [
    first(borne, WITHOUT_NEED_MOL_PER_L),
    first(MOST_PH_CHANGE, WITHOUT_NEED_MOL_PER_L),
    first(borne, most),
  ];
  const index = found.find((i) => i >= 0) ?? looks.length - 1;
  const figure = 10 ** Math.floor(Math.log10(plan.buffer.molPerL) + 1e-9);
  const rounded = [Math.floor, Math.ceil]
    .map((to) => Number((figure * to(plan.buffer.molPerL / figure - 1e-9)).toPrecision(1)))
    .filter((c) => c >= least && c <= most)
    .map(look)
    .filter((l) => Math.abs(l.pHDrop) <= MOST_PH_CHANGE);
  return {
    id: buffer.id,
    chosen: looks[index]!,
    start,
    less: looks[index - 1] ?? null,
    rounded,
  };
}
