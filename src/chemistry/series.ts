import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { explicitCurve, whyNotExplicit } from "./curve-explicit.ts";
import { generalCurve } from "./curve-general.ts";
import { conditionalConstant, fractionsOf } from "./speciation.ts";
import type { CurvePoint, Titration } from "./titration.ts";
import { titrationColumns } from "./titration.ts";
import type { Conditions, PreparedSystem } from "./types.ts";

/** One line of a figure: x rising, y null where there is nothing to show. */
export interface Series {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly (number | null)[];
}

/** n values evenly spaced from `from` to `to`, both included (n of 2 or more). */
export function evenly(from: number, to: number, n: number): number[] {
  return Array.from({ length: n }, (_, i) => from + ((to - from) * i) / (n - 1));
}

/**
 * log10 conditional constants of `metals` with `ligand` against pH, one series a metal: `free` gives the free auxiliary ligands (mol/L) at a
 * pH. A metal without a complex of the ligand has nulls. Throws AppError "unknown-component".
 */
export function conditionalConstantSeries(
  knowledge: Knowledge,
  metals: readonly ComponentId[],
  ligand: ComponentId,
  pHs: readonly number[],
  conditions: Conditions,
  free: (pH: number) => Readonly<Record<ComponentId, number>>,
): Series[] {
  return metals.map((metal) => ({
    name: metal,
    x: pHs,
    y: pHs.map(
      (pH) =>
        conditionalConstant(knowledge, { metal, ligand, pH, conditions, free: free(pH) })?.log10ConditionalK ?? null,
    ),
  }));
}

/** The share of `component` in each of its species against pH, in the limit of traces, the other components held at `freeMolPerL` (mol/L). */
export function distributionSeries(
  system: PreparedSystem,
  component: ComponentId,
  freeMolPerL: Readonly<Record<ComponentId, number>>,
  pHs: readonly number[],
): Series[] {
  const at = pHs.map((pH) => {
    const lnFree = Float64Array.from(system.components, (id) =>
      id === "H+" ? (-pH - system.log10GammaH) * Math.LN10 : Math.log(freeMolPerL[id] ?? 1e-35),
    );
    return new Map(fractionsOf(system, lnFree, component).map((f) => [f.species, f.fraction]));
  });
  return [...at[0]!.keys()].map((species) => ({ name: species, x: pHs, y: at.map((f) => f.get(species) ?? 0) }));
}

/**
 * A titration curve from 0 to `toML`: `n` even steps and, where the explicit form holds, as many points again evenly spaced in free titrant, so
 * that the break is drawn as steep as it is. Rising in volume.
 */
export function titrationSeries(titration: Titration, toML: number, n: number): CurvePoint[] {
  const even = evenly(0, toML, n);
  if (whyNotExplicit(titration) !== null) {
    const curve = generalCurve(titration);
    return [...even, ...aroundEquivalence(titration, toML)].sort((a, b) => a - b).map((v) => curve.at(v));
  }
  const curve = explicitCurve(titration);
  const low = Math.log(titration.titrant.molPerL) - 60;
  const swept = curve
    .sweep(low, Math.log(titration.titrant.molPerL), 8 * n)
    .filter((p) => p.volumeML > 0 && p.volumeML <= toML);
  return [...even.map((v) => curve.at(v)), ...thinned(swept, n)].sort((a, b) => a.volumeML - b.volumeML);
}

/** Volumes that close in on the equivalence volume of what is followed, by powers of ten of the distance. */
function aroundEquivalence(titration: Titration, toML: number): number[] {
  const columns = titrationColumns(titration);
  const followed = columns.follow === columns.titrant ? columns.partners : [columns.follow];
  const amount = followed.reduce((sum, c) => sum + (titration.sampleMolPerL[titration.system.components[c]!] ?? 0), 0);
  const equivalence = (amount * titration.sampleVolumeML) / titration.titrant.molPerL;
  const distances = [0, 1e-4, 3e-4, 1e-3, 3e-3, 1e-2, 3e-2];
  return distances
    .flatMap((d) => [equivalence * (1 - d), equivalence * (1 + d)])
    .filter((v, i, all) => v > 0 && v <= toML && all.indexOf(v) === i);
}

function thinned(points: readonly CurvePoint[], n: number): CurvePoint[] {
  const step = Math.max(1, Math.floor(points.length / n));
  return points.filter((_, i) => i % step === 0);
}
