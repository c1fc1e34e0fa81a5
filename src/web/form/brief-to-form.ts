import type { Brief } from "../../recommendation/contract.ts";
import { emptyAnalyte, emptyForm, emptyRow, type BriefForm, type MatrixRow } from "./brief-form.ts";

const asText = (value: unknown): string =>
  typeof value === "number" && Number.isFinite(value) ? String(value) : typeof value === "string" ? value : "";

/** Fills the form from a brief (complete or as sent), so that a link or a scenario can be changed and asked again. */
export function formFromBrief(brief: DeepPartial<Brief>): BriefForm {
  const empty = emptyForm();
  const row = (
    ion: unknown,
    level: DeepPartial<Brief["analytes"][number]["concentration"]> | undefined,
  ): MatrixRow => ({
    ion: asText(ion),
    value: asText(level?.value),
    unit: asText(level?.unit) || "mmol/L",
    as: asText(level?.as),
  });
  const analytes = listOf(brief.analytes).map((a) => ({
    ...row(a?.ion, a?.concentration),
    report: a?.report === "sum" ? ("sum" as const) : ("individual" as const),
  }));
  const laboratory = brief.laboratory;
  return {
    title: asText(brief.title),
    analytes: analytes.length > 0 ? analytes : [emptyAnalyte],
    matrix: [...listOf(brief.matrix).map((m) => row(m?.component, m?.concentration)), emptyRow],
    volumeML: asText(brief.portion?.volumeML) || empty.volumeML,
    titrationVolumeML: asText(brief.portion?.titrationVolumeML) || empty.titrationVolumeML,
    requirement: asText(brief.requirement?.relativeExpandedUncertaintyPercent) || empty.requirement,
    avoid: texts(laboratory?.avoid),
    shelf: laboratory?.available ? "listed" : "usual",
    available: texts(laboratory?.available),
    detection: laboratory?.detection ? texts(laboratory.detection) : empty.detection,
    heating: laboratory?.heating === false ? "no" : "yes",
    buretteML: asText(laboratory?.buretteML) || empty.buretteML,
    temperatureC: asText(brief.temperatureC) || empty.temperatureC,
  };
}

const texts = (list: unknown): readonly string[] =>
  Array.isArray(list) ? list.filter((v): v is string => typeof v === "string") : [];

/** A brief of which any part may be missing. */
export type DeepPartial<T> = T extends readonly (infer U)[]
  ? readonly (DeepPartial<U> | undefined)[]
  : T extends object
    ? { readonly [K in keyof T]?: DeepPartial<T[K]> | undefined }
    : T;

/** An address may hold anything: what is not a list has no rows. */
function listOf<T>(value: readonly T[] | null | undefined): readonly T[] {
  return Array.isArray(value) ? (value as readonly T[]) : [];
}
