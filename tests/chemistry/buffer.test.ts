import { describe, expect, test } from "vitest";
import {
  bufferCapacity,
  bufferComposition,
  bufferModel,
  bufferNeeded,
  pHDrop,
  protonsHeld,
} from "../../src/chemistry/buffer.ts";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { protonsSetFree, vesselBufferCapacity } from "../../src/chemistry/proton-balance.ts";
import type { BufferRecord } from "../../src/constants/knowledge.ts";
import { expectRelative } from "../expect-relative.ts";
import { zincKnowledge } from "./small-knowledge.ts";

const knowledge = zincKnowledge();
const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };
const provenance = { source: "made-up", basis: "computed", confidence: "high" } as const;
const ammonia: BufferRecord = {
  id: "ammonia",
  name: "ammonia",
  component: "ammonia",
  counterIon: { charge: -1 },
  kind: "pair",
  pKa: [],
  workingPH: [8.5, 10.5],
  usualMolPerL: [0.05, 0.5],
  provenance,
  precipitates: [],
  incompatible: [],
  special: false,
};
const listed: BufferRecord = {
  ...ammonia,
  component: null,
  pKa: [{ value: 9.3, uncertainty: 0.05, acidCharge: 1, provenance }],
};

describe("buffers", () => {
  const model = bufferModel(knowledge, ammonia, conditions);

  test("capacity is 2.303 C x (1 - x) plus water's ions (Van Slyke)", () => {
    const pH = 9.5;
    const h = 10 ** (-pH - model.log10GammaH);
    const share = 1 / (1 + 10 ** 9.3 * h);
    const expected = Math.LN10 * (0.2 * share * (1 - share) + h + 10 ** model.log10Kw / h);
    expectRelative(bufferCapacity(model, 0.2, pH), expected, 1e-5);
  });

  test("a buffer by its listed pKa is that by its component, where the constants are the same", () => {
    const byList = bufferModel(knowledge, listed, conditions);
    expectRelative(byList.log10BetaH[0]!, model.log10BetaH[0]!, 1e-9);
    expect(byList.baseCharge).toBe(0);
  });

  test("a negatively charged acid moves with ionic strength, ammonium does not", () => {
    const citrateLike = {
      ...listed,
      pKa: [
        { value: 6.4, uncertainty: 0.05, acidCharge: -2, provenance },
        { value: 3.1, uncertainty: 0.05, acidCharge: 0, provenance },
      ],
    };
    const moved = bufferModel(knowledge, citrateLike, conditions);
    expect(moved.log10BetaH).toHaveLength(2);
    expect(moved.log10BetaH[0]!).toBeLessThan(6.4 - 0.5);
    expect(moved.baseCharge).toBe(-3);
  });

  test("forms add up to the amount and the solution is neutral with its inert ions", () => {
    const at = bufferComposition(model, 0.2, 9.8);
    expectRelative(
      at.formsMolPerL.reduce((a, b) => a + b, 0),
      0.2,
      1e-12,
    );
    const charge = at.formsMolPerL[1]! + at.hydrogenMolPerL - at.hydroxideMolPerL;
    expectRelative(at.inertAnionMolPerL, charge, 1e-12);
    expect(at.inertCationMolPerL).toBe(0);
  });

  test("a small drop is the protons over the capacity, and the balance closes for a large one", () => {
    expectRelative(pHDrop(model, 0.2, 9.5, 1e-5), 1e-5 / bufferCapacity(model, 0.2, 9.5), 1e-3);
    const drop = pHDrop(model, 0.02, 10, 0.01);
    expectRelative(protonsHeld(model, 0.02, 10 - drop), protonsHeld(model, 0.02, 10) + 0.01, 1e-9);
    expect(pHDrop(model, 0.2, 9.5, -1e-4)).toBeLessThan(0);
  });

  test("the amount needed just keeps the drop, nothing is needed for no protons, and too many have no answer", () => {
    const needed = bufferNeeded(model, 10, 0.004, 0.1, 1)!;
    expectRelative(pHDrop(model, needed, 10, 0.004), 0.1, 1e-6);
    expect(bufferNeeded(model, 10, 0, 0.1, 1)).toBe(0);
    expect(bufferNeeded(model, 10, 0.5, 0.1, 1)).toBe(null);
  });

  test("a strong acid holds its pH by its own protons", () => {
    const acid = bufferModel(knowledge, { ...ammonia, kind: "strong-acid", component: null }, conditions);
    expectRelative(bufferCapacity(acid, 0.1, 1), Math.LN10 * 10 ** (-1 - acid.log10GammaH), 1e-5);
    expect(bufferComposition(acid, 0.1, 1).formsMolPerL).toEqual([]);
  });

  test("complexation at pH 5 frees two protons per zinc, less what EDTA has lost already", () => {
    const system = prepareSystem(knowledge, ["Zn2+", "EDTA"], conditions, { solids: () => false });
    const h = -5;
    const apart = { system, totals: [0, 0, 0.001] };
    const together = { system, totals: [0, 0.001, 0.001] };
    const freed = protonsSetFree(apart, together, h)!;
    const [b1, b2, b3, b4] = [10.2, 16.3, 19, 21].map((b, n) => 10 ** (b + (n + 1) * h));
    const mean = (b1! + 2 * b2! + 3 * b3! + 4 * b4!) / (1 + b1! + b2! + b3! + b4!);
    expect(mean).toBeGreaterThan(1.9);
    expectRelative(freed, 0.001 * mean, 0.02);
    expectRelative(vesselBufferCapacity({ system, totals: [0, 0, 0] }, h)!, Math.LN10 * 1e-5, 1e-3);
  });
});
