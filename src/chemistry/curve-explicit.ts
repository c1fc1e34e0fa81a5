import { AppError } from "../errors.ts";
import type { CurvePoint, Titration, TitrationColumns } from "./titration.ts";
import { boundRows, LN_NOTHING, titrationColumns } from "./titration.ts";

/** A titration curve in its explicit form: everything as a function of u = ln of the free titrant (mol/L), volumes in mL. */
export interface ExplicitCurve {
  /** Volume of titrant that gives this free titrant; rises with u; Infinity where no volume of this titrant reaches it. */
  volumeML(lnFreeTitrant: number): number;
  point(lnFreeTitrant: number): CurvePoint;
  /** The point at a volume (mL, 0 or more), found by bracketing on the monotone volume. */
  at(volumeML: number): CurvePoint;
  /** The point at which what is followed has this pM, found by bracketing; null where no volume of this titrant reaches it. */
  atPM(pM: number): CurvePoint | null;
  /** Points at `n` values of u evenly spaced from `from` to `to` (ln mol/L): no point needs iteration. */
  sweep(from: number, to: number, n: number): CurvePoint[];
}

/**
 * Why the explicit form does not hold for `titration`, or null where it does: it needs every component of the sample to stand alone, once,
 * in each of its species (no polynuclear or mixed-metal species, no ligand that the metals deplete), and no solids.
 */
export function whyNotExplicit(titration: Titration): string | null {
  const { system } = titration;
  const columns = titrationColumns(titration);
  const { nComponents, nSpecies, stoichiometry } = system.problem;
  if (system.problem.solids.n > 0) return "solids may form";
  for (let row = 0; row < nSpecies; row++) {
    let atoms = 0;
    for (const column of columns.sample) atoms += Math.max(stoichiometry[row * nComponents + column]!, 0);
    if (atoms > 1) return `${system.species[row]!.id} holds more than one component of the sample`;
  }
  return null;
}

/**
 * The explicit titration curve: at fixed pH and free auxiliary ligands each metal distributes by the free titrant u alone, so the volume is
 * V = V0 (A(u) + sum c_j n_j(u) - c_T0) / (c_T - A(u)), with A the titrant not bound to the sample, n_j its mean number per metal and
 * c_T0 what of it stands in the sample already.
 * Throws AppError "not-explicit" where `whyNotExplicit` gives a reason.
 */
export function explicitCurve(titration: Titration): ExplicitCurve {
  const reason = whyNotExplicit(titration);
  if (reason !== null) throw new AppError("not-explicit", `the explicit curve does not hold: ${reason}`);
  const columns = titrationColumns(titration);
  const rows = explicitRows(titration, columns);
  const { sampleVolumeML: v0 } = titration;
  const strength = titration.titrant.molPerL;
  const already = titration.sampleMolPerL[titration.titrant.component] ?? 0; // titrant that stands in the sample

  const volumeML = (u: number): number => {
    const alone = rows.alone.reduce((sum, row) => sum + row.titrantAtoms * Math.exp(row.ln + row.titrantAtoms * u), 0);
    if (!(alone < strength)) return Number.POSITIVE_INFINITY;
    const bound = rows.groups.reduce((sum, group) => sum + group.molPerL * meanTitrant(group.rows, u), 0);
    return (v0 * (alone + bound - already)) / (strength - alone);
  };
  const point = (u: number): CurvePoint => pointAt(titration, columns, rows, u, volumeML(u));
  const at = (wantedML: number): CurvePoint => {
    if (wantedML <= 0 && already <= 0) return pointAt(titration, columns, rows, LN_NOTHING, 0);
    const u = invert(volumeML, wantedML);
    return pointAt(titration, columns, rows, u, wantedML);
  };
  const atPM = (pM: number): CurvePoint | null => {
    // Following a component of the sample its pM rises with the free titrant; following the titrant it falls.
    const sign = columns.follow === columns.titrant ? -1 : 1;
    const u = invert((lnFree) => {
      const volume = volumeML(lnFree);
      return volume < 0 || volume === Number.POSITIVE_INFINITY
        ? volume
        : sign * (pointAt(titration, columns, rows, lnFree, volume).pM - pM);
    }, 0);
    const found = point(u);
    return found.volumeML >= 0 && Number.isFinite(found.volumeML) && Math.abs(found.pM - pM) < 1e-6 ? found : null;
  };
  return {
    volumeML,
    point,
    at,
    atPM,
    sweep: (from, to, n) => Array.from({ length: n }, (_, i) => point(from + ((to - from) * i) / Math.max(n - 1, 1))),
  };
}

interface Row {
  readonly row: number;
  readonly ln: number; // ln beta with everything held put in; times the free metal where it belongs to a group
  readonly titrantAtoms: number;
}
interface Group {
  readonly column: number;
  readonly molPerL: number; // in the undiluted sample
  readonly rows: readonly Row[];
}
interface ExplicitRows {
  readonly alone: readonly Row[];
  readonly groups: readonly Group[];
}

