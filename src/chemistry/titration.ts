import type { ComponentId } from "../constants/knowledge.ts";
import { AppError } from "../errors.ts";
import type { PreparedSystem, SolveStatus } from "./types.ts";

/** A titration at fixed pH and fixed constants: what is in the vessel, what comes from the burette, what is held or followed. */
export interface Titration {
  readonly system: PreparedSystem;
  readonly log10H: number; // concentration, mol/L
  readonly sampleVolumeML: number; // before any titrant
  readonly sampleMolPerL: Readonly<Record<ComponentId, number>>; // totals in that volume
  readonly titrant: { readonly component: ComponentId; readonly molPerL: number };
  readonly freeMolPerL: Readonly<Record<ComponentId, number>>; // held at these free concentrations
  readonly follow: ComponentId; // the component whose pM is wanted: of the sample, or the titrant itself
  /** Components of the sample that the titrant counts as bound to, where `follow` is the titrant; default: all of them. */
  readonly partners?: readonly ComponentId[];
}

/** One point of a titration curve. */
export interface CurvePoint {
  readonly volumeML: number;
  readonly pM: number; // minus log10 of the free concentration of what is followed
  readonly pMTotal: number; // minus log10 of all of it that is not bound to the titrant (or to its partners)
  readonly fractionTitrated: number; // share bound, 0 to 1: of what is followed, or of the partners where that is the titrant
  readonly status: SolveStatus;
  readonly residual: number;
}

/** The columns a titration uses, resolved once. Throws AppError "unknown-component" for a component the system does not hold. */
export interface TitrationColumns {
  readonly titrant: number;
  readonly follow: number;
  readonly sample: readonly number[]; // columns with a total in the sample that are not held and not the titrant
  readonly partners: readonly number[];
}

/** Resolves the columns of `titration`. */
export function titrationColumns(titration: Titration): TitrationColumns {
  const { system } = titration;
  const column = (id: ComponentId): number => {
    const found = system.index.get(id);
    if (found === undefined)
      throw new AppError("unknown-component", `component ${id} is not in the system`, { component: id });
    return found;
  };
  const titrant = column(titration.titrant.component);
  const sample = Object.entries(titration.sampleMolPerL)
    .filter(([id, c]) => c > 0 && id !== titration.titrant.component && !(id in titration.freeMolPerL))
    .map(([id]) => column(id));
  return {
    titrant,
    follow: column(titration.follow),
    sample,
    partners: (titration.partners ?? system.components.filter((_, i) => sample.includes(i))).map(column),
  };
}

/**
 * Rows that count as "not bound to the titrant" for what is followed (with the number of its atoms), and as bound for the fraction.
 * When the titrant itself is followed, bound means held by one of its partners.
 */
export function boundRows(
  titration: Titration,
  columns: TitrationColumns,
): { notBound: Float64Array; bound: Float64Array } {
  const { nComponents, nSpecies, stoichiometry } = titration.system.problem;
  const notBound = new Float64Array(nSpecies);
  const bound = new Float64Array(nSpecies);
  const count = (row: number, column: number) => stoichiometry[row * nComponents + column]!;
  for (let row = 0; row < nSpecies; row++) {
    if (columns.follow === columns.titrant) {
      const partnerAtoms = columns.partners.reduce((sum, column) => sum + Math.max(count(row, column), 0), 0);
      const own = Math.max(count(row, columns.titrant), 0);
      if (own > 0 && partnerAtoms > 0) bound[row] = partnerAtoms;
      if (partnerAtoms === 0) notBound[row] = own;
    } else {
      const own = Math.max(count(row, columns.follow), 0);
      if (count(row, columns.titrant) > 0) bound[row] = own;
      else notBound[row] = own;
    }
  }
  return { notBound, bound };
}

/** mol/L, diluted to nothing: stands for "no titrant yet" where a logarithm is needed; 1e-150 binds nothing at any constant in use. */
export const LN_NOTHING = -345;
