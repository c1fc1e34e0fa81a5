import { describe, expect, test } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { InputError } from "../../src/errors.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { editForm, emptyForm, formFromBody, type BriefForm } from "../../src/web/form/brief-form.ts";
import { decodeBrief, encodeBrief } from "../../src/web/form/brief-link.ts";
import { formFromBrief } from "../../src/web/form/brief-to-form.ts";
import { readDecimal } from "../../src/web/form/decimal.ts";
import { briefFromForm } from "../../src/web/form/form-to-brief.ts";
import { SCENARIOS } from "../../src/web/form/scenarios.ts";

const knowledge = loadKnowledge();
const row = (ion: string, value: string, unit = "mmol/L", as = "") => ({ ion, value, unit, as });
const filled = (changes: Partial<BriefForm> = {}): BriefForm => ({
  ...emptyForm(),
  title: "A question",
  analytes: [{ ...row("zinc", "3.2"), report: "individual" }],
  ...changes,
});
const faultsOf = (form: BriefForm): readonly string[] => {
  const reading = briefFromForm(form, knowledge);
  return reading.ok ? [] : reading.faults.map((f) => f.field);
};

describe("readDecimal", () => {
  test.each([
    ["0.25", 0.25],
    [" 2.5e-4 ", 2.5e-4],
    ["-3", -3],
    ["\u22123", -3],
    [".5", 0.5],
    ["+1E3", 1000],
  ])("reads %j", (typed, value) => {
    expect(readDecimal(typed)).toEqual({ ok: true, value });
  });
  test.each(["", " ", "1,5", "1 000", "0x10", "Infinity", "NaN", "1e400", "five", "1.", "--1", "1e"])(
    "refuses %j",
    (typed) => {
      expect(readDecimal(typed).ok).toBe(false);
    },
  );
});

describe("briefFromForm", () => {
  test("turns what was typed into a brief that the reader accepts", () => {
    const reading = briefFromForm(
      filled({ matrix: [row("", ""), row("Fe(III)", "8", "mg/L"), row("", "")] }),
      knowledge,
    );
    expect(reading.ok && reading.brief["matrix"]).toEqual([
      { component: "Fe(III)", concentration: { value: 8, unit: "mg/L" } },
    ]);
    expect(reading.ok && readBrief(reading.brief, knowledge).analytes[0]?.component).toBe("Zn2+");
  });
  test("never reads an empty number as zero", () => {
    expect(faultsOf(filled({ analytes: [{ ...row("Zn2+", ""), report: "individual" }] }))).toEqual([
      "analytes[0].value",
    ]);
    expect(faultsOf(filled({ buretteML: "" }))).toEqual(["buretteML"]);
    expect(faultsOf(filled({ requirement: " " }))).toEqual(["requirement"]);
  });
  test("puts each fault at the field it was typed in, counting rows as they stand in the form", () => {
    const form = filled({ matrix: [row("", ""), row("unobtanium", "1"), row("", "3"), row("Cl-", "1", "stone/L")] });
    expect(faultsOf({ ...form, matrix: [...form.matrix.slice(0, 2)] })).toEqual(["matrix[1].ion"]);
    expect(faultsOf(form)).toContain("matrix[2].ion");
    expect(faultsOf(filled({ matrix: [row("", ""), row("Cl-", "1", "stone/L")] }))).toEqual(["matrix[1].unit"]);
    expect(faultsOf(filled({ matrix: [row("Cl-", "1", "mg/L", "Xx9")] }))).toEqual(["matrix[0].as"]);
    expect(faultsOf(filled({ volumeML: "50", titrationVolumeML: "20" }))).toEqual(["titrationVolumeML"]);
    expect(faultsOf(filled({ temperatureC: "500" }))).toEqual(["temperatureC"]);
    expect(faultsOf(filled({ avoid: ["no-such-reagent"] }))).toEqual(["avoid"]);
    expect(faultsOf(filled({ matrix: [row("Zn2+", "1")] }))).toHaveLength(1);
    expect(faultsOf(filled())).toEqual([]);
  });
  test("an empty form says what is missing", () => {
    expect(faultsOf({ ...emptyForm(), detection: [] })).toEqual(["analytes[0].ion", "title", "detection"]);
  });
});

describe("the form's rows", () => {
  test("are added and removed without losing what was typed", () => {
    const form = filled({ matrix: [row("Cl-", "x"), row("Fe3+", "2")] });
    const added = editForm(form, "add-matrix");
    expect(added?.matrix.slice(0, 2)).toEqual(form.matrix);
    expect(added?.matrix).toHaveLength(4);
    expect(editForm(form, "remove-matrix-0")?.matrix).toEqual([row("Fe3+", "2")]);
    expect(editForm(form, "remove-analyte-0")?.analytes).toHaveLength(1);
    expect(editForm(form, "recommend")).toBeNull();
    let many = form;
    for (let i = 0; i < 9; i++) many = editForm(many, "add-analyte") ?? many;
    expect(many.analytes).toHaveLength(6);
  });
  test("are read from a body in their order, single or several", () => {
    const form = formFromBody({
      title: "t",
      analyteIon: "Zn2+",
      analyteValue: "1",
      analyteUnit: "g/L",
      analyteAs: "",
      analyteReport: "sum",
      matrixIon: ["a", "b"],
      matrixValue: ["1", ""],
      matrixUnit: ["mg/L", "mol/L"],
      matrixAs: ["CaO", ""],
      detection: "electrode",
      shelf: "listed",
    });
    expect(form.analytes).toEqual([{ ...row("Zn2+", "1", "g/L"), report: "sum" }]);
    expect(form.matrix).toEqual([row("a", "1", "mg/L", "CaO"), row("b", "", "mol/L")]);
    expect([form.detection, form.shelf, form.buretteML]).toEqual([["electrode"], "listed", ""]);
    expect(formFromBody({}).analytes).toHaveLength(1);
  });
});

describe("links", () => {
  test("carry a brief there and back", () => {
    const brief = { title: "µ ⇌ x", n: [1, 2] };
    expect(decodeBrief(encodeBrief(brief))).toEqual(brief);
    expect(encodeBrief(brief)).toMatch(/^[\w-]+$/);
  });
  test.each(["", "%%%", "eyJ", "a".repeat(60_000)])("refuse what is no brief", (text) => {
    expect(() => decodeBrief(text)).toThrow(InputError);
  });
  test("fill the form again with any brief, however incomplete", () => {
    for (const scenario of SCENARIOS) {
      const reading = briefFromForm(formFromBrief(scenario.brief), knowledge);
      expect(reading.ok && readBrief(reading.brief, knowledge)).toEqual(readBrief(scenario.brief, knowledge));
    }
    expect(formFromBrief({}).analytes).toHaveLength(1);
    expect(formFromBrief({ analytes: [undefined, { ion: "Zn2+" }] }).analytes[1]?.ion).toBe("Zn2+");
  });
});

describe("demo scenarios", () => {
  test("are read without fault, and are at least four with different ids", () => {
    expect(SCENARIOS.length).toBeGreaterThanOrEqual(4);
    expect(new Set(SCENARIOS.map((s) => s.id)).size).toBe(SCENARIOS.length);
    for (const s of SCENARIOS) expect(readBrief(s.brief, knowledge).notes).toEqual([]);
  });
});
