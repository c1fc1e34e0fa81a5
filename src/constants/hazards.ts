import type { CautionRecord, HazardTag, Knowledge } from "./knowledge.ts";

/** A hazard as facts and pages name it: the tag, or the tag with the condition that makes it worse. */
export type HazardName = HazardTag | "cyanide-in-acid" | "sulfide-in-acid" | "fluoride-in-acid" | "hot-acid";

/** One caution to show, with the reagents it is about (ids as given; empty for hot acid without a named acid). */
export interface Caution {
  readonly tag: HazardName;
  readonly text: string;
  readonly reagents: readonly string[];
}

/** The solution in which the reagents are used. */
export interface HazardConditions {
  readonly pH: number;
  readonly hot: boolean; // heated or boiled at any step
}

/** Below this pH a solution counts as acid for fluoride, cyanide and sulfide: the free acids form in part at any pH under 7. */
export const ACID_BELOW_PH = 7;
/** Below this pH a heated solution counts as hot acid: weak acid buffers (acetate, hexamine) lie above it. */
export const HOT_ACID_BELOW_PH = 3;
/** HCN has pKa 9.2 and is still 16 % free at pH 9.9: under this pH cyanide is told off as if in acid. */
export const CYANIDE_NEVER_BELOW_PH = 9.5;
/** H2S has pKa 7: at pH 9 about 1 % is free. */
export const SULFIDE_NEVER_BELOW_PH = 9;

/**
 * Cautions that apply when these reagents (ids of titrants, metal ions, indicators, buffers, agents or preparation steps) are
 * used at this pH, heated or not; in the order of the caution records, each once. Ids without a reagent record give none:
 * `vocabularyCoverage` lists them. Hot acid is told of the solution itself, whichever reagent made it acid.
 */
export function cautionsFor(
  reagentIds: readonly string[],
  conditions: HazardConditions,
  knowledge: Pick<Knowledge, "reagents" | "cautions">,
): readonly Caution[] {
  const tagsOf = new Map(reagentIds.map((id) => [id, hazardTagsOf(id, knowledge)]));
  return knowledge.cautions.flatMap((caution) => {
    if (!applies(caution, conditions)) return [];
    const reagents = [...tagsOf].filter(([, tags]) => tags.has(caution.tag)).map(([id]) => id);
    const ofSolution = caution.tag === "strong-acid" && caution.when === "hot-acid";
    if (reagents.length === 0 && !ofSolution) return [];
    return [{ tag: hazardName(caution), text: caution.text, reagents }];
  });
}

/** Hazards that belong to the counter ion of one form, not to the reagent. */
const COUNTER_ION_HAZARDS: ReadonlySet<HazardTag> = new Set(["oxidiser", "heat-sensitive"]);

/** Hazard tags of a reagent id: of its own record and of its further forms ("fluoride" and "fluoride:sodium"). */
export function hazardTagsOf(id: string, knowledge: Pick<Knowledge, "reagents">): ReadonlySet<HazardTag> {
  const tags = new Set<HazardTag>();
  // Another salt of the same reagent (ammonium nitrate for ammonium chloride) brings its counter ion's hazards only when it is used.
  for (const [key, reagent] of knowledge.reagents)
    if (key === id) for (const tag of reagent.hazardTags) tags.add(tag);
    else if (key.startsWith(`${id}:`))
      for (const tag of reagent.hazardTags) if (!COUNTER_ION_HAZARDS.has(tag)) tags.add(tag);
  return tags;
}

function applies(caution: CautionRecord, { pH, hot }: HazardConditions): boolean {
  switch (caution.when) {
    case "always":
      return true;
    case "in-acid":
      if (caution.tag === "cyanide") return pH < CYANIDE_NEVER_BELOW_PH;
      if (caution.tag === "sulfide") return pH < SULFIDE_NEVER_BELOW_PH;
      return pH < ACID_BELOW_PH;
    case "hot":
      return hot;
    case "hot-acid":
      return hot && pH < (caution.tag === "fluoride" ? ACID_BELOW_PH : HOT_ACID_BELOW_PH);
  }
}

function hazardName(caution: CautionRecord): HazardName {
  if (caution.tag === "strong-acid" && caution.when === "hot-acid") return "hot-acid";
  if (caution.when === "always" || caution.when === "hot") return caution.tag;
  if (caution.tag === "cyanide") return "cyanide-in-acid";
  if (caution.tag === "sulfide") return "sulfide-in-acid";
  return caution.tag === "fluoride" ? "fluoride-in-acid" : caution.tag;
}
