import type { SolveStructure } from "./solve-structure.ts";

const ROUNDS = 30;
const CLOSE_LN = 0.5; // balances within a factor of e^0.5: Newton takes over
const MAX_MOVE_LN = 30;
const NEUTRAL_LN = Math.log(1e-7); // where a component of mixed sign (protons) starts

/**
 * Fills `scratch.x` with a start that needs no knowledge of the answer: every free concentration begins at its total,
 * then each balance in turn is scaled towards its total in log space (no overflow at any constants). A component that some
 * species holds negatively (protons) stays at 1e-7 mol/L here. The scaling is the positive continued fraction idea of Carrayrou,
 * Mose and Behra, AIChE J. 48 (2002) 894, divided by the stoichiometry of the dominant species.
 */
export function coldStart(st: SolveStructure): void {
  const { n } = st;
  const { x, exponent, base, total } = st.scratch;
  const { start, column, value } = st.rows;
  const { balanceStart, balanceRow, balanceValue, mixedSign } = st;
  for (let j = 0; j < n; j++) x[j] = mixedSign[j] === 1 ? NEUTRAL_LN : Math.log(total[j]!);
  for (let round = 0; round < ROUNDS; round++) {
    let worst = 0;
    for (let j = 0; j < n; j++) {
      if (mixedSign[j] === 1) continue;
      let largest = -Infinity;
      for (let p = balanceStart[j]!; p < balanceStart[j + 1]!; p++) {
        const i = balanceRow[p]!;
        let e = base[i]!;
        for (let q = start[i]!; q < start[i + 1]!; q++) e += value[q]! * x[column[q]!]!;
        exponent[i] = e;
        if (e > largest) largest = e;
      }
      let sum = 0;
      let squares = 0;
      for (let p = balanceStart[j]!; p < balanceStart[j + 1]!; p++) {
        const weight = balanceValue[p]! * Math.exp(exponent[balanceRow[p]!]! - largest);
        sum += weight;
        squares += weight * balanceValue[p]!;
      }
      const gap = Math.log(total[j]!) - largest - Math.log(sum);
      worst = Math.max(worst, Math.abs(gap));
      const move = (gap * sum) / squares;
      x[j] = x[j]! + Math.max(-MAX_MOVE_LN, Math.min(MAX_MOVE_LN, move));
    }
    if (worst < CLOSE_LN) return;
  }
}
