import type { ComponentId, IndicatorBlocker, IndicatorRecord, Knowledge } from "../constants/knowledge.ts";
import { lyingAsHydroxideMolPerL } from "./hydroxide-lying.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import { countedIn } from "./types.ts";

/** Where no level is stated a metal spoils the change from about a tenth of the dye's concentration (inference from read levels). */
const UNSTATED_LEVEL_OF_DYE = 0.1;
/** "At every level" still means a level that an analyst could notice: a hundredth of the dye. */
export const EVERY_LEVEL_OF_DYE = 0.01;

/** From here on the alkali itself is the mask, and what it throws down is meant to be out of the way. */
const ALKALI_MASKS_FROM_PH = 11.5;

/** The record that speaks for a metal and a dye: a read one before memory, then the lower level. */
export function blockerOf(indicator: IndicatorRecord, ion: ComponentId, pH: number): IndicatorBlocker | null {
  const rows = indicator.blockers.filter(
    (b) => b.ion === ion && b.kind === "blocks" && (b.pH === undefined || (pH >= b.pH[0] && pH <= b.pH[1])),
  );
  if (rows.length === 0) return null;
  const read = rows.filter((b) => b.provenance.basis === "read");
  const pool = read.length > 0 ? read : rows;
  return [...pool].sort((a, b) => (a.fromMolPerL ?? 0) - (b.fromMolPerL ?? 0))[0]!;
}

/** Level of a metal, mol/L in the vessel and free of masks, from which the dye is spoilt; null when the dye minds nothing. */
export function blockingLevel(
  indicator: IndicatorRecord,
  ion: ComponentId,
  pH: number,
  dyeMolPerL: number,
): number | null {
  const row = blockerOf(indicator, ion, pH);
  if (!row) return null;
  if (row.fromMolPerL === null) return UNSTATED_LEVEL_OF_DYE * dyeMolPerL;
  return Math.max(row.fromMolPerL, EVERY_LEVEL_OF_DYE * dyeMolPerL);
}

/** A metal that would spoil the dye of a titration, and from which level, mol/L of the vessel and free of masks. */
interface MindedMetal {
  readonly metal: ComponentId;
  readonly level: number;
}

/** The metals of a vessel that its dye minds at the pH of the plan, whatever there is of them. */
export function mindedMetals({
  indicator,
  plan,
  metals,
}: Pick<StageModel, "indicator" | "plan" | "metals">): MindedMetal[] {
  if (!indicator || !plan.indicator) return [];
  const here = indicator.uses.filter(
    (u) => u.mode === "direct" && plan.pH >= u.pH[0] - 0.05 && plan.pH <= u.pH[1] + 0.05,
  );
  const published = new Set(here.flatMap((u) => u.ions));
  // In use for it cold and with nothing added: the titrant takes it from the dye, whatever else is determined.
  const answering = new Set(
    here
      .filter((u) => u.temperature === undefined && u.auxiliaryAnyOf === undefined && u.provenance.confidence !== "low")
      .flatMap((u) => u.ions),
  );
  // What an earlier titration has bound is the titrant's again with the first drop: its remainder does not block.
  const carried = new Set(plan.carried?.metals ?? []);
  return metals.flatMap((metal) => {
    if (carried.has(metal)) return [];
    const level = blockingLevel(indicator, metal, plan.pH, plan.indicator!.molPerL);
    if (level === null) return [];
    // A dye that is in use for the very metal at this pH is not blocked by it (hot, or with a catalyst: its use says so).
    if (countedIn(plan).includes(metal) && published.has(metal)) return [];
    return answering.has(metal) ? [] : [{ metal, level }];
  });
}

/**
 * The metals that spoil the dye in this vessel before anything comes from the burette. In a back titration the titrant
 * is there first, so only what it leaves unbound can block; a masked metal blocks only by what the mask leaves.
 */
export function blockersOf(model: StageModel, start: VesselState, knowledge: Knowledge): ComponentId[] {
  const { plan } = model;
  const masks = new Set(
    [...plan.masking.map((m) => m.agent), ...plan.auxiliary.map((a) => a.id)]
      .map((agent) => knowledge.agents.get(agent)?.component)
      .filter((c): c is ComponentId => c !== null && c !== undefined),
  );
  return mindedMetals(model)
    .filter(({ metal, level }) => {
      const unmasked = model.system.rows.reduce((sum, species, row) => {
        const n = species.components[metal] ?? 0;
        if (n <= 0 || (species.components[plan.titrant.id] ?? 0) > 0) return sum;
        return Object.keys(species.components).some((c) => masks.has(c)) ? sum : sum + n * start.result.species(row);
      }, 0);
      // A hydroxide that nobody asked for blocks like the ion it came from: hydrolysed iron(III) still takes the dye.
      // What a mask has thrown down (a sulfide, a fluoride) is masked.
      const lying = lyingAsHydroxideMolPerL(model, start, metal, knowledge);
      const borne =
        plan.pH < ALKALI_MASKS_FROM_PH
          ? 0
          : Math.max(
              0,
              ...knowledge.masking
                .filter((r) => r.agent === "hydroxide" && r.ion === metal)
                .map((r) => r.upToMolPerL ?? Infinity),
            );
      return unmasked + (lying > borne ? lying : 0) > level;
    })
    .map(({ metal }) => metal);
}
