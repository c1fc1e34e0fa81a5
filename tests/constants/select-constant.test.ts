import { describe, expect, test } from "vitest";
import { AppError } from "../../src/errors.ts";
import type { ConstantRecord } from "../../src/constants/knowledge.ts";
import { selectRecord } from "../../src/constants/select-constant.ts";
import { reaction } from "./read-equilibria.ts";

let next = 1;
const record = (over: Partial<ConstantRecord> & { id?: string }): ConstantRecord => {
  const { id = String(next++), ...rest } = over;
  return {
    log10K: 5,
    ionicStrengthMolPerL: 0.1,
    temperatureC: 25,
    uncertainty: 0.1,
    uncertaintyStated: true,
    doubtful: false,
    provenance: { source: "s", record: id, basis: "read", confidence: "high" },
    ...rest,
  };
};
const at = (ionicStrengthMolPerL: number, temperatureC = 25) => ({ ionicStrengthMolPerL, temperatureC });
const chosen = (records: ConstantRecord[], conditions = at(0.1)) =>
  selectRecord({ id: "r", records }, conditions).record;

describe("selectRecord", () => {
  test("takes a record that is not doubtful before a nearer doubtful one", () => {
    const sound = record({ ionicStrengthMolPerL: 0.5 });
    expect(chosen([record({ doubtful: true }), sound])).toBe(sound);
  });

  test("takes a doubtful record within reach before a sound one beyond 1 mol/L, at the same rank by distance", () => {
    const near = record({ doubtful: true });
    expect(chosen([record({ ionicStrengthMolPerL: 3 }), near])).toBe(near);
    const sound = record({ ionicStrengthMolPerL: 1 });
    expect(chosen([near, sound])).toBe(sound);
  });

  test("measures ionic strength on a root scale: between 0 and 0.1 the turning point is 0.025", () => {
    const zero = record({ ionicStrengthMolPerL: 0 });
    const tenth = record({ ionicStrengthMolPerL: 0.1 });
    expect(chosen([zero, tenth], at(0.0249))).toBe(zero);
    expect(chosen([zero, tenth], at(0.0251))).toBe(tenth);
  });

  test("weighs ten kelvin as a tenth of root ionic strength", () => {
    const cool = record({ temperatureC: 15, ionicStrengthMolPerL: 0.1 });
    const near = record({ ionicStrengthMolPerL: (Math.sqrt(0.1) + 0.09) ** 2 });
    const far = record({ ionicStrengthMolPerL: (Math.sqrt(0.1) + 0.11) ** 2 });
    expect(chosen([cool, near])).toBe(near);
    expect(chosen([cool, far])).toBe(cool);
  });

  test("prefers the potassium background, and an unstated one, to sodium and tetraalkylammonium", () => {
    const potassium = record({ medium: "K+ background" });
    const sodium = record({ medium: "Na+ background", uncertainty: 0.01 });
    const large = record({ medium: "tetraalkylammonium background", uncertainty: 0.01 });
    expect(chosen([sodium, large, potassium])).toBe(potassium);
    const unstated = record({});
    expect(chosen([sodium, unstated])).toBe(unstated);
  });

  test("takes another background at the working ionic strength before an extrapolation to zero", () => {
    const sodium = record({ medium: "Na+ background" });
    expect(chosen([record({ ionicStrengthMolPerL: 0 }), sodium])).toBe(sodium);
  });

  test("takes a value that was read before a recalled one nearer by, but not a doubtful one", () => {
    const recalled = record({ provenance: { source: "s", basis: "memory", confidence: "high" } });
    const zero = record({ ionicStrengthMolPerL: 0, temperatureC: 20 });
    expect(chosen([recalled, zero])).toBe(zero);
    expect(chosen([recalled, record({ doubtful: true })])).toBe(recalled);
  });

  test("breaks ties by the smaller uncertainty, then by the smaller record id, whatever the order", () => {
    const wide = record({ uncertainty: 0.2 });
    const narrow = record({ uncertainty: 0.05 });
    expect(chosen([wide, narrow])).toBe(narrow);
    const first = record({ id: "999" });
    const second = record({ id: "1000" });
    expect(chosen([second, first])).toBe(first);
    expect(chosen([first, second])).toBe(first);
  });

  test("lists what was passed over, best first, and says why", () => {
    const best = record({});
    const warm = record({ temperatureC: 37 });
    const doubtful = record({ doubtful: true });
    const selection = selectRecord({ id: "r", records: [doubtful, warm, best] }, at(0.1));
    expect(selection.passedOver).toEqual([warm, doubtful]);
    expect(selection.reason).toBe("nearest in ionic strength, temperature, background and basis");
    expect(selectRecord({ id: "r", records: [best] }, at(0.1)).reason).toBe("the only record");
  });

  test("refuses a reaction without records", () => {
    expect(() => selectRecord({ id: "empty", records: [] }, at(0.1))).toThrow(AppError);
    expect(() => selectRecord({ id: "empty", records: [] }, at(0.1))).toThrow(/empty has no record/);
  });

  // Records 108224 (9.52, Na+), 108225 (10.19, K+), 108226 (10.37, tetraalkylammonium), 108237 (10.948 at I = 0)
  test.each([
    [0.1, "108225"],
    [0.5, "108225"],
    [0.03, "108225"],
    [0.01, "108237"],
  ])("takes for the first protonation of EDTA at I = %d the record %s", (ionicStrength, id) => {
    const { record: found } = selectRecord(reaction("EDTA H+ [HL]/([L][H])"), at(ionicStrength));
    expect(found.provenance.record).toBe(id);
  });

  test.each([
    ["hexamine H+ [HL]/([L][H])", 4.93], // read, before the remembered 5.13
    ["PAR Zn2+ [ML]/([M][L])", 11.5], // read, before the remembered 12.4
    ["calcon H+ [HL]/([L][H])", 13.5], // remembered, before the doubtful 13.80
    ["pyrocatechol-violet H+ [HL]/([L][H])", 11.7], // remembered with its metal constants, before the doubtful 12.8
  ])("takes for %s the value %d at 20 C", (id, expected) => {
    expect(selectRecord(reaction(id), at(0.1, 20)).record.log10K).toBe(expected);
  });

  test("takes for water at 10 C and low ionic strength the record of 10 C", () => {
    const { record: found } = selectRecord(reaction("hydroxide H+ [HL]/([L][H])"), at(0, 10));
    expect(found).toMatchObject({ log10K: 14.533, temperatureC: 10 });
  });
});
