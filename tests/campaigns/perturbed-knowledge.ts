import type { BufferRecord, Knowledge, Reaction } from "../../src/constants/knowledge.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";

/**
 * The knowledge with every constant moved by its own uncertainty: one normal deviate for each reaction, times the standard uncertainty of
 * each of its records, so that all species built on a reaction move together; one for each listed pKa of a buffer. Published transition
 * tables of dyes state no uncertainty and stay. The same seed and draw give the same knowledge.
 */
export function perturbedKnowledge(knowledge: Knowledge, seed: number, draw: number): Knowledge {
  const random = seededRandom(seed, draw);
  const movedReaction = (reaction: Reaction): Reaction => {
    const deviate = random.normal();
    const records = reaction.records.map((r) => ({ ...r, log10K: r.log10K + deviate * r.uncertainty }));
    return { ...reaction, records };
  };
  const movedBuffer = (buffer: BufferRecord): BufferRecord => ({
    ...buffer,
    pKa: buffer.pKa.map((p) => ({ ...p, value: p.value + random.normal() * p.uncertainty })),
  });
  return {
    ...knowledge,
    reactions: new Map([...knowledge.reactions].map(([id, reaction]) => [id, movedReaction(reaction)])),
    buffers: new Map([...knowledge.buffers].map(([id, buffer]) => [id, movedBuffer(buffer)])),
  };
}
