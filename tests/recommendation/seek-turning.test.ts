import { describe, expect, it } from "vitest";
import { seekTurning } from "../../src/recommendation/seek-turning.ts";

const RANGE = { lowest: 1e-9, highest: 2 };
const seek = async (from: number, direction: "up" | "down", turns: (x: number) => boolean, range = RANGE) => {
  const looked: number[] = [];
  const found = await seekTurning({ from, ...range }, direction, (x) => {
    looked.push(x);
    return Promise.resolve(turns(x));
  });
  return { found, looked };
};

describe("seekTurning", () => {
  it.each([
    ["up, far", 0.001, "up", (x: number) => x >= 0.0567, 0.0567],
    ["up, near", 0.001, "up", (x: number) => x >= 0.00103, 0.00103],
    ["up, very near", 0.001, "up", (x: number) => x >= 0.0010002, 0.0010002],
    ["down, far", 0.001, "down", (x: number) => x <= 0.0000133, 0.0000133],
    ["down, near", 0.001, "down", (x: number) => x <= 0.00097, 0.00097],
    ["up from nothing", 0, "up", (x: number) => x >= 0.00321, 0.00321],
  ] as const)(
    "finds the place, 5 %% at the most beyond it, with nine tenths of the change idle: %s",
    async (_what, from, direction, turns, at) => {
      const { found, looked } = await seek(from, direction, turns);
      if (found.kind !== "turns") throw new Error(found.kind);
      expect(turns(found.to)).toBe(true);
      const beyond = direction === "up" ? found.to / at : at / found.to;
      expect(beyond).toBeGreaterThanOrEqual(1);
      expect(beyond).toBeLessThanOrEqual(1.05);
      expect(turns(from + 0.9 * (found.to - from))).toBe(false);
      if (from > 0) expect(turns(from * (found.to / from) ** 0.9)).toBe(false);
      expect(found.unchangedAt.every((x) => !turns(x) && looked.includes(x))).toBe(true);
      expect(looked.length).toBeLessThanOrEqual(20);
    },
  );
  it("says up to where nothing turns, and stays within what a brief may say", async () => {
    const { found, looked } = await seek(0.1, "up", () => false);
    expect(found).toEqual({ kind: "nothing", upTo: 2 });
    expect(Math.max(...looked)).toBe(2);
    expect((await seek(0.001, "down", () => false)).found).toEqual({ kind: "nothing", upTo: 0.00001 });
    expect((await seek(0, "down", () => true)).looked).toEqual([]);
  });
  it("does not call a place the smallest change where nine tenths of it turn as well", async () => {
    // Turns in an island that the first looks step over, and for good from 4 times on.
    const island = (x: number): boolean => x >= 0.004 || (x > 0.0034 && x < 0.00385);
    const { found } = await seek(0.001, "up", island);
    if (found.kind !== "turns") throw new Error(found.kind);
    expect(island(found.to)).toBe(true);
    expect(island(0.001 + 0.9 * (found.to - 0.001))).toBe(false);
  });
  it("ends with the rejection of what it asks, which is how it is stopped", async () => {
    await expect(
      seekTurning({ from: 1, lowest: 0.1, highest: 100 }, "up", () => Promise.reject(new Error("stopped"))),
    ).rejects.toThrow("stopped");
  });
});
