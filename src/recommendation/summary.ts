import type { Knowledge } from "../constants/knowledge.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import type { Task } from "../methods/types.ts";
import type { JudgedMethod } from "./judge.ts";
import { shownIon } from "./spelling.ts";

const list = (words: readonly string[]): string =>
  words.length < 2 ? words.join("") : `${words.slice(0, -1).join(", ")} and ${words.at(-1)!}`;

/** The method in one sentence, as a chemist would say it. */
export function summaryOf(task: Task, judged: JudgedMethod, knowledge: Knowledge): string {
  const { method } = judged;
  const sentences = method.stages.map((stage) => stageWords(task, stage, knowledge));
  if (sentences.length === 1) return `${sentences[0]!}.`;
  const lead: Record<string, string> = {
    difference: "In separate portions, the second result by difference",
    portions: "In separate portions",
    successive: "In one portion, one after the other",
  };
  return `${lead[method.mode] ?? "In stages"}: ${sentences.map((s) => s.charAt(0).toLowerCase() + s.slice(1)).join("; then ")}.`;
}

function stageWords(task: Task, stage: DevelopedStage, knowledge: Knowledge): string {
  const { plan } = stage;
  const ion = (id: string): string => shownIon(task, id, knowledge);
  const nameOf = (id: string): string => knowledge.agents.get(id)?.name ?? knowledge.buffers.get(id)?.name ?? id;
  const what = list(plan.determines.map(ion));
  const dye = plan.indicator
    ? (knowledge.indicators.get(plan.indicator.id)?.name ?? plan.indicator.id)
    : "an electrode";
  const heat = plan.preparation.includes("boil")
    ? ", boil"
    : plan.preparation.includes("heat")
      ? ", heat"
      : plan.preparation.includes("wait")
        ? ", let it react"
        : "";
  const separated = plan.removed.length > 0 ? `after separation of ${list(plan.removed.map(ion))}, ` : "";
  const masks =
    plan.masking.length > 0
      ? `, with ${list(plan.masking.map((m) => `${m.agent === "hydroxide" ? "the alkali" : nameOf(m.agent)} against ${list(m.masks.map(ion))}`))}`
      : "";
  const helped = plan.auxiliary.length > 0 ? ` and ${list(plan.auxiliary.map((a) => nameOf(a.id)))} present` : "";
  const buffer = nameOf(plan.buffer.id);
  const core = plan.backTitrant
    ? `add ${plan.titrant.id} in excess to ${what}${heat}, and titrate the excess back with ${plan.backTitrant.molPerL} mol/L ${plan.backTitrant.id} at pH ${plan.pH} (${buffer}) to ${dye}`
    : `titrate ${what} with ${plan.titrant.molPerL} mol/L ${plan.titrant.id} at pH ${plan.pH} (${buffer})${plan.preparation.includes("boil") ? " at the boil" : plan.preparation.includes("heat") ? " hot" : ""} to ${dye}${plan.chelate && plan.indicator?.id !== "Cu-PAN" ? ` with a little ${plan.chelate.metal.replace(/\d?\+$/, "")}-${plan.chelate.ligand}` : ""}`;
  const sentence = `${separated}${core}${masks}${helped}`;
  return sentence.charAt(0).toUpperCase() + sentence.slice(1);
}
