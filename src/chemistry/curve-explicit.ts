import { AppError } from "../errors.ts";
import { ExplicitSums } from "./curve-explicit-sums.ts";
import type { CurvePoint, Titration } from "./titration.ts";
import { LN_NOTHING, titrationColumns } from "./titration.ts";

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
  const sums = new ExplicitSums(titration, columns);
  const { sampleVolumeML: v0, system } = titration;
  const strength = titration.titrant.molPerL;
  const already = titration.sampleMolPerL[titration.titrant.component] ?? 0; // titrant that stands in the sample
  const followsTitrant = columns.follow === columns.titrant;
  const totalMolPerL = followsTitrant
    ? columns.partners.reduce((sum, c) => sum + (titration.sampleMolPerL[system.components[c]!] ?? 0), 0)
    : titration.sampleMolPerL[titration.follow]!;
  const status = system.outOfModelRange ? "outOfModelRange" : "converged";

  const volumeOfLoaded = (): number =>
    sums.alone < strength
      ? (v0 * (sums.alone + sums.taken - already)) / (strength - sums.alone)
      : Number.POSITIVE_INFINITY;
  const volumeML = (u: number): number => {
    sums.load(Math.exp(u));
    return volumeOfLoaded();
  };
  const pointOfLoaded = (u: number, t: number, volumeML: number): CurvePoint => {
    const dilution = v0 / (v0 + volumeML);
    const lnFollow = followsTitrant ? u : sums.lnFollowed(dilution);
    const { bound, notBound } = sums.amounts(t, dilution);
    const total = totalMolPerL * dilution;
    return {
      volumeML,
      pM: -lnFollow / Math.LN10,
      pMTotal: -Math.log10(notBound),
      fractionTitrated: total > 0 ? Math.min(bound / total, 1) : 0,
      status,
      residual: 0,
    };
  };
  const point = (u: number): CurvePoint => {
    const t = Math.exp(u);
    sums.load(t);
    return pointOfLoaded(u, t, volumeOfLoaded());
  };
  const at = (wantedML: number): CurvePoint => {
    const u = wantedML <= 0 && already <= 0 ? LN_NOTHING : invert(volumeML, wantedML);
    const t = Math.exp(u);
    sums.load(t);
    return pointOfLoaded(u, t, wantedML <= 0 && already <= 0 ? 0 : wantedML);
  };
  const atPM = (pM: number): CurvePoint | null => {
    // Following a component of the sample its pM rises with the free titrant; following the titrant it falls.
    const sign = followsTitrant ? -1 : 1;
    const u = invert((lnFree) => {
      const found = point(lnFree);
      const { volumeML: volume } = found;
      return volume < 0 || volume === Number.POSITIVE_INFINITY ? volume : sign * (found.pM - pM);
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
