import type { Knowledge } from "../constants/knowledge.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { AFTER_FIRST_END_POINT } from "../methods/release-plan.ts";
import type { Detour, StagePlan, Task } from "../methods/types.ts";
import { detourRecord } from "../methods/way-round.ts";
import type { JudgedMethod } from "./judge.ts";
import { stoichiometryOf } from "./detour-words.ts";
import { shownIon } from "./spelling.ts";

const list = (words: readonly string[]): string =>
  words.length < 2 ? words.join("") : `${words.slice(0, -1).join(", ")} and ${words.at(-1)!}`;

/** The method in one sentence, as a chemist would say it. */
export function summaryOf(task: Task, judged: JudgedMethod, knowledge: Knowledge): string {
  const { method } = judged;
  const sentences = method.stages.map((stage) => stageWords(task, stage, knowledge));
  if (sentences.length === 1) return `${sentences[0]!}.`;
  const lead: Record<string, string> = {
    difference: "In separate portions, one result as their difference",
    portions: "In separate portions",
    successive: "In one portion, one after the other",
  };
  return `${lead[method.mode] ?? "In stages"}: ${sentences.map((s) => s.charAt(0).toLowerCase() + s.slice(1)).join("; then ")}.`;
}

/** To what a titration is done: a dye, a dye under a photometer, the inflection of an electrode. */
function seenBy(plan: StagePlan, knowledge: Knowledge): string {
  if (plan.detection === "electrode") {
    const name = knowledge.electrodes.find((e) => e.id === plan.electrode)?.name ?? "electrode";
    return `the inflection of the ${name}`;
  }
  const dye = plan.indicator && (knowledge.indicators.get(plan.indicator.id)?.name ?? plan.indicator.id);
  const chelate =
    plan.chelate && plan.indicator?.id !== "Cu-PAN"
      ? ` with ${plan.mode === "displacement" ? "an excess of" : "a little"} ${plan.chelate.metal.replace(/\d?\+$/, "")}-${plan.chelate.ligand}`
      : "";
  if (plan.detection === "photometric")
    return dye ? `${dye}${chelate}, read with a photometer` : "the break of its own absorbance, read with a photometer";
  return `${dye ?? "the end point"}${chelate}`;
}

/** "with cyanide against Zn2+ and Cu2+": each agent once, whatever it masks. */
function maskWords(plan: StagePlan, nameOf: (id: string) => string, ion: (id: string) => string): string {
  const masked = new Map<string, string[]>();
  for (const { agent, masks } of plan.masking) masked.set(agent, [...(masked.get(agent) ?? []), ...masks.map(ion)]);
  const words = [...masked].map(
    ([agent, ions]) => `${agent === "hydroxide" ? "the alkali" : nameOf(agent)} against ${list([...new Set(ions)])}`,
  );
  return words.length > 0 ? `, with ${list(words)}` : "";
}

/** The agents that go in after the first end point of a release. */
const releaseAgents = (plan: StagePlan): string[] =>
  plan.release === null
    ? []
    : plan.auxiliary
        .filter((a) => a.id === plan.release!.agent || a.purpose.startsWith(AFTER_FIRST_END_POINT))
        .map((a) => a.id);

