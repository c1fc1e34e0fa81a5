import type { FactRow } from "./types.ts";

/** What an electrode shows of a titration; the numbers exist where electrodeStatus is "read". */
export const ELECTRODE_ROWS: readonly FactRow[] = [
  ["electrode", "string", null, "always", 'id of the electrode, "none" where there is none'],
  ["electrodeName", "string", null, "always", "the electrode in words"],
  ["electrodeStatus", "string", null, "always", "read where a potential curve was computed, else none"],
  [
    "electrodeUse",
    "string",
    null,
    "always",
    "published, analogous or none: record of this electrode for what is determined",
  ],
  [
    "electrodeBasis",
    "string",
    null,
    "always",
    "read, memory or none: the weaker basis of its slope and detection limit",
  ],
  ["electrodePoisons", "strings", null, "always", "components of the solution that must not meet its membrane"],
  ["electrodePoisonCount", "number", null, "always", "how many those are"],
  ["electrodeDisturbers", "strings", null, "always", "components of the solution that shift its potential"],
  ["electrodeDisturberCount", "number", null, "always", "how many those are"],
  ["interferingIon", "string", null, "always", 'ion that disturbs the potential most, "none" where there is none'],
  ["jumpMV", "number", "mV", "may be absent", "change of potential from 99 to 101 % of the volume at the end point"],
  ["leastJumpMV", "number", "mV", "may be absent", "smallest change that stands out of the scatter of the readings"],
  ["slopeMVPerDecade", "number", "mV", "may be absent", "slope of the electrode a decade"],
  [
    "electrodePHMargin",
    "number",
    "pH",
    "may be absent",
    "distance to the nearer end of its pH range, negative outside",
  ],
  [
    "detectionLimitRatio",
    "number",
    null,
    "may be absent",
    "ion not bound to the titrant half way over the detection limit; a billion where a chelate lends the ion",
  ],
  ["detectionLimitMolPerL", "number", "mol/L", "may be absent", "detection limit of the electrode, nothing buffered"],
  [
    "interferenceRatio",
    "number",
    null,
    "may be absent",
    "what other ions bring to the potential over what its own brings",
  ],
  ["chlorideRatio", "number", null, "may be absent", "free ion times chloride squared over what the membrane bears"],
  [
    "chelateMargin",
    "number",
    "log10",
    "may be absent",
    "log K' of the metal of the chelate minus that of what is determined, 0 where not known",
  ],
  ["chelateMolPerL", "number", "mol/L", "may be absent", "chelate added, 0 where there is none"],
];

/** What a photometer shows of a titration; the numbers exist where photometerStatus is "read". */
export const PHOTOMETER_ROWS: readonly FactRow[] = [
  ["photometerStatus", "string", null, "always", "read where the break of an absorbance was computed, else none"],
  [
    "wavelengths",
    "string",
    null,
    "always",
    'where the absorbance is measured, in words; "none" where nothing is on record',
  ],
  ["turbidMolPerL", "number", "mol/L", "may be absent", "solid that lies in the vessel at the end point"],
  ["photometricBandPM", "number", "pM", "may be absent", "half-width of the extrapolated break"],
];

/** Why a titration shows no end point, in the words of the fact endPointFault. */
export const END_POINT_FAULTS = [
  "none",
  "no-colour",
  "no-end-point",
  "dye-held",
  "no-inflection",
  "jump-small",
  "below-limit",
  "interferent",
  "no-break",
  "not-converged",
] as const;
