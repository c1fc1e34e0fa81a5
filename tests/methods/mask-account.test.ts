import { describe, expect, it } from "vitest";
import { evaluateStage } from "../../src/methods/evaluate-stage.ts";
import { maskAccounts } from "../../src/methods/mask-account.ts";
import { inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

const step = { agent: "fluoride", masks: ["Al3+"], via: "complexation", molPerL: 0.1, basis: "equilibrium" } as const;

describe("maskAccounts", () => {
  const plan = inventedPlan({ masking: [step] });
  const evaluation = evaluateStage(inventedTask({ "Zn2+": 0.008 }, { "Al3+": 0.004 }), plan, KNOWLEDGE);
  const [account] = maskAccounts(evaluation, plan.masking, KNOWLEDGE);

  // log10 alpha of Al towards 0.1 mol/L fluoride: the cumulative constants of AlF to AlF4 (6.1, 11.2, 15.0, 17.8 at I about
  // 0.1 to 0.5; Smith and Martell, from memory) give sum(beta_i [F]^i) between 10^13.5 and 10^15 with nearly all fluoride free.
  it("states how firmly the ion is held, in the range the constants of the fluoro complexes give by hand", () => {
    expect(account?.masked[0]?.log10Alpha).toBeGreaterThan(13);
    expect(account?.masked[0]?.log10Alpha).toBeLessThan(15.5);
    expect(account?.masked[0]?.titratedFraction).toBeLessThan(0.01);
  });

  it("counts the share of the agent that metals hold: four fluorides at most an aluminium", () => {
    const aluminium = 0.004 / 4; // diluted 25 to 100 mL
    expect(account?.usedFraction).toBeGreaterThan((2 * aluminium) / 0.1);
    expect(account?.usedFraction).toBeLessThan((4.05 * aluminium) / 0.1);
  });

  it("gives no figure where the mask rests on a report", () => {
    const reported = inventedPlan({ masking: [{ ...step, basis: "empirical" }] });
    const [none] = maskAccounts(evaluation, reported.masking, KNOWLEDGE);
    expect(none).toMatchObject({ usedFraction: null, onAnalyteLog10Alpha: null });
  });
});