function stageWords(task: Task, stage: DevelopedStage, knowledge: Knowledge): string {
  const { plan } = stage;
  if (plan.detour) return detourWords(task, stage, plan.detour, knowledge);
  const ion = (id: string): string => shownIon(task, id, knowledge);
  const nameOf = (id: string): string => knowledge.agents.get(id)?.name ?? knowledge.buffers.get(id)?.name ?? id;
  const what = list(plan.determines.map(ion));
  const dye = seenBy(plan, knowledge);
  const heat = plan.preparation.includes("boil")
    ? ", boil"
    : plan.preparation.includes("heat")
      ? ", heat"
      : plan.preparation.includes("wait")
        ? ", let it react"
        : "";
  const separated = plan.removed.length > 0 ? `after separation of ${list(plan.removed.map(ion))}, ` : "";
  const masks = maskWords(plan, nameOf, ion);
  const present = plan.auxiliary.filter((a) => !releaseAgents(plan).includes(a.id));
  const helped = present.length > 0 ? ` and ${list(present.map((a) => nameOf(a.id)))} present` : "";
  const buffer = nameOf(plan.buffer.id);
  const core = plan.release
    ? `add ${plan.titrant.id} in excess to ${what}${heat}, titrate the excess with ${plan.backTitrant!.molPerL} mol/L ${plan.backTitrant!.id} at pH ${plan.pH} (${buffer}) to ${dye} and discard that reading, add ${list(releaseAgents(plan).map(nameOf))}, and titrate on what ${releaseAgents(plan).length > 1 ? "they set" : "it sets"} free`
    : plan.backTitrant
      ? `add ${plan.titrant.id} in excess to ${what}${heat}, and titrate the excess back with ${plan.backTitrant.molPerL} mol/L ${plan.backTitrant.id} at pH ${plan.pH} (${buffer}) to ${dye}`
      : `titrate ${what} with ${plan.titrant.molPerL} mol/L ${plan.titrant.id} at pH ${plan.pH} (${buffer})${plan.preparation.includes("boil") ? " at the boil" : plan.preparation.includes("heat") ? " hot" : ""} to ${dye}`;
  const sentence = `${separated}${core}${masks}${helped}`;
  return sentence.charAt(0).toUpperCase() + sentence.slice(1);
}

/** A way round in one sentence: what takes the analyte up, what is titrated, and what one titrant stands for. */
function detourWords(task: Task, stage: DevelopedStage, detour: Detour, knowledge: Knowledge): string {
  const { plan } = stage;
  const ion = (id: string): string => shownIon(task, id, knowledge);
  const nameOf = (id: string): string => knowledge.agents.get(id)?.name ?? knowledge.buffers.get(id)?.name ?? id;
  const record = detourRecord(detour, knowledge);
  const what = list(plan.determines.map(ion));
  const metal = ion(detour.metal);
  const reagent = ion(detour.reagent.id).replaceAll("-", " ");
  const filter = record.filtered ? ", filter" : "";
  const taken = {
    surplus: record.precipitation
      ? `precipitate ${what} with ${metal} in known excess${filter}, and titrate the surplus of ${metal}`
      : `bind ${what} with ${metal} in known excess, and titrate the surplus of ${metal}`,
    precipitate: `precipitate ${what} with ${reagent}, filter and wash, dissolve the precipitate, and titrate its ${metal}`,
    exchange: detour.precipitant
      ? `precipitate ${what} with ${detour.precipitant.id}, filter and wash, dissolve the precipitate in ${reagent}, and titrate the ${metal} set free`
      : `let ${what} set ${metal} free from ${reagent}, and titrate it`,
    conversion: `precipitate ${what} with ${reagent}, filter and wash, let the precipitate set ${plan.titrant.id} free, and titrate that`,
  }[record.kind];
  const dye = seenBy(plan, knowledge);
  const back = plan.backTitrant;
  const how =
    record.kind === "conversion" && back
      ? `with ${back.molPerL} mol/L ${back.id}`
      : back
        ? `by ${plan.titrant.id} in excess and ${back.molPerL} mol/L ${back.id} back`
        : `with ${plan.titrant.molPerL} mol/L ${plan.titrant.id}`;
  const masks = maskWords(plan, nameOf, ion);
  const separated = plan.removed.length > 0 ? `after separation of ${list(plan.removed.map(ion))}, ` : "";
  const sentence = `${separated}${taken} ${how} at pH ${plan.pH} (${nameOf(plan.buffer.id)}) to ${dye}${masks}: ${stoichiometryOf(plan, detour, ion)}`;
  return sentence.charAt(0).toUpperCase() + sentence.slice(1);
}
