import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { Markup, markupText } from "../../src/web/render/markup.ts";
import { printable, renderView, strictModel } from "../../src/web/render/render-view.ts";

const shell = { title: "T", cssHref: "/c", knowledge: "k", navigation: [] };

describe("printable", () => {
  test("escapes text and leaves our own markup alone", () => {
    expect(printable(`<a href="x">&'`)).toBe("&lt;a href=&quot;x&quot;&gt;&amp;&#39;");
    expect(printable(new Markup("<sub>2</sub>"))).toBe("<sub>2</sub>");
  });
  test("refuses a missing name, a number and NaN instead of printing them", () => {
    for (const value of [undefined, null, 5, Number.NaN, {}, true])
      expect(() => printable(value)).toThrow(/view prints/);
    expect(printable("")).toBe("");
  });
});

describe("strictModel", () => {
  test("throws at a name the model does not have, at any depth, and reads those it has", () => {
    const model = strictModel({ a: { b: [{ c: "x" }] } });
    expect(model.a.b[0]?.c).toBe("x");
    expect(model.a.b.map((e) => e.c)).toEqual(["x"]);
    expect(() => (model as unknown as { z: string }).z).toThrow('no "z"');
    expect(() => (model.a.b[0] as unknown as { z: string }).z).toThrow('no "z"');
  });
});

describe("renderView", () => {
  test("throws when a view asks for a name its model lacks", () => {
    expect(() => renderView("error", { shell, title: "x", lines: [] })).toThrow('no "id"');
    expect(renderView("error", { shell, title: "x <y>", lines: ["l"], id: "" })).toContain("x &lt;y&gt;");
  });
  test("no view prints unescaped anything but an include", () => {
    const root = new URL("../../views/", import.meta.url);
    const files = readdirSync(root, { recursive: true, encoding: "utf8" }).filter((f) => f.endsWith(".ejs"));
    expect(files.length).toBeGreaterThan(20);
    for (const file of files) {
      const text = readFileSync(new URL(file, root), "utf8");
      const raw = [...text.matchAll(/<%-(.*?)%>/gs)].filter(
        (m) => !/^\s*include\("[a-z/-]+", \{ part: /.test(m[1] ?? ""),
      );
      expect(
        raw.map((m) => m[0]),
        file,
      ).toEqual([]);
      expect(text, file).not.toMatch(/<script|<style|\sstyle=|\son[a-z]+=/);
    }
  });
});

test("markupText gives the text that markup shows", () => {
  expect(markupText(new Markup("SO<sub>4</sub> &amp; &lt;x&gt; &quot;y&quot; &#39;"))).toBe(`SO4 & <x> "y" '`);
});
