import { type ChainReaction, reactionWeight } from "./choose-chains.ts";
import type { FileReaction } from "./equilibria-schema.ts";

/** Ionic strengths (mol/L) near which a chain is best measured: the Davies equation carries it from there to where titrations are done. */
const USUAL_MOL_PER_L = { from: 0.05, to: 1 };

/** A reaction of a data file as the choice of chains sees it: usable where it has a value and no reason against it, with its weight. */
export function chainReaction(entry: FileReaction): ChainReaction {
  const printed = entry.logK ?? [];
  const single = entry.single ?? [];
  const usual = (ionicStrength: number): boolean =>
    ionicStrength >= USUAL_MOL_PER_L.from && ionicStrength <= USUAL_MOL_PER_L.to;
  const weight = reactionWeight({
    allDoubtful: single.length === 0 && printed.every((value) => value[6] === 1),
    nearUsualConditions:
      printed.some((value) => value[6] === 0 && usual(value[3])) ||
      single.some((value) => usual(value.ionicStrengthMolPerL)),
    read: printed.length > 0 || single.some((value) => value.basis !== "memory"),
  });
  return {
    id: entry.id,
    terms: entry.terms,
    usable: entry.notUsed === undefined && printed.length + single.length > 0,
    weight,
  };
}
