import { describe, expect, it } from "vitest";
import { mergedStatements } from "../../src/recommendation/merge-statements.ts";

const said = (component: string, statement: string, rule = "masking/empirical-record") => ({
  rule,
  statement,
  facts: { component },
});
const words = (...list: ReturnType<typeof said>[]): string[] => mergedStatements(list).map((s) => s.statement);

describe("mergedStatements", () => {
  it("puts into one what differs only in the component it names", () => {
    const held = (ion: string) => said(ion, `That triethanolamine holds ${ion} is reported practice.`);
    expect(words(held("Fe3+"), held("Al3+"), held("Fe3+"))).toEqual([
      "That triethanolamine holds Fe3+ and Al3+ is reported practice.",
    ]);
  });
  it("keeps apart what differs otherwise, what other rules say, and what begins with its component", () => {
    const a = said("Fe3+", "Fe3+ precipitates at pH 6.");
    const b = said("Al3+", "Al3+ precipitates at pH 6.");
    const c = said("Cu2+", "The sulfide of Cu2+ at 0.1 mol/L is dark.");
    const d = said("Ni2+", "The sulfide of Ni2+ at 0.2 mol/L is dark.");
    const e = { ...said("Zn2+", "The sulfide of Zn2+ at 0.2 mol/L is dark."), rule: "another/rule" };
    expect(words(a, b, c, d, e)).toHaveLength(5);
  });
});
