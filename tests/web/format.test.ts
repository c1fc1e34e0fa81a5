import { describe, expect, test } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { colourHex, colourMarkup } from "../../src/web/format/colour-words.ts";
import { compositionMarkup } from "../../src/web/format/composition.ts";
import { anchor, createNames } from "../../src/web/format/names.ts";
import { amount, fixed, percent, signed, signedPercent, significant } from "../../src/web/format/numbers.ts";
import { createTypesetter, formulaMarkup, reactionMarkup } from "../../src/web/format/typeset.ts";
import { listing, spacedName } from "../../src/web/format/words.ts";
import { markupText } from "../../src/web/render/markup.ts";

const knowledge = loadKnowledge();
const names = createNames(knowledge);

describe("formulaMarkup", () => {
  test.each([
    ["Zn2+", true, "Zn<sup>2+</sup>"],
    ["SO4^2-", true, "SO<sub>4</sub><sup>2−</sup>"],
    ["UO2^2+", true, "UO<sub>2</sub><sup>2+</sup>"],
    ["NH4+", true, "NH<sub>4</sub><sup>+</sup>"],
    ["Zn(NH3)2 2+", false, "Zn(NH<sub>3</sub>)<sub>2</sub><sup>2+</sup>"],
    ["CaCO3 (calcite)", false, "CaCO<sub>3</sub> (calcite)"],
    ["citrate", true, "citrate"],
    ["Zn2(methylthymol-blue) 2-", false, "Zn<sub>2</sub>(methylthymol-blue)<sup>2−</sup>"],
  ])("sets %s", (text, isIon, html) => {
    expect(formulaMarkup(text, isIon).html).toBe(html);
  });
  test("escapes what is no formula", () => {
    expect(formulaMarkup("<x>").html).toBe("&lt;x&gt;");
  });
});

describe("the typesetter of running text", () => {
  const set = createTypesetter(knowledge);
  test.each([
    ["Fe3+ beside SO4^2-.", "Fe<sup>3+</sup> beside SO<sub>4</sub><sup>2−</sup>."],
    ["p(Zn2+)", "p(Zn<sup>2+</sup>)"],
    ["log K' is 9", "log&nbsp;<i>K</i>′ is 9"],
    ["7.4e-6 mol/L", "7.4&nbsp;×&nbsp;10<sup>−6</sup> mol/L"],
    ["10^-5 and -3", "10<sup>−5</sup> and −3"],
    ["blue (HIn2-)", "blue (HIn<sup>2−</sup>)"],
    ["H2In3- free", "H<sub>2</sub>In<sup>3−</sup> free"],
    ["mordant-black-11 fades", "mordant black 11 fades"],
    ["Al(OH)3 (fresh)", "Al(OH)<sub>3</sub> (fresh)"],
    ["a <b> & pH 5-6", "a &lt;b&gt; &amp; pH 5-6"],
    ["EDTA at 2024-01", "EDTA at 2024-01"],
  ])("sets %s", (text, html) => {
    expect(set(text).html).toBe(html);
  });
  test("sets a reaction with its quotient", () => {
    expect(reactionMarkup("EDTA Zn2+ [M2L]/([M]^2[L])", set).html).toBe(
      "EDTA Zn<sup>2+</sup> [M<sub>2</sub>L]/([M]<sup>2</sup>[L])",
    );
  });
  test("loses no character of any component, species or statement of the knowledge base", () => {
    const plain = (text: string): string => text.replace(/[\^ ]/g, "").replaceAll("-", "−");
    let seen = 0;
    for (const s of knowledge.species) {
      expect(markupText(formulaMarkup(s.id)).replaceAll("-", "−").replaceAll(" ", "")).toBe(plain(s.id));
      seen++;
    }
    expect(seen).toBeGreaterThan(1000);
  });
});