function explicitRows(titration: Titration, columns: TitrationColumns): ExplicitRows {
  const { system } = titration;
  const { nComponents, nSpecies, stoichiometry, lnBeta } = system.problem;
  const variable = new Set([columns.titrant, ...columns.sample]);
  const lnHeld = system.components.map((id, column) => {
    if (column === 0) return titration.log10H * Math.LN10;
    const held = titration.freeMolPerL[id];
    return held === undefined || held <= 0 ? Number.NEGATIVE_INFINITY : Math.log(held);
  });
  const groups = columns.sample.map((column) => ({ column, rows: [] as Row[] }));
  const alone: Row[] = [];
  for (let row = 0; row < nSpecies; row++) {
    let ln = lnBeta[row]!;
    for (let column = 0; column < nComponents; column++) {
      const count = stoichiometry[row * nComponents + column]!;
      if (count !== 0 && !variable.has(column)) ln += count * lnHeld[column]!;
    }
    if (!Number.isFinite(ln)) continue; // a component that is neither held nor in the vessel
    const titrantAtoms = stoichiometry[row * nComponents + columns.titrant]!;
    const group = groups.find((g) => stoichiometry[row * nComponents + g.column]! > 0);
    if (group !== undefined) group.rows.push({ row, ln, titrantAtoms });
    else if (titrantAtoms !== 0) alone.push({ row, ln, titrantAtoms });
  }
  return {
    alone,
    groups: groups.map((g) => ({ ...g, molPerL: titration.sampleMolPerL[system.components[g.column]!]! })),
  };
}

/** ln of the sum over the rows at u, and the mean number of titrant in them. */
function lnSum(rows: readonly Row[], u: number): number {
  let largest = Number.NEGATIVE_INFINITY;
  for (const row of rows) largest = Math.max(largest, row.ln + row.titrantAtoms * u);
  return largest + Math.log(rows.reduce((sum, row) => sum + Math.exp(row.ln + row.titrantAtoms * u - largest), 0));
}

function meanTitrant(rows: readonly Row[], u: number): number {
  const total = lnSum(rows, u);
  return rows.reduce((sum, row) => sum + row.titrantAtoms * Math.exp(row.ln + row.titrantAtoms * u - total), 0);
}

function pointAt(
  titration: Titration,
  columns: TitrationColumns,
  rows: ExplicitRows,
  u: number,
  volumeML: number,
): CurvePoint {
  const dilution = titration.sampleVolumeML / (titration.sampleVolumeML + volumeML);
  const ln = new Map<number, number>();
  let lnFollow = u;
  for (const group of rows.groups) {
    const lnFree = Math.log(group.molPerL * dilution) - lnSum(group.rows, u);
    if (group.column === columns.follow) lnFollow = lnFree;
    for (const row of group.rows) ln.set(row.row, lnFree + row.ln + row.titrantAtoms * u);
  }
  for (const row of rows.alone) ln.set(row.row, row.ln + row.titrantAtoms * u);
  const weights = boundRows(titration, columns);
  let lnNotBound = Number.NEGATIVE_INFINITY;
  let bound = 0;
  for (const [row, value] of ln) {
    bound += weights.bound[row]! * Math.exp(value);
    if (weights.notBound[row]! > 0) lnNotBound = lnAdd(lnNotBound, value + Math.log(weights.notBound[row]!));
  }
  const total =
    columns.follow === columns.titrant
      ? columns.partners.reduce((sum, c) => sum + (titration.sampleMolPerL[titration.system.components[c]!] ?? 0), 0) *
        dilution
      : titration.sampleMolPerL[titration.follow]! * dilution;
  return {
    volumeML,
    pM: -lnFollow / Math.LN10,
    pMTotal: -lnNotBound / Math.LN10,
    fractionTitrated: total > 0 ? Math.min(bound / total, 1) : 0,
    status: titration.system.outOfModelRange ? "outOfModelRange" : "converged",
    residual: 0,
  };
}

/** ln free titrant at which the monotone `volumeML` takes `wanted`: bisection to the last digit of u. */
function invert(volumeML: (u: number) => number, wanted: number): number {
  let low = LN_NOTHING;
  let high = Math.log(10); // no titrant is stronger than 10 mol/L
  for (let i = 0; i < 200 && high - low > 1e-13 * Math.abs(low); i++) {
    const middle = (low + high) / 2;
    if (volumeML(middle) < wanted) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

function lnAdd(a: number, b: number): number {
  const high = Math.max(a, b);
  return high === Number.NEGATIVE_INFINITY ? high : high + Math.log1p(Math.exp(Math.min(a, b) - high));
}
