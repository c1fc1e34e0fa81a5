/** A brief as JSON, loosely typed so that tests can bend it. */
export interface LooseBrief {
  readonly title: string;
  readonly analytes: readonly { readonly ion: string; readonly concentration: Level; readonly report?: string }[];
  readonly matrix?: readonly { readonly component: string; readonly concentration: Level }[];
  readonly portion?: { readonly volumeML: number; readonly titrationVolumeML: number };
  readonly requirement?: { readonly relativeExpandedUncertaintyPercent: number };
  readonly laboratory?: {
    readonly avoid?: readonly string[];
    readonly available?: readonly string[] | null;
    readonly detection?: readonly string[];
    readonly heating?: boolean;
    readonly buretteML?: number;
  };
  readonly temperatureC?: number;
}

/** A concentration of a brief. */
export interface Level {
  readonly value: number;
  readonly unit: string;
}

/** So many mmol/L. */
export const mmol = (value: number): Level => ({ value, unit: "mmol/L" });

const brief = (
  title: string,
  analytes: Readonly<Record<string, number>>,
  matrix: Readonly<Record<string, number>>,
  available: readonly string[],
  percent = 1,
): LooseBrief => ({
  title: `Invented: ${title}`,
  analytes: Object.entries(analytes).map(([ion, value]) => ({ ion, concentration: mmol(value) })),
  matrix: Object.entries(matrix).map(([component, value]) => ({ component, concentration: mmol(value) })),
  portion: { volumeML: 25, titrationVolumeML: 100 },
  requirement: { relativeExpandedUncertaintyPercent: percent },
  laboratory: { available },
});

/** Invented samples, each with a small shelf so that an answer takes a second: a masked, a hidden, a boiled, a successive one, and one by difference. */
export const INVENTED_BRIEFS = {
  zinc: brief("zinc beside aluminium and manganese", { "Zn2+": 8 }, { "Al3+": 0.5, "SO4^2-": 9, "Mn2+": 0.2 }, [
    "EDTA",
    "hexamine",
    "xylenol-orange",
    "fluoride",
    "tiron",
  ]),
  calcium: brief("calcium beside magnesium and iron", { "Ca2+": 8 }, { "Mg2+": 2, "Fe3+": 0.02, "Cl-": 20 }, [
    "EDTA",
    "sodium-hydroxide",
    "calcon",
    "murexide",
    "triethanolamine",
  ]),
  aluminium: brief("aluminium sulfate", { "Al3+": 8 }, { "SO4^2-": 12 }, [
    "EDTA",
    "Zn2+",
    "hexamine",
    "xylenol-orange",
  ]),
  bismuthAndLead: brief("bismuth and lead", { "Bi3+": 8, "Pb2+": 8 }, { "NO3-": 60 }, [
    "EDTA",
    "nitric-acid",
    "hexamine",
    "xylenol-orange",
  ]),
  magnesium: brief(
    "magnesium beside nickel",
    { "Mg2+": 8 },
    { "Ni2+": 0.1, "Cl-": 16 },
    ["EDTA", "ammonia", "mordant-black-11", "cyanide"],
    2,
  ),
} as const satisfies Readonly<Record<string, LooseBrief>>;
