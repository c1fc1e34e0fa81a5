import type { ManyAtoms } from "./solve-eliminated-many.ts";
import type { EliminatedStructure } from "./solve-eliminated-structure.ts";

const MOST_TERMS = 400; // beyond it the compiler of the engine takes longer than it is worth

/**
 * The balances of one structure written out term by term: from free concentrations and totals (mol/L) of the kept components and totals of
 * the eliminated ones to `gradient`, `hessian` (lower triangle) and `freeGone`; constants as in `EliminatedTerms`.
 */
export type UnrolledBalances = (
  free: Float64Array,
  keptTotal: Float64Array,
  goneTotal: Float64Array,
  constant: Float64Array,
  polynomial: Float64Array,
  mixedBeta: Float64Array,
  gradient: Float64Array,
  hessian: Float64Array,
  freeGone: Float64Array,
  manyAtoms: ManyAtoms,
  least: number,
  withMatrix: boolean,
) => void;

/** One term: its name in the code, and the power of each kept component it holds. */
interface Term {
  readonly name: string;
  readonly exponents: ReadonlyMap<number, number>;
}

/**
 * Compiles the balances of a structure into straight code, four times as fast as the loops that read the structure but worth its making
 * only for a structure met many thousand times. The code does the same operations in the same order as the loops, so that no digit depends on
 * how often a structure was met before. Null where it is too large, where species with several atoms hold a kept component, or
 * where the process may not make code.
 */
export function unrollBalances(structure: EliminatedStructure): UnrolledBalances | null {
  if (structure.nCoefficients + structure.mixed.n > MOST_TERMS || structure.homonuclear.segment.length > 0) return null;
  try {
    // The code is made of the numbers of a structure alone; nothing that came from outside is in it.
    // eslint-disable-next-line @typescript-eslint/no-implied-eval
    return new Function(...PARAMETERS, sourceOf(structure)) as UnrolledBalances;
  } catch {
    return null;
  }
}

const PARAMETERS = [
  "free",
  "kept",
  "gone",
  "C",
  "P",
  "B",
  "gradient",
  "hessian",
  "freeGone",
  "many",
  "least",
  "withMatrix",
];

function sourceOf(structure: EliminatedStructure): string {
  const { k, nBlocks, powerStart } = structure;
  const lines = ['"use strict";'];
  for (let l = 0; l < k; l++) {
    lines.push(`const x${l}_1 = free[${l}]; let g${l} = -kept[${l}];`);
    const highest = powerStart[l + 1]! - powerStart[l]!;
    for (let power = 2; power <= highest; power++) lines.push(`const x${l}_${power} = x${l}_${power - 1} * x${l}_1;`);
    for (let c = 0; c <= l; c++) lines.push(`let h${l}_${c} = 0;`);
  }
  let coefficient = 0;
  for (let block = 0; block < nBlocks; block++) {
    const found = termsOf(structure, block, coefficient);
    coefficient = found.coefficient;
    lines.push(...found.lines, ...blockLines(structure, block, found.terms));
  }
  for (let l = 0; l < k; l++) lines.push(`gradient[${l}] = g${l};`);
  lines.push("if (!withMatrix) return;");
  for (let l = 0; l < k; l++) {
    lines.push(`hessian[${l * k + l}] = kept[${l}] === 0 ? 1 : h${l}_${l};`);
    for (let c = 0; c < l; c++) lines.push(`hessian[${l * k + c}] = h${l}_${c};`);
  }
  return lines.join("\n");
}

/** The terms of a block with the lines that compute them. */
function termsOf(
  structure: EliminatedStructure,
  block: number,
  from: number,
): { readonly terms: readonly Term[]; readonly lines: readonly string[]; readonly coefficient: number } {
  const { segmentStart, ligand, mixed, segmentLength } = structure;
  const terms: Term[] = [];
  const lines: string[] = [];
  let coefficient = from;
  for (let s = segmentStart[block]!; s < segmentStart[block + 1]!; s++)
    for (let power = 1; power <= segmentLength[s]!; power++) {
      const name = `t${coefficient}`;
      lines.push(`const ${name} = P[${coefficient}] * x${ligand[s]!}_${power};`);
      terms.push({ name, exponents: new Map([[ligand[s]!, power]]) });
      coefficient++;
    }
  for (let i = mixed.blockStart[block]!; i < mixed.blockStart[block + 1]!; i++) {
    const name = `u${i}`;
    const exponents = new Map<number, number>();
    for (let p = mixed.start[i]!; p < mixed.start[i + 1]!; p++)
      exponents.set(ligand[mixed.segment[p]!]!, mixed.exponent[p]!);
    lines.push(`const ${name} = B[${i}] * ${[...exponents].map(([l, power]) => `x${l}_${power}`).join(" * ")};`);
    terms.push({ name, exponents });
  }
  return { terms, lines, coefficient };
}

/** The lines that add a block to balances and matrix; m its free component, v the inverse of the curvature towards ln m. */
function blockLines(structure: EliminatedStructure, block: number, terms: readonly Term[]): string[] {
  const { homonuclear } = structure;
  const lines: string[] = [];
  const m = `m${block}`;
  const v = `v${block}`;
  if (block > 0) {
    const total = `gone[${block - 1}]`;
    const sum = [`C[${block}]`, ...terms.map(({ name }) => name)].join(" + ");
    if (homonuclear.blockStart[block + 1]! > homonuclear.blockStart[block]!)
      lines.push(`const ${m} = many.free(${block}, ${sum}, ${total}, least), ${v} = many.inverseCurvature;`);
    else lines.push(`const ${m} = ${total} / (${sum}), ${v} = ${total} > 0 ? 1 / ${total} : 0;`);
    lines.push(`freeGone[${block - 1}] = ${m};`);
  }
  const times = block > 0 ? `${m} * ` : "";
  const held = [...new Set(terms.flatMap(({ exponents }) => [...exponents.keys()]))].sort((a, b) => a - b);
  for (const l of held) {
    const f = `f${block}_${l}`;
    lines.push(`const ${f} = ${times}(${weighted(terms, (e) => [e.get(l) ?? 0])}); g${l} += ${f};`);
    const pure = terms.filter(({ exponents }) => exponents.size === 1 && exponents.has(l));
    const second = weighted(pure, (e) => [e.get(l)!, e.get(l)!]);
    lines.push(`h${l}_${l} = h${l}_${l} + ${times}(${second})${block > 0 ? ` - ${f} * ${v} * ${f}` : ""};`);
    if (block > 0) for (const c of held) if (c < l) lines.push(`h${l}_${c} -= ${f} * ${v} * f${block}_${c};`);
  }
  for (const { name, exponents } of terms)
    if (exponents.size > 1)
      for (const [l, power] of exponents)
        for (const [c, other] of exponents)
          if (c <= l) lines.push(`h${l}_${c} += ${times}${name} * ${power} * ${other};`);
  return lines;
}

/** Sum of the terms, each times its weights one after another; those of weight nothing left out. */
const weighted = (terms: readonly Term[], weights: (exponents: Term["exponents"]) => readonly number[]): string =>
  terms
    .filter(({ exponents }) => !weights(exponents).includes(0))
    .map(({ name, exponents }) => [name, ...weights(exponents).filter((w) => w !== 1)].join(" * "))
    .join(" + ");
