import { beforeAll, describe, expect, it } from "vitest";
import { type Engine, openEngine } from "../../src/main.ts";
import { figureSeries } from "../../src/recommendation/calculate-series.ts";
import type { Recommendation } from "../../src/recommendation/contract.ts";
import { recommendationText } from "../../src/recommendation/text.ts";

const brief = (ion: string, laboratory: object): object => ({
  title: `${ion}, an invented sample`,
  analytes: [{ ion, concentration: { value: 4, unit: "mmol/L" } }],
  laboratory,
});

describe("a laboratory that reads by instrument alone", () => {
  let engine: Engine;
  let electrode: Recommendation;
  let photometer: Recommendation;
  beforeAll(async () => {
    engine = await openEngine();
    electrode = await engine.recommend(brief("Ca2+", { detection: ["electrode"] }));
    photometer = await engine.recommend(brief("Mg2+", { detection: ["photometric"] }));
  });

  it("gets nothing but titrations with an electrode, each with the step it makes", () => {
    expect(electrode.methods.length).toBeGreaterThan(0);
    for (const stage of electrode.methods.flatMap((m) => m.stages)) {
      expect([stage.detection, stage.indicator, stage.endPoint.basis]).toEqual(["electrode", null, "electrode"]);
      expect(stage.endPoint.electrode?.id).toBe(stage.vessel.electrode);
      expect(stage.endPoint.electrode?.jumpMV).toBeGreaterThan(3 * (stage.endPoint.electrode?.readingMV ?? 0));
    }
    expect(electrode.methods[0]?.meetsRequirement).toBe(true);
    expect(recommendationText(electrode)).toContain("to the inflection of the calcium electrode");
  });

  it("gets the potential curve, steepest where the end point is marked", () => {
    const series = figureSeries(electrode, electrode.methods[0]?.id ?? "", engine.knowledge);
    const reading = series?.reading ?? expect.unreachable();
    expect(reading.kind).toBe("potential");
    const slopes = reading.values.slice(1).map((value, i) => {
      const width = (reading.volumeML[i + 1] ?? 0) - (reading.volumeML[i] ?? 0);
      return Math.abs(((value ?? 0) - (reading.values[i] ?? 0)) / width);
    });
    const steepest = slopes.indexOf(Math.max(...slopes.slice(10)));
    expect(Math.abs((reading.volumeML[steepest] ?? 0) - (reading.endPoint?.volumeML ?? 0))).toBeLessThan(0.1);
  });

  it("gets nothing but titrations with a photometer, the wavelength with the dye", () => {
    expect(photometer.methods.length).toBeGreaterThan(0);
    for (const stage of photometer.methods.flatMap((m) => m.stages)) expect(stage.detection).toBe("photometric");
    expect(photometer.methods.some((m) => m.stages[0]?.endPoint.wavelengthNm)).toBe(true);
    expect(recommendationText(photometer)).toContain("read with a photometer");
  });

  it("gets the absorbance curve with its two branches, which meet at the end point", () => {
    const series = figureSeries(photometer, photometer.methods[0]?.id ?? "", engine.knowledge);
    const reading = series?.reading ?? expect.unreachable();
    expect(reading.kind).toBe("absorbance");
    expect(reading.branches).toHaveLength(2);
    const [[[x1, y1], [x2, y2]]] = reading.branches as [[[number, number], [number, number]]];
    const end = reading.endPoint ?? expect.unreachable();
    expect(Math.abs(y1 + ((y2 - y1) * (end.volumeML - x1)) / (x2 - x1) - end.value)).toBeLessThan(1e-6);
  });

  it("is told why where no electrode follows the metal with what it has", async () => {
    const none = await engine.recommend(
      brief("Zn2+", { detection: ["electrode"], available: ["EDTA", "hexamine", "xylenol-orange"] }),
    );
    expect(none.methods).toEqual([]);
    expect(none.notes.join(" ")).toContain("No electrode on record follows Zn2+");
  });

  it("is told by numbers where the electrode's step is lost", async () => {
    const lost = await engine.recommend(
      brief("Ba2+", { detection: ["electrode"], available: ["EDTA", "Cu-EDTA", "hexamine"] }),
    );
    expect(lost.methods).toEqual([]);
    expect(lost.rejected.flatMap((r) => r.because.map((b) => b.rule)).some((id) => id.startsWith("detection/"))).toBe(
      true,
    );
  });
});
