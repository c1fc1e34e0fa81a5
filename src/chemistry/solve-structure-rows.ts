import type { MassBalanceProblem } from "./types.ts";

/** What a component is in one solve: solved for, held at a given free concentration, or not there at all. */
export const UNKNOWN = 0;
export const FIXED = 1;
export const ABSENT = 2;

/** Sparse rows over local unknowns or over global components. */
export interface Rows {
  readonly start: Int32Array;
  readonly column: Int32Array;
  readonly value: Float64Array;
}

/** UNKNOWN for a row that holds an unknown component, FIXED for one of fixed components only, ABSENT for one that holds an absent component. */
export function kindOf(matrix: Int8Array, row: number, nComponents: number, state: ArrayLike<number>): number {
  let kind = FIXED;
  for (let j = 0, at = row * nComponents; j < nComponents; j++, at++) {
    if (matrix[at] === 0) continue;
    if (state[j] === ABSENT) return ABSENT;
    if (state[j] === UNKNOWN) kind = UNKNOWN;
  }
  return kind;
}

/** Species with the same coefficients over the unknowns, group by group; of those made of fixed components, the list; per species its group. */
export function groupSpecies(
  { stoichiometry, nSpecies, nComponents }: MassBalanceProblem,
  state: ArrayLike<number>,
  unknown: readonly number[],
): { readonly groups: number[][]; readonly constantSpecies: number[]; readonly groupOf: Int32Array } {
  const byKey = new Map<string, number>();
  const groups: number[][] = [];
  const constantSpecies: number[] = [];
  const groupOf = new Int32Array(nSpecies).fill(-1);
  for (let i = 0; i < nSpecies; i++) {
    const kind = kindOf(stoichiometry, i, nComponents, state);
    if (kind === FIXED) constantSpecies.push(i);
    if (kind !== UNKNOWN) continue;
    let key = "";
    for (let l = 0; l < unknown.length; l++) {
      const value = stoichiometry[i * nComponents + unknown[l]!]!;
      if (value !== 0) key += `${l}:${value} `;
    }
    let group = byKey.get(key);
    if (group === undefined) {
      group = groups.push([]) - 1;
      byKey.set(key, group);
    }
    groups[group]!.push(i);
    groupOf[i] = group;
  }
  return { groups, constantSpecies, groupOf };
}

/** Rows of one of the two matrices of a problem. */
export interface MatrixRows {
  readonly matrix: Int8Array;
  readonly rows: readonly number[];
}

/** Coefficients of the components in one state, row by row without zeros; columns by `local`, or by the problem's numbers where that is null. */
export function sparseRows(
  from: readonly MatrixRows[],
  nComponents: number,
  state: ArrayLike<number>,
  select: number,
  local: Int32Array | null,
): Rows {
  const start = [0];
  const column: number[] = [];
  const value: number[] = [];
  for (const { matrix, rows } of from)
    for (const row of rows) {
      for (let j = 0, at = row * nComponents; j < nComponents; j++, at++) {
        if (matrix[at] === 0 || state[j] !== select) continue;
        column.push(local === null ? j : local[j]!);
        value.push(matrix[at]!);
      }
      start.push(column.length);
    }
  return { start: Int32Array.from(start), column: Int32Array.from(column), value: Float64Array.from(value) };
}

/** The first `m` rows turned round: for each of `n` columns its rows and values. */
export function columnsOf({ start, column, value }: Rows, m: number, n: number): Rows {
  const begin = new Int32Array(n + 1);
  const end = start[m]!;
  for (let p = 0; p < end; p++) begin[column[p]! + 1]!++;
  for (let j = 0; j < n; j++) begin[j + 1] = begin[j + 1]! + begin[j]!;
  const next = begin.slice();
  const row = new Int32Array(end);
  const turned = new Float64Array(end);
  for (let i = 0; i < m; i++)
    for (let p = start[i]!; p < start[i + 1]!; p++) {
      const at = next[column[p]!]!++;
      row[at] = i;
      turned[at] = value[p]!;
    }
  return { start: begin, column: row, value: turned };
}

/** Products of two coefficients of the first `m` rows, gathered by their place in the lower triangle (n x n), places that stay zero left out. */
export function pairsOf({ start, column, value }: Rows, m: number, n: number): Rows & { readonly index: Int32Array } {
  const rowStart = new Int32Array(m + 1);
  const place: number[] = [];
  const product: number[] = [];
  for (let i = 0; i < m; i++) {
    for (let p = start[i]!; p < start[i + 1]!; p++)
      for (let q = start[i]!; q <= p; q++) {
        place.push(column[p]! * n + column[q]!);
        product.push(value[p]! * value[q]!);
      }
    rowStart[i + 1] = place.length;
  }
  const {
    start: all,
    column: row,
    value: gathered,
  } = columnsOf({ start: rowStart, column: Int32Array.from(place), value: Float64Array.from(product) }, m, n * n);
  const index: number[] = [];
  const begin = [0];
  for (let place = 0; place < n * n; place++) {
    if (all[place + 1] === all[place]) continue;
    index.push(place);
    begin.push(all[place + 1]!);
  }
  return { index: Int32Array.from(index), start: Int32Array.from(begin), column: row, value: gathered };
}
