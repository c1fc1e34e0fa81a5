import type { BufferRecord, ComponentId, IndicatorRecord, IndicatorUse } from "../constants/knowledge.ts";
import { buffersFor } from "./buffers.ts";
import { basisOf, benchPH, overlap, standingOf, usesFor, type UseStanding, type Window } from "./dye-uses.ts";
import { metalKinetics } from "./kinetics.ts";
import { basePlan, forbidden, type Make, type Skeleton } from "./skeletons.ts";
import { vesselSample } from "./solution.ts";
import type { StagePlan } from "./types.ts";

const EXCESS_OVER_BOUND = 1.4; // 30 to 50 % above what binds

/** Back titrations: titrant in excess first, then a metal that the dye shows. */
export function backSkeletons(make: Make): Skeleton[] {
  const { task, knowledge, shelf, determines, field } = make;
  const out: Skeleton[] = [];
  for (const indicator of knowledge.indicators.values()) {
    // Cu-PAN lends PAN its copper; a back titration with copper brings it.
    if (indicator.id === "Cu-PAN" || !shelf(indicator.id) || (field.dyes && !field.dyes.has(indicator.id))) continue;
    const published = usesFor(indicator, determines, ["back"]);
    let byAnalogy = 0;
    for (const backTitrant of knowledge.metalTitrants.values()) {
      if (byAnalogy >= ANALOGIES_PER_DYE) break;
      if (!shelf(backTitrant.ion) || (determines.includes(backTitrant.ion) && determines.length > 1)) continue;
      const shown = indicator.uses.filter(
        (u) => u.mode === "direct" && u.ions.length === 1 && u.ions[0] === backTitrant.ion && !u.titrant,
      );
      const windows: { window: Window; standing: UseStanding; basis: "read" | "memory"; use: IndicatorUse }[] = [];
      for (const p of published)
        if (p.use.backTitrant === backTitrant.ion)
          windows.push({ window: p.window, standing: standingOf(p.use), basis: p.basis, use: p.use });
      for (const s of shown) {
        const named = published.filter((p) => p.use.backTitrant === undefined);
        for (const p of named) {
          const window = overlap(p.window, s.pH);
          if (window) windows.push({ window, standing: standingOf(p.use), basis: p.basis, use: p.use });
        }
        if (published.length === 0 && field.analogous && calculable(indicator, backTitrant.ion))
          windows.push({ window: s.pH, standing: "analogous", basis: basisOf(s), use: s });
      }
      const seen: number[] = [];
      for (const { window, standing, basis, use } of windows) {
        const pH = benchPH(window);
        if (seen.some((p) => Math.abs(p - pH) < 0.6)) continue;
        seen.push(pH);
        for (const titrant of field.titrants) {
          if (!shelf(titrant)) continue;
          const buffer = buffersFor(pH, knowledge, shelf, new Set())[0];
          if (!buffer) continue;
          const plan = backPlan(make, titrant, indicator, pH, buffer, backTitrant.ion, use);
          if (forbidden(task, plan.preparation)) continue;
          if (standing === "analogous") byAnalogy++;
          out.push({ plan, use: standing, useBasis: basis, useConfidence: use.provenance.confidence, window });
        }
      }
    }
  }
  return out;
}

/** Back titrants tried with one dye on no more than analogy. */
const ANALOGIES_PER_DYE = 2;

/** A back titration by analogy has to be calculable at least: the dye has constants, or a transition with the back titrant. */
export const calculable = (indicator: IndicatorRecord, metal: ComponentId): boolean =>
  indicator.hasConstants || indicator.transitions.some((t) => t.ion === metal);

/** A back titration with this metal: titrant in excess first, hot where the analyte is slow. */
export function backPlan(
  make: Make,
  titrant: string,
  indicator: IndicatorRecord | null,
  pH: number,
  buffer: BufferRecord,
  metal: ComponentId,
  use: IndicatorUse | null,
): StagePlan {
  const { task, knowledge, determines } = make;
  const direct = basePlan(make, titrant, indicator, pH, buffer, use);
  const kinetics = determines.map((ion) => metalKinetics(knowledge, ion, titrant));
  const preparation = [...(kinetics.some((k) => k.polymeric) ? ["depolymerise"] : []), "excess-titrant-first"];
  const needs = kinetics.map((k) => k.needs);
  if (needs.includes("boil")) preparation.push("boil", "cool");
  else if (needs.includes("heat")) preparation.push("heat", "cool");
  else if (needs.includes("wait")) preparation.push("wait");
  if (use?.temperature && !preparation.includes("boil") && !preparation.includes("heat"))
    preparation.push(use.temperature);
  if (use?.alcohol) preparation.push("alcohol");
  const analyteMolPerL = vesselSample(task)
    .filter((c) => determines.includes(c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  const strengths = knowledge.metalTitrants.get(metal)?.usualMolPerL ?? [0.01];
  return {
    ...direct,
    mode: "back",
    preparation,
    chelate: null,
    backTitrant: {
      id: metal,
      molPerL: strengths.includes(direct.titrant.molPerL) ? direct.titrant.molPerL : Math.min(...strengths),
    },
    excessTitrantMolPerL: EXCESS_OVER_BOUND * analyteMolPerL,
  };
}

/** Titrant in excess that the whole vessel needs: a good third above everything that binds, mol/L. */
export const excessFor = (boundMolPerL: number): number => Number((EXCESS_OVER_BOUND * boundMolPerL).toPrecision(3));
