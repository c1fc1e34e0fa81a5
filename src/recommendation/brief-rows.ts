import type { Fault } from "../errors.ts";
import type { TaskAnalyte, TaskComponent } from "../methods/types.ts";

/** A row that was understood, with the JSON path of its ion. */
export interface BriefRow<T extends TaskComponent> {
  readonly value: T;
  readonly path: string;
}

/** Rows of the same component as one total each, in the order first met; what was added together is told in `notes`. Rows of nothing (level 0) fall away, with a note. */
export function addRows<T extends TaskComponent>(rows: readonly BriefRow<T>[], notes: string[]): readonly T[] {
  const groups = new Map<string, T[]>();
  for (const { value } of rows) groups.set(value.component, [...(groups.get(value.component) ?? []), value]);
  return [...groups.values()].flatMap((group) => {
    const total = group.reduce((sum, row) => sum + row.molPerL, 0);
    const first = group[0];
    if (first === undefined) return [];
    if (total === 0) {
      notes.push(`${first.shown} stands in the brief with nothing of it, and was left out.`);
      return [];
    }
    if (group.length === 1) return [first];
    const protons = group.reduce((sum, row) => sum + row.molPerL * row.protonsPerComponent, 0) / total;
    notes.push(
      `Rows of one component were added: ${group.map((row) => `${row.shown} ${molPerL(row)}`).join(" and ")} stand as one total of ${molPerL({ molPerL: total })}, shown as ${first.shown}.`,
    );
    return [{ ...first, molPerL: total, protonsPerComponent: protons }];
  });
}

const molPerL = (row: { readonly molPerL: number }): string => `${Number(row.molPerL.toPrecision(4))} mol/L`;

/** A fault for each matrix row whose component is an analyte: what is to be determined cannot also be given as known. */
export function inBothLists(
  analytes: readonly BriefRow<TaskAnalyte>[],
  matrix: readonly BriefRow<TaskComponent>[],
): readonly Fault[] {
  return matrix.flatMap(({ value, path }) => {
    const analyte = analytes.find((row) => row.value.component === value.component);
    if (analyte === undefined) return [];
    return [
      { path, expected: "a component that is not an analyte", found: `${value.shown}, which ${analyte.path} asks for` },
    ];
  });
}

/** A fault for each analyte that stands twice, once alone and once in the sum. */
export function doubledReports(analytes: readonly BriefRow<TaskAnalyte>[]): readonly Fault[] {
  return analytes.flatMap(({ value, path }, index) => {
    const earlier = analytes.slice(0, index).find((row) => row.value.component === value.component);
    if (earlier === undefined || earlier.value.report === value.report) return [];
    return [
      {
        path: path.replace(/ion$/, "report"),
        expected: `"${earlier.value.report}", as in ${earlier.path.replace(/ion$/, "report")} for the same component`,
        found: `"${value.report}"`,
      },
    ];
  });
}
