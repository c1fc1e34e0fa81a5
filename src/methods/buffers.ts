import type { BufferRecord, Knowledge } from "../constants/knowledge.ts";
import type { Shelf } from "./shelf.ts";

/** Buffers that hold this pH, the best suited first: nearest pKa, on the shelf, not precipitating or disturbing by record. */
export function buffersFor(pH: number, knowledge: Knowledge, shelf: Shelf, blind: ReadonlySet<string>): BufferRecord[] {
  const distance = (b: BufferRecord): number => {
    if (b.kind !== "pair") return 0.2; // strong acid or alkali holds its own pH by amount
    return Math.min(...b.pKa.map((p) => Math.abs(p.value - pH)), 3);
  };
  return [...knowledge.buffers.values()]
    .filter((b) => shelf(b.id) && !blind.has(b.id) && pH >= b.workingPH[0] - 0.05 && pH <= b.workingPH[1] + 0.05)
    .sort((a, b) => rankOfBuffer(a) + distance(a) - (rankOfBuffer(b) + distance(b)));
}

/** Order of the bench among buffers of one pH, before chemistry is calculated (common practice): the usual ones go first. */
const BENCH_ORDER = [
  "ammonia",
  "hexamine",
  "acetate",
  "nitric-acid",
  "sodium-hydroxide",
  "chloroacetate",
  "potassium-hydroxide",
  "hydrochloric-acid",
  "glycine",
  "triethanolamine-buffer",
  "borate",
  "formate",
  "perchloric-acid",
  "diethylamine",
  "ethanolamine",
  "tris",
  "imidazole",
  "piperidine",
  "carbonate",
];
const rankOfBuffer = (b: BufferRecord): number => {
  const i = BENCH_ORDER.indexOf(b.id);
  return (i < 0 ? BENCH_ORDER.length : i) * 0.3;
};

/** Those on every bench (common practice). */
const USUAL: ReadonlySet<string> = new Set([
  "ammonia",
  "hexamine",
  "acetate",
  "nitric-acid",
  "hydrochloric-acid",
  "sodium-hydroxide",
  "potassium-hydroxide",
]);

/**
 * Where in the window of a dye a usual buffer holds, if at `pH` none does: the half unit of pH nearest to it, or null. A procedure that
 * works from pH 7 to 8.5 is done at 8.5 in ammonia rather than at 7.5 in a buffer that has to be ordered (common practice).
 */
export function pHOfUsualBuffer(
  pH: number,
  [low, high]: readonly [number, number],
  knowledge: Knowledge,
  shelf: Shelf,
): number | null {
  const usual = (at: number): boolean => buffersFor(at, knowledge, shelf, new Set()).some((b) => USUAL.has(b.id));
  if (usual(pH)) return null;
  const halves = Array.from(
    { length: Math.floor(2 * high) - Math.ceil(2 * low) + 1 },
    (_, i) => Math.ceil(2 * low) / 2 + i / 2,
  );
  return halves.filter(usual).sort((a, b) => Math.abs(a - pH) - Math.abs(b - pH))[0] ?? null;
}

/** Concentration a buffer is used at: the geometric middle of its usual range; strong acid and alkali as the pH demands. */
export function bufferAmount(buffer: BufferRecord, pH: number): number {
  if (buffer.kind === "strong-acid") return Number((10 ** -pH).toPrecision(2));
  if (buffer.kind === "strong-base") return Number((10 ** (pH - 13.8)).toPrecision(2));
  return Number(Math.sqrt(buffer.usualMolPerL[0] * buffer.usualMolPerL[1]).toPrecision(1));
}

/** Titrant strength for which the titre fills a good part of the burette. */
export function strengthFor(amountMol: number, strengths: readonly number[], buretteML: number): number {
  const titre = (c: number): number => (amountMol / c) * 1000;
  const good = [...strengths].sort((a, b) => a - b).filter((c) => titre(c) <= 0.92 * buretteML);
  // The weakest strength that still fits the burette gives the largest titre.
  return good[0] ?? Math.max(...strengths);
}
