import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { hazardBurden } from "./hazard-burden.ts";
import type { Shelf } from "./shelf.ts";
import type { MaskingStep, StagePlan } from "./types.ts";

const PH_SLACK = 0.3;
/** The aldehyde takes up the mask one to one, and a fifth more goes in. */
const EXCESS = 1.2;

/** Pairs of agent and ion of the rows that demask, and triples of demasking agent, mask and ion of the rows that give way. */
interface Releases {
  readonly demasks: ReadonlySet<string>;
  readonly givesWay: ReadonlySet<string>;
}

const remembered = new WeakMap<Knowledge, Releases>();

function releasesOf(knowledge: Knowledge): Releases {
  const known = remembered.get(knowledge);
  if (known !== undefined) return known;
  const made = {
    demasks: new Set(knowledge.masking.filter((r) => r.effect === "demasks").map((r) => `${r.agent} ${r.ion}`)),
    givesWay: new Set(knowledge.masking.flatMap((r) => r.releasedBy.map((by) => `${by} ${r.agent} ${r.ion}`))),
  };
  remembered.set(knowledge, made);
  return made;
}

/** Whether a record says that `by` takes this mask from the ion again, and that the mask gives way to it. */
function frees(by: string, mask: string, ion: ComponentId, knowledge: Knowledge): boolean {
  const { demasks, givesWay } = releasesOf(knowledge);
  return demasks.has(`${by} ${ion}`) && givesWay.has(`${by} ${mask} ${ion}`);
}

/** Agents that take a mask from all these ions again, by their records; the least hazardous first. */
export function demaskersOf(mask: string, ions: readonly ComponentId[], knowledge: Knowledge, shelf: Shelf): string[] {
  return [...knowledge.agents.values()]
    .filter((a) => shelf(a.id) && ions.every((ion) => frees(a.id, mask, ion, knowledge)))
    .sort((a, b) => hazardBurden(a.id, knowledge) - hazardBurden(b.id, knowledge))
    .map((a) => a.id);
}

/** Whether a mask of this titration holds something wanted later that nothing sets free again. */
export const holdsForGood = (
  masking: readonly MaskingStep[],
  later: readonly ComponentId[],
  knowledge: Knowledge,
  shelf: Shelf,
): boolean =>
  masking.some((m) => {
    const held = m.masks.filter((c) => later.includes(c));
    return held.length > 0 && demaskersOf(m.agent, held, knowledge, shelf).length === 0;
  });

/**
 * A continuation in the vessel of an earlier titration, with the mask taken from what it determines: the free mask and that of the
 * freed metals is used up (complete conversion), and what the agent does not free keeps its mask by the record.
 * Null where nothing frees it at this pH. A plan whose ions carry no mask comes back as it is.
 */
export function demasked(plan: StagePlan, knowledge: Knowledge, shelf: Shelf): StagePlan | null {
  const holds = plan.masking.filter((m) => m.masks.some((ion) => plan.determines.includes(ion)));
  const mask = holds[0]?.agent;
  if (mask === undefined) return plan;
  if (holds.some((m) => m.agent !== mask)) return null;
  const held = holds.flatMap((m) => m.masks).filter((ion) => plan.determines.includes(ion));
  const by = demaskersOf(mask, held, knowledge, shelf).find((id) =>
    knowledge.masking.some(
      (r) => r.agent === id && r.effect === "demasks" && plan.pH >= r.pH[0] - PH_SLACK && plan.pH <= r.pH[1] + PH_SLACK,
    ),
  );
  if (by === undefined) return null;
  const own = plan.masking.filter((m) => m.agent === mask);
  const freed = [...new Set(own.flatMap((m) => m.masks))].filter((ion) => frees(by, mask, ion, knowledge));
  const amount = Math.max(...own.map((m) => m.molPerL));
  const usual = knowledge.agents.get(by)?.usualMolPerL ?? 0;
  return {
    ...plan,
    masking: plan.masking.flatMap((m): MaskingStep[] => {
      if (m.agent !== mask) return [m];
      const masks = m.masks.filter((ion) => !freed.includes(ion));
      return masks.length > 0 ? [{ ...m, masks, basis: "empirical" }] : [];
    }),
    auxiliary: [
      ...plan.auxiliary,
      {
        id: by,
        molPerL: Number(Math.max(usual, EXCESS * amount).toPrecision(2)),
        purpose: `sets ${freed.join(", ")} free from ${mask}`,
      },
    ],
    preparation: plan.preparation.includes("wait") ? plan.preparation : [...plan.preparation, "wait"],
    demasked: { agent: mask, by, frees: freed },
  };
}
