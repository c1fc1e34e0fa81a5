/** Largest ionic strength the Davies equation is trusted to, mol/L; beyond it its value here is kept. */
export const DAVIES_LIMIT_MOL_PER_L = 0.5;

const KELVIN = 273.15;

/**
 * Relative permittivity of water at 1 bar, dimensionless, for `temperatureC` in degrees Celsius (0 to 100).
 * Source: Malmberg and Maryott, J. Res. Natl. Bur. Stand. 1956, 56, 1 (coefficients from memory).
 */
export function relativePermittivityOfWater(temperatureC: number): number {
  const t = temperatureC;
  return 87.74 - 0.40008 * t + 9.398e-4 * t * t - 1.41e-6 * t * t * t;
}

/**
 * Debye-Hueckel limiting slope A, (L/mol)^(1/2), for log10 activity coefficients in water at `temperatureC`.
 * Source: A = 1.82e6 (epsilon T)^(-3/2), Stumm and Morgan, Aquatic Chemistry, 3rd ed., chapter 3 (from memory); 0.510 at 25 C.
 */
export function debyeHueckelA(temperatureC: number): number {
  return 1.82e6 * (relativePermittivityOfWater(temperatureC) * (temperatureC + KELVIN)) ** -1.5;
}

/**
 * The ionic-strength term of the Davies equation, sqrt(I)/(1 + sqrt(I)) - 0.3 I, for I in mol/L (0 or more); from
 * 0.5 mol/L upwards its value at 0.5. Source: C. W. Davies, Ion Association, Butterworths, 1962, chapter 3 (from memory).
 */
export function daviesTerm(ionicStrengthMolPerL: number): number {
  const i = Math.min(Math.max(ionicStrengthMolPerL, 0), DAVIES_LIMIT_MOL_PER_L);
  const root = Math.sqrt(i);
  return root / (1 + root) - 0.3 * i;
}

/** Whether `ionicStrengthMolPerL` (mol/L) lies beyond the range in which the Davies equation is trusted. */
export function beyondDaviesRange(ionicStrengthMolPerL: number): boolean {
  return ionicStrengthMolPerL > DAVIES_LIMIT_MOL_PER_L;
}

/** log10 of the activity coefficient of an ion of `charge` (units of e) at I in mol/L and `temperatureC`, by the Davies equation. */
export function log10ActivityCoefficient(charge: number, ionicStrengthMolPerL: number, temperatureC: number): number {
  return -debyeHueckelA(temperatureC) * charge * charge * daviesTerm(ionicStrengthMolPerL);
}
