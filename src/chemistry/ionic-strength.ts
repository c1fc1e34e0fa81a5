import type { PreparedSystem, SolveResult } from "./types.ts";

/** Ionic strength and the counter-ions that make the solution neutral, all mol/L. */
export interface IonicStrength {
  readonly molPerL: number;
  readonly counterCationMolPerL: number; // singly charged inert cations added (Na+, K+)
  readonly counterAnionMolPerL: number; // singly charged inert anions added (NO3-, ClO4-)
}

/**
 * Ionic strength (mol/L) of a solved system made neutral: half the sum of c z^2 of all species, of the inert ions and of the singly
 * charged counter-ions that balance the charge left over. `inertIonsMolPerL` is the sum of c z^2 of inert ions that are in
 * already, `inertChargeMolPerL` the sum of their c z (default 0: as much cation as anion).
 */
export function ionicStrengthOf(
  system: PreparedSystem,
  result: Pick<SolveResult, "speciesMolPerL">,
  inertIonsMolPerL: number,
  inertChargeMolPerL = 0,
): IonicStrength {
  let charge = inertChargeMolPerL;
  let sum = inertIonsMolPerL;
  for (let i = 0; i < system.charges.length; i++) {
    const z = system.charges[i]!;
    const c = result.speciesMolPerL[i]!;
    charge += c * z;
    sum += c * z * z;
  }
  return {
    molPerL: (sum + Math.abs(charge)) / 2,
    counterCationMolPerL: Math.max(-charge, 0),
    counterAnionMolPerL: Math.max(charge, 0),
  };
}
