import { readIon } from "../constants/ion-names.ts";
import type { ComponentForm, ComponentRecord, Knowledge } from "../constants/knowledge.ts";
import { type Fault, InputError } from "../errors.ts";
import type { Task, TaskAnalyte, TaskComponent } from "../methods/types.ts";
import { nearest, readReagents } from "./brief-reagents.ts";
import { addRows, type BriefRow, doubledReports, inBothLists } from "./brief-rows.ts";
import {
  analyteSchema,
  BRIEF_LIMITS,
  briefSchema,
  type Concentration,
  laboratorySchema,
  matrixRowSchema,
  portionSchema,
} from "./contract-brief.ts";
import { describeFound, jsonPath, shapeFaults } from "./contract-faults.ts";
import { toComponentMolPerL } from "./units.ts";

/** Below this no titre exists, whatever the unit it was written in. */
const LEAST_LEVEL_MOL_PER_L = 1e-15;

/**
 * Reads a brief into a task: ions recognised, levels in mol/L of the component, defaults filled, rows of one component added with a note.
 * Throws InputError with one fault for each error found, all of them at once: shape, unknown or ambiguous ions, units,
 * unknown reagents, an analyte that also stands in the matrix, a titration volume below the portion.
 */
export function readBrief(json: unknown, knowledge: Knowledge): Task {
  const faults: Fault[] = [...shapeFaults(briefSchema, json)];
  const notes: string[] = [];
  const raw = fieldsOf(json);
  const rows = (name: string): readonly unknown[] => (Array.isArray(raw[name]) ? raw[name] : []);

  // Each row that keeps its shape is read even when others do not, so that a writer sees every fault at once.
  const analytes = rows("analytes").flatMap((row, index): BriefRow<TaskAnalyte>[] => {
    const shaped = analyteSchema.safeParse(row);
    if (!shaped.success) return [];
    const { ion, concentration, report } = shaped.data;
    const path = ["analytes", index];
    const read = readRow(ion, concentration, [...path, "ion"], [...path, "concentration"], knowledge, faults, notes);
    // Also a level that is lost in conversion (5e-324 ug/L) is none.
    if (concentration.value === 0 || (read !== null && !(read.molPerL > LEAST_LEVEL_MOL_PER_L)))
      faults.push(levelFault(path, "a level above 0: the titre is computed for the level expected", concentration));
    return read === null ? [] : [{ value: { ...read, report }, path: jsonPath([...path, "ion"]) }];
  });
  const matrix = rows("matrix").flatMap((row, index): BriefRow<TaskComponent>[] => {
    const shaped = matrixRowSchema.safeParse(row);
    if (!shaped.success) return [];
    const { component, concentration } = shaped.data;
    const path = ["matrix", index];
    const read = readRow(
      component,
      concentration,
      [...path, "component"],
      [...path, "concentration"],
      knowledge,
      faults,
      notes,
    );
    return read === null ? [] : [{ value: read, path: jsonPath([...path, "component"]) }];
  });
  faults.push(...inBothLists(analytes, matrix), ...doubledReports(analytes));
  const laboratory = readLaboratory(raw.laboratory, knowledge, faults);
  const portion = portionSchema.safeParse(raw.portion ?? {});
  if (portion.success && portion.data.titrationVolumeML < portion.data.volumeML)
    faults.push({
      path: "$.portion.titrationVolumeML",
      expected: `at least the portion's volume, ${portion.data.volumeML} mL`,
      found: `${portion.data.titrationVolumeML} mL${fieldsOf(raw.portion).titrationVolumeML === undefined ? " (the default)" : ""}`,
    });

  const shaped = briefSchema.safeParse(json);
  if (!shaped.success || laboratory === null || faults.length > 0) throw new InputError(faults);
  const brief = shaped.data;
  return {
    title: brief.title,
    analytes: addRows(analytes, notes),
    matrix: addRows(matrix, notes),
    portion: brief.portion,
    requirementPercent: brief.requirement.relativeExpandedUncertaintyPercent,
    laboratory,
    temperatureC: brief.temperatureC,
    notes,
  };
}

function readRow(
  text: string,
  level: Concentration,
  ionPath: readonly PropertyKey[],
  levelPath: readonly PropertyKey[],
  knowledge: Knowledge,
  faults: Fault[],
  notes: string[],
): TaskComponent | null {
  const read = readComponent(text, ionPath, knowledge, faults);
  if (read === null) return null;
  const converted = toComponentMolPerL(level, read.form, knowledge.atomicWeights);
  if (converted.kind === "fault") {
    const { field, expected } = converted;
    faults.push({ path: jsonPath([...levelPath, field]), expected, found: describeFound(level[field]) });
    return null;
  }
  if (converted.note !== null) notes.push(converted.note);
  if (converted.molPerL > BRIEF_LIMITS.concentrationMolPerL)
    faults.push(levelFault(levelPath.slice(0, -1), `at most ${BRIEF_LIMITS.concentrationMolPerL} mol/L`, level));
  return {
    component: read.component.id,
    shown: read.form.spelling,
    molPerL: converted.molPerL,
    protonsPerComponent: read.form.protonsPerComponent,
  };
}

/** Recognises one ion or component name; an unknown or ambiguous one becomes a fault at `path` and null. */
export function readComponent(
  text: string,
  path: readonly PropertyKey[],
  knowledge: Knowledge,
  faults: Fault[],
): { readonly component: ComponentRecord; readonly form: ComponentForm } | null {
  const reading = readIon(text, knowledge.components);
  if (reading.kind === "found") return reading;
  const expected =
    reading.kind === "ambiguous"
      ? `one ion, written so that it can be read in one way: ${reading.readings.join(" or ")}`
      : `a known ion or component (nearest: ${(reading.nearest.length > 0 ? reading.nearest : nearestSpellings(text, knowledge)).join(", ")})`;
  faults.push({ path: jsonPath(path), expected, found: describeFound(text) });
  return null;
}

/** The reader of ions offers only what is close; where nothing is, the least distant spellings still show how ions are written. */
function nearestSpellings(text: string, knowledge: Knowledge): readonly string[] {
  return nearest(
    text,
    [...knowledge.components.values()].flatMap((component) => component.forms.map((form) => form.spelling)),
  );
}

function readLaboratory(json: unknown, knowledge: Knowledge, faults: Fault[]): Task["laboratory"] | null {
  const shaped = laboratorySchema.safeParse(json ?? {});
  if (!shaped.success) return null;
  const avoid = readReagents(shaped.data.avoid, ["laboratory", "avoid"], knowledge);
  const available =
    shaped.data.available === null ? null : readReagents(shaped.data.available, ["laboratory", "available"], knowledge);
  faults.push(...avoid.faults, ...(available?.faults ?? []));
  return {
    avoid: avoid.ids,
    available: available?.ids ?? null,
    detection: [...new Set(shaped.data.detection)],
    heating: shaped.data.heating,
    buretteML: shaped.data.buretteML,
  };
}

const levelFault = (rowPath: readonly PropertyKey[], expected: string, level: Concentration): Fault => ({
  path: jsonPath([...rowPath, "concentration", "value"]),
  expected,
  found: `${level.value} ${level.unit}`,
});

const fieldsOf = (json: unknown): Readonly<Record<string, unknown>> =>
  typeof json === "object" && json !== null ? (json as Readonly<Record<string, unknown>>) : {};
