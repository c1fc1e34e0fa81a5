import { AppError } from "../errors.ts";
import type { ConstantRecord, Reaction } from "./knowledge.ts";
import { isOtherBackground } from "./media.ts";

/** The conditions a constant is wanted for. */
export interface SelectionConditions {
  readonly ionicStrengthMolPerL: number;
  readonly temperatureC: number;
}

/** The record chosen, the others of the reaction (best first), and the reason in words. */
export interface Selection {
  readonly record: ConstantRecord;
  readonly passedOver: readonly ConstantRecord[];
  readonly reason: string;
}

/** One kelvin away counts as 0.01 of root ionic strength: 10 K weigh as much as the step from I = 0.1 to 0.17 mol/L. */
const PER_KELVIN = 0.01;
/** A background that binds otherwise than potassium counts as this much of root ionic strength; less than the step from 0.1 to 0. */
const OTHER_BACKGROUND = 0.15;
/** A value recalled from memory counts as this much further away: a value that was read within reach of the Davies equation comes first. */
const RECALLED = 0.5;
/** Beyond this ionic strength (mol/L) a record cannot be moved by the Davies equation and stands beside the doubtful ones. */
const BEYOND_USE_MOL_PER_L = 1;

/**
 * The record of `reaction` to start from at `conditions` (mol/L, C). Order: records that are neither doubtful nor beyond 1 mol/L, then those with
 * one of these faults, then both; within a class the nearest by |root I - root I'| + 0.01 |T - T'|, where a background other than the model's
 * counts 0.15 and a recalled value 0.5 (the model's background is potassium: NaL and LiL are species, KL is part of the free ligand); then the smaller
 * standard uncertainty; then the smaller record id. Deterministic. Throws AppError "no-record" for a reaction without records.
 */
export function selectRecord(reaction: Pick<Reaction, "id" | "records">, conditions: SelectionConditions): Selection {
  const { records } = reaction;
  const first = records[0];
  if (first === undefined)
    throw new AppError("no-record", `reaction ${reaction.id} has no record`, { reaction: reaction.id });
  if (records.length === 1) return { record: first, passedOver: [], reason: "the only record" };
  const ranked = records
    .map((record) => ({ record, faults: faults(record), distance: distance(record, conditions) }))
    .sort(
      (a, b) =>
        a.faults - b.faults ||
        a.distance - b.distance ||
        a.record.uncertainty - b.record.uncertainty ||
        compareIds(recordId(a.record), recordId(b.record)),
    );
  const best = ranked[0]!;
  const next = ranked[1]!;
  const reason =
    best.faults !== next.faults
      ? "the others are doubtful or beyond 1 mol/L"
      : best.distance !== next.distance
        ? "nearest in ionic strength, temperature, background and basis"
        : best.record.uncertainty !== next.record.uncertainty
          ? "smaller uncertainty among equals"
          : "first record among equals";
  return { record: best.record, passedOver: ranked.slice(1).map((entry) => entry.record), reason };
}

function faults(record: ConstantRecord): number {
  return (record.doubtful ? 1 : 0) + (record.ionicStrengthMolPerL > BEYOND_USE_MOL_PER_L ? 1 : 0);
}

function distance(record: ConstantRecord, conditions: SelectionConditions): number {
  const root = Math.abs(
    Math.sqrt(record.ionicStrengthMolPerL) - Math.sqrt(Math.max(0, conditions.ionicStrengthMolPerL)),
  );
  const kelvin = Math.abs(record.temperatureC - conditions.temperatureC) * PER_KELVIN;
  const background = isOtherBackground(record.medium) ? OTHER_BACKGROUND : 0;
  return root + kelvin + background + (record.provenance.basis === "memory" ? RECALLED : 0);
}

function recordId(record: ConstantRecord): string {
  return record.provenance.record ?? `${record.provenance.source} ${record.provenance.where ?? ""}`;
}

/** Numeric record ids by number, others by code point: the same order on every machine. */
function compareIds(a: string, b: string): number {
  const numeric = Number(a) - Number(b);
  if (Number.isFinite(numeric) && numeric !== 0) return numeric;
  return a < b ? -1 : a > b ? 1 : 0;
}
