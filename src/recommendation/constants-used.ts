import type { Knowledge } from "../constants/knowledge.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import type { ConstantUsed } from "./contract.ts";

const signif = (value: number, digits: number): number => (value === 0 ? 0 : Number(value.toPrecision(digits)));

/** Part of a component from which a species counts as taking part. */
const TAKES_PART = 1e-4;

/** The constants that decide the evaluation of these titrations: species that hold a noticeable part of some component. */
export function constantsUsed(stages: readonly DevelopedStage[], knowledge: Knowledge): ConstantUsed[] {
  const out = new Map<string, ConstantUsed>();
  for (const { evaluation } of stages) {
    const { model } = evaluation;
    const states = [model.at(0), model.at(evaluation.endPointML / 1000)].filter((s) => s.ok);
    model.system.species.forEach((species, row) => {
      if (species.evidence.length === 0 || out.has(species.id)) return;
      const matters = states.some((state) =>
        Object.entries(species.components).some(
          ([c, n]) => c !== "H+" && n > 0 && n * state.result.speciesMolPerL[row]! > TAKES_PART * state.total(c),
        ),
      );
      if (!matters) return;
      out.set(species.id, {
        species: species.id,
        log10Beta: signif(species.log10Beta, 5),
        uncertainty: signif(species.uncertainty, 2),
        evidence: species.evidence.map((use) => ({
          reaction: use.reaction,
          text: knowledge.reactions.get(use.reaction)?.text ?? use.reaction,
          record: use.record.provenance.record ?? null,
          source: use.record.provenance.source,
          basis: use.record.provenance.basis,
          log10KFound: use.record.log10K,
          ionicStrengthMolPerL: use.record.ionicStrengthMolPerL,
          temperatureC: use.record.temperatureC,
          log10KUsed: signif(use.log10KUsed, 5),
          passedOver: use.passedOver,
        })),
      });
    });
  }
  return [...out.values()];
}
