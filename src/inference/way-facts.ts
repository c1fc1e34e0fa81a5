import type { FactRow } from "./types.ts";

/** Facts of a titration whose titre stands for the analyte through another metal, a chelate or a release. */
export const WAY_ROWS: readonly FactRow[] = [
  [
    "counted",
    "strings",
    null,
    "always",
    "metals whose titre is the result: what is determined, or the metal of a way round",
  ],
  [
    "detourKind",
    "string",
    null,
    "always",
    "surplus, precipitate, exchange, conversion; none where the titrant binds the analyte",
  ],
  ["detourMetal", "string", null, "always", 'metal that a way round counts, "none" without one'],
  ["detourPrecipitant", "string", null, "always", 'what precipitates the analyte, "none" where nothing does'],
  ["detourRests", "string", null, "always", "equilibrium, composition (taken as complete) or none"],
  ["detourFilters", "boolean", null, "always", "a precipitate is filtered off or collected"],
  ["detourBesideCarbonate", "boolean", null, "always", "carbonate of the sample meets the surplus metal"],
  ["detourCompany", "strings", null, "always", "components of the matrix that fall with the reagent of a way round"],
  ["detourLossPercent", "number", "%", "may be absent", "analyte that a way round leaves dissolved or unexchanged"],
  ["detourCompanyPercent", "number", "%", "may be absent", "what falls with the reagent, in the result"],
  [
    "detourCountedPercent",
    "number",
    "%",
    "may be absent",
    "metals of the matrix counted in a way round, in the result",
  ],
  ["detourSurplusRatio", "number", null, "may be absent", "reagent left over to what the analyte takes, in a surplus"],
  ["chelateAdded", "string", null, "always", 'chelate added for a displacement, "none" where there is none'],
  ["releaseAgent", "string", null, "always", 'agent that sets the titrant free, "none" where there is none'],
  ["releaseBasis", "string", null, "always", "equilibrium, record or none: on what the release rests"],
  ["releaseMolPerL", "number", "mol/L", "always", "release agent in the titrated solution, 0 where there is none"],
  ["alsoReleased", "strings", null, "always", "metals of the matrix that the agent frees too"],
  ["leftBound", "strings", null, "always", "metals of the matrix that stay bound through a release"],
  ["leftBoundCount", "number", null, "always", "how many metals stay bound through a release"],
  ["ratioToReleaseLimit", "number", null, "always", "analyte over the reported limit of the release, 0 without one"],
];
