import { cautionsFor, type HazardName, type Knowledge } from "../constants/index.ts";
import type { StagePlan } from "../methods/types.ts";

const EXCHANGE = "tetracyanonickelate-exchange";
const EXCHANGE_REAGENT = "tetracyanonickelate";

/** Every reagent id that a titration uses, once each. */
export function reagentsOf(plan: StagePlan): string[] {
  return [
    ...new Set([
      plan.titrant.id,
      ...(plan.backTitrant ? [plan.backTitrant.id] : []),
      ...(plan.indicator ? [plan.indicator.id] : []),
      plan.buffer.id,
      ...plan.masking
        .map((m) => m.agent)
        .filter((id) => id !== "hydroxide")
        .sort(), // not in the order of the rows of a brief
      ...plan.auxiliary.map((a) => a.id),
      ...plan.added.map((a) => a.id),
      ...(plan.chelate ? [plan.chelate.metal] : []),
      ...(plan.preparation.includes("alcohol") ? ["alcohol"] : []),
      // The bottle of the exchange keeps its hazards under the name of the step.
      ...(plan.preparation.includes(EXCHANGE) ? [EXCHANGE] : []),
    ]),
  ];
}

/** Whether any step of the titration is hot: 60 C and above; warming to 40 to 60 C is not. */
export const isHot = (plan: StagePlan): boolean => plan.preparation.some((p) => p === "heat" || p === "boil");

/** Reagents that come with the sample itself count for cautions too: a cyanide bath is a cyanide hazard whatever is added. */
function hazardousIds(plan: StagePlan, sampleIds: readonly string[]): string[] {
  return [...reagentsOf(plan), ...sampleIds];
}

/** Hazard tags that apply to these titrations under their conditions. */
export function hazardTagsOf(plans: readonly StagePlan[], knowledge: Knowledge): string[] {
  return [
    ...new Set(
      plans.flatMap((plan) =>
        cautionsFor(reagentsOf(plan), { pH: plan.pH, hot: isHot(plan) }, knowledge).map((c) => c.tag),
      ),
    ),
  ];
}

/** A general hazard is not said of a reagent whose own caution says it. */
export const SAID_BY: Readonly<Partial<Record<HazardName, readonly HazardName[]>>> = {
  toxic: ["cyanide", "fluoride", "mercury", "lead", "cadmium", "thorium-uranium", "formaldehyde"],
  carcinogen: ["cadmium", "formaldehyde"],
  corrosive: ["strong-acid", "strong-alkali"],
};
/** Hazards of a bottle that a dilute sample does not have. */
const OF_THE_BOTTLE: ReadonlySet<HazardName> = new Set(["oxidiser", "corrosive", "flammable", "heat-sensitive"]);

/** Caution sentences for these titrations, each once with all it is about. */
export function cautionTexts(
  plans: readonly StagePlan[],
  sampleIds: readonly string[],
  knowledge: Knowledge,
): string[] {
  const all = plans.flatMap((plan) => {
    const used = reagentsOf(plan);
    const own = cautionsFor(hazardousIds(plan, sampleIds), { pH: plan.pH, hot: isHot(plan) }, knowledge);
    return own.map((caution) => ({
      ...caution,
      general: caution.reagents.length === 0,
      reagents: caution.reagents.filter((id) => used.includes(id) || !OF_THE_BOTTLE.has(caution.tag)),
    }));
  });
  const told = (id: string, tag: HazardName): boolean =>
    (SAID_BY[tag] ?? []).some((by) => all.some((c) => c.tag === by && c.reagents.includes(id)));
  const about = new Map<string, { general: boolean; reagents: Set<string> }>();
  for (const { text, tag, reagents, general } of all) {
    const row = about.get(text) ?? { general: false, reagents: new Set<string>() };
    for (const id of reagents) if (!told(id, tag)) row.reagents.add(nameOf(id, knowledge));
    about.set(text, { ...row, general: row.general || general });
  }
  return [...about]
    .filter(([, { general, reagents }]) => general || reagents.size > 0)
    .map(([text, { reagents }]) => {
      const names = [...reagents].join(", ");
      return names === "" || text.toLowerCase().startsWith(names.toLowerCase()) ? text : `${names}: ${text}`;
    });
}

const nameOf = (id: string, knowledge: Knowledge): string =>
  knowledge.agents.get(id)?.name ??
  knowledge.buffers.get(id)?.name ??
  knowledge.indicators.get(id)?.name ??
  (id === EXCHANGE ? EXCHANGE_REAGENT : id);
