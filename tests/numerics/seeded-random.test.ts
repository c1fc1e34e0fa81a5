import { describe, expect, it } from "vitest";
import { seededRandom } from "../../src/numerics/seeded-random.ts";
import { expectRelative } from "../expect-relative.ts";

describe("seededRandom", () => {
  it("gives the first six words of the reference implementation for seed 42 and stream 54", () => {
    // Output of pcg32-demo of the PCG reference library (O'Neill 2014), from memory, round 1.
    const random = seededRandom(42, 54);
    const words = Array.from({ length: 6 }, () => random.nextUint32());
    expect(words).toEqual([0xa15c02b7, 0x7b47f409, 0xba1d3330, 0x83d2f293, 0xbfa4784b, 0xcbed606e]);
  });

  it("agrees with the definition of PCG32 in 64-bit integers for large seeds and streams", () => {
    const mask = (1n << 64n) - 1n;
    for (const [seed, stream] of [
      [0, 0],
      [2 ** 53 - 1, 2 ** 40 + 12345],
      [987654321987, 1],
      [2 ** 32 - 1, 2 ** 31],
    ] as const) {
      const increment = ((BigInt(stream) << 1n) | 1n) & mask;
      let state = 0n;
      const advance = (): void => {
        state = (state * 6364136223846793005n + increment) & mask;
      };
      advance();
      state = (state + BigInt(seed)) & mask;
      advance();
      const random = seededRandom(seed, stream);
      for (let k = 0; k < 200; k++) {
        const old = state;
        advance();
        const word = Number((((old >> 18n) ^ old) >> 27n) & 0xffffffffn);
        const turn = Number(old >> 59n);
        expect(random.nextUint32()).toBe(((word >>> turn) | (word << (-turn & 31))) >>> 0);
      }
    }
  });

  it("repeats itself for the same seed and differs between streams", () => {
    const draw = (seed: number, stream: number): number[] => {
      const random = seededRandom(seed, stream);
      return [random.uniform(), random.normal(), random.normal(), random.integerBelow(1000)];
    };
    expect(draw(5, 3)).toEqual(draw(5, 3));
    expect(draw(5, 3)).not.toEqual(draw(5, 4));
    expect(draw(5, 3)).not.toEqual(draw(6, 3));
  });

  it("has uniform and normal deviates with the right moments over 200,000 draws", () => {
    const random = seededRandom(1);
    const n = 200_000;
    let mean = 0;
    let normalMean = 0;
    let normalSquare = 0;
    let normalFourth = 0;
    for (let i = 0; i < n; i++) {
      mean += random.uniform() / n;
      const z = random.normal();
      normalMean += z / n;
      normalSquare += (z * z) / n;
      normalFourth += z ** 4 / n;
    }
    expectRelative(mean, 0.5, 0.005); // 4 standard errors are 0.0026
    expectRelative(1 + normalMean, 1, 0.01); // 4 standard errors are 0.009
    expectRelative(normalSquare, 1, 0.0127);
    expectRelative(normalFourth, 3, 0.03);
  });

  it("draws integers below a bound, each about equally often", () => {
    const random = seededRandom(9);
    const counts = new Array<number>(7).fill(0);
    for (let i = 0; i < 70_000; i++) {
      const value = random.integerBelow(7);
      counts[value] = counts[value]! + 1;
    }
    for (const count of counts) expectRelative(count, 10_000, 0.04);
  });
});