test("a composition puts what is taken away last", () => {
  expect(markupText(compositionMarkup({ "H+": -2, "Zn2+": 1, ammonia: 1 }, names))).toBe("Zn2+ + NH3 − 2 H+");
});

describe("numbers as text", () => {
  test("carry a true minus and never a negative zero", () => {
    expect(fixed(-1.25, 1)).toBe("−1.3");
    expect(fixed(-0.001, 2)).toBe("0.00");
    expect(signed(0.5, 1)).toBe("+0.5");
    expect(signed(0.001, 1)).toBe("0.0");
    expect(signed(-0.5, 1)).toBe("−0.5");
  });
  test("say so when there is none", () => {
    for (const none of [null, undefined, Number.NaN, Number.POSITIVE_INFINITY]) {
      expect(fixed(none, 2)).toBe("–");
      expect(significant(none, 2)).toBe("–");
      expect(amount(none)).toBe("–");
      expect(percent(none)).toBe("–");
      expect(signedPercent(none)).toBe("–");
    }
  });
  test("keep their significant figures at every size", () => {
    expect(significant(12345, 3)).toBe("12345");
    expect(significant(123456, 3)).toBe("1.23 × 10⁵");
    expect(significant(0.00123, 3)).toBe("0.00123");
    expect(significant(0.000123, 3)).toBe("1.23 × 10⁻⁴");
    expect(significant(9.996, 3)).toBe("10.0");
  });
  test("choose the unit that reads best", () => {
    expect(amount(0.2)).toBe("0.200 mol/L");
    expect(amount(0.05, 2)).toBe("50 mmol/L");
    expect(amount(2e-5, 2)).toBe("20 µmol/L");
    expect(amount(1e-9, 2)).toBe("1.0 × 10⁻⁹ mol/L");
    expect(amount(0)).toBe("0 mol/L");
  });
  test("say that a share is very small instead of printing zeros", () => {
    expect(percent(0.0002)).toBe("<0.001 %");
    expect(percent(0)).toBe("0.00 %");
    expect(signedPercent(-0.0002)).toBe("0.00 %");
    expect(signedPercent(-0.11)).toBe("−0.11 %");
    expect(percent(12.34)).toBe("12.3 %");
    expect(percent(123.4)).toBe("123 %");
  });
});

describe("colours", () => {
  test("are named by the longest word at the first place", () => {
    expect(colourHex("wine-red to violet")).toBe(colourHex("wine-red"));
    expect(colourHex("blue-green")).not.toBe(colourHex("blue"));
    expect(colourHex("no contrast")).toBeNull();
  });
  test("always stand with their words, and every description of the knowledge base is kept", () => {
    const set = createTypesetter(knowledge);
    let swatches = 0;
    for (const dye of knowledge.indicators.values())
      for (const words of dye.colours.flatMap((c) => [c.free, c.bound])) {
        const markup = colourMarkup(words, set);
        expect(markupText(markup)).toBe(markupText(set(words)));
        if (markup.html.includes("<rect")) swatches++;
      }
    expect(swatches).toBeGreaterThan(100);
  });
});

describe("words", () => {
  test("a fact's name is spaced and pH stays pH", () => {
    expect(spacedName("titratedFraction")).toBe("titrated fraction");
    expect(spacedName("pH")).toBe("pH");
    expect(spacedName("bufferPH")).toBe("buffer pH");
  });
  test("a list reads as a sentence", () => {
    expect([listing([]), listing(["a"]), listing(["a", "b"]), listing(["a", "b", "c"])]).toEqual([
      "",
      "a",
      "a and b",
      "a, b and c",
    ]);
  });
  test("different ids have different anchors", () => {
    const ids = [...knowledge.components.keys(), ...knowledge.reactions.keys(), ...knowledge.species.map((s) => s.id)];
    expect(new Set([...new Set(ids)].map(anchor)).size).toBe(new Set(ids).size);
    for (const id of ids) expect(anchor(id)).toMatch(/^[A-Za-z0-9_-]+$/);
  });
});
