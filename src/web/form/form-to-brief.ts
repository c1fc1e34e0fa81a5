import type { Knowledge } from "../../constants/knowledge.ts";
import { InputError, type Fault } from "../../errors.ts";
import { readBrief } from "../../recommendation/brief.ts";
import { isBlankRow, type BriefForm, type MatrixRow } from "./brief-form.ts";
import { readDecimal } from "./decimal.ts";

/** A fault of the form at one of its fields: "analytes[0].ion", "volumeML", or "form" for the whole. */
export interface FieldFault {
  readonly field: string;
  readonly message: string;
}

export type FormReading =
  | { readonly ok: true; readonly brief: Readonly<Record<string, unknown>> }
  | { readonly ok: false; readonly faults: readonly FieldFault[] };

/**
 * Turns a typed form into a brief and has `readBrief` check it; faults come back at the fields they belong to.
 * Blank rows are passed over; an empty number is a fault, never zero.
 */
export function briefFromForm(form: BriefForm, knowledge: Knowledge): FormReading {
  const faults: FieldFault[] = [];
  const number = (field: string, typed: string): number => {
    const reading = readDecimal(typed);
    if (reading.ok) return reading.value;
    faults.push({ field, message: reading.message });
    return Number.NaN;
  };
  const places: { analytes: number[]; matrix: number[] } = { analytes: [], matrix: [] };
  const level = (row: MatrixRow, place: string): Record<string, unknown> => {
    if (row.ion.trim() === "") faults.push({ field: `${place}.ion`, message: "which ion? Write its symbol or name" });
    const value = number(`${place}.value`, row.value);
    return { value, unit: row.unit, ...(row.as.trim() === "" ? {} : { as: row.as.trim() }) };
  };
  const analytes = form.analytes.flatMap((row, i) => {
    if (isBlankRow(row)) return [];
    places.analytes.push(i);
    return [{ ion: row.ion.trim(), concentration: level(row, `analytes[${i}]`), report: row.report }];
  });
  if (analytes.length === 0)
    faults.push({ field: "analytes[0].ion", message: "name the ion to determine, by symbol or name" });
  const matrix = form.matrix.flatMap((row, i) => {
    if (isBlankRow(row)) return [];
    places.matrix.push(i);
    return [{ component: row.ion.trim(), concentration: level(row, `matrix[${i}]`) }];
  });
  if (form.title.trim() === "") faults.push({ field: "title", message: "give the question a title" });
  if (form.detection.length === 0)
    faults.push({ field: "detection", message: "choose at least one way to see the end point" });
  const brief = {
    title: form.title.trim(),
    analytes,
    matrix,
    portion: {
      volumeML: number("volumeML", form.volumeML),
      titrationVolumeML: number("titrationVolumeML", form.titrationVolumeML),
    },
    requirement: { relativeExpandedUncertaintyPercent: number("requirement", form.requirement) },
    laboratory: {
      avoid: form.avoid,
      available: form.shelf === "listed" ? form.available : null,
      detection: form.detection,
      heating: form.heating === "yes",
      buretteML: number("buretteML", form.buretteML),
    },
    temperatureC: number("temperatureC", form.temperatureC),
  };
  if (faults.length > 0) return { ok: false, faults };
  try {
    readBrief(brief, knowledge);
    return { ok: true, brief };
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return { ok: false, faults: error.faults.map((fault) => atField(fault, places)) };
  }
}

const FIELD_OF_PATH: readonly (readonly [RegExp, string])[] = [
  [/^\$\.title\b/, "title"],
  [/^\$\.portion\.volumeML\b/, "volumeML"],
  [/^\$\.portion\.titrationVolumeML\b/, "titrationVolumeML"],
  [/^\$\.requirement\b/, "requirement"],
  [/^\$\.laboratory\.(avoid|available|detection|heating|buretteML)\b/, "$1"],
  [/^\$\.temperatureC\b/, "temperatureC"],
];

/** The field of the form that a JSON path of the brief was typed in; rows are counted as they stand in the form. */
function atField(fault: Fault, places: { analytes: readonly number[]; matrix: readonly number[] }): FieldFault {
  const message = `expected ${fault.expected}, found ${fault.found}`;
  const row = /^\$\.(analytes|matrix)\[(\d+)\](.*)$/.exec(fault.path);
  if (row) {
    const list = row[1] === "analytes" ? "analytes" : "matrix";
    const rest = row[3] ?? "";
    const cell = rest.includes(".unit")
      ? "unit"
      : rest.includes(".as")
        ? "as"
        : rest.includes("concentration")
          ? "value"
          : "ion";
    return { field: `${list}[${places[list][Number(row[2])] ?? 0}].${cell}`, message };
  }
  for (const [pattern, field] of FIELD_OF_PATH) {
    const match = pattern.exec(fault.path);
    if (match) return { field: field === "$1" ? (match[1] ?? "form") : field, message };
  }
  return { field: "form", message: `${fault.path}: ${message}` };
}
