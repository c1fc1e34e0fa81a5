import { readFileSync } from "node:fs";
import { seededRandom, type SeededRandom } from "../../src/numerics/seeded-random.ts";
import type { LooseBrief } from "../recommendation/invented-briefs.ts";

/** Lowest and highest level in mmol/L, and the share of samples that hold the component (1 where left out). */
type LevelRange = readonly [low: number, high: number, share?: number];

/** A kind of sample that laboratories meet, as invented briefs draw from it; compositions are common knowledge of the trades. */
interface SampleKind {
  readonly family: string;
  readonly what: string;
  readonly analytes: Readonly<Record<string, LevelRange>>;
  readonly sum?: boolean;
  readonly matrix: Readonly<Record<string, LevelRange>>;
  readonly portions: readonly (readonly [volumeML: number, titrationVolumeML: number])[];
  readonly percent: readonly [number, number];
  /** What this laboratory always is like, whatever else is drawn. */
  readonly laboratory?: NonNullable<LooseBrief["laboratory"]>;
}

/** Every kind of sample; one record a line in `sample-kinds.json`. */
export const SAMPLE_KINDS = JSON.parse(
  readFileSync(new URL("sample-kinds.json", import.meta.url), "utf8"),
) as readonly SampleKind[];

/** Metals that turn up in any sample as traces, mmol/L. */
const TRACES = ["Cu2+", "Fe3+", "Zn2+", "Al3+", "Mn2+", "Ni2+", "Co2+", "Pb2+", "Ca2+", "Mg2+"];
const TRACE_RANGE: LevelRange = [1e-4, 0.02];
/** What laboratories refuse, and shelves that small ones have. */
const REFUSED = [
  "nitric-acid",
  "cyanide",
  "fluoride",
  "sulfide",
  "perchloric-acid",
  "dithizone",
  "formaldehyde",
  "Th4+",
  "thiourea",
];
const SHELF_DYES = [
  "mordant-black-11",
  "calmagite",
  "calcon",
  "murexide",
  "xylenol-orange",
  "PAN",
  "sulfosalicylic-acid",
];
const SHELF_BASE = ["ammonia", "hexamine", "acetate", "sodium-hydroxide"];
const SHELF_ACIDS = ["nitric-acid", "hydrochloric-acid", "perchloric-acid"];
const SHELF_MORE = [
  "Zn2+",
  "Mg2+",
  "Pb2+",
  "Cu2+",
  "triethanolamine",
  "ascorbic-acid",
  "cyanide",
  "fluoride",
  "tartrate",
];
const MG_PER_MMOL: Readonly<Record<string, number>> = {
  "Ca2+": 40.078,
  "Mg2+": 24.305,
  "Zn2+": 65.38,
  "Cu2+": 63.546,
  "Fe3+": 55.845,
  "Pb2+": 207.2,
  "Ni2+": 58.693,
  "Al3+": 26.982,
};

/**
 * Draws invented brief `index` of `seed`: a kind of sample, its levels log-uniform within their ranges, now and then a trace more, a
 * laboratory with a small shelf, without heat or with another burette. A brief depends on its own seed and index alone.
 */
export function randomBrief(seed: number, index: number): LooseBrief {
  const random = seededRandom(seed, index);
  const kind = oneOf(random, SAMPLE_KINDS);
  const inMass = random.uniform() < 0.12;
  const row = (name: string, range: LevelRange): LooseBrief["analytes"][number]["concentration"] => {
    const mmolPerL = between(random, range);
    const factor = inMass ? MG_PER_MMOL[name] : undefined;
    return factor === undefined
      ? { value: mmolPerL, unit: "mmol/L" }
      : { value: Number((mmolPerL * factor).toPrecision(3)), unit: "mg/L" };
  };
  const analytes = Object.entries(kind.analytes).map(([ion, range]) => ({
    ion,
    concentration: row(ion, range),
    ...(kind.sum === true ? { report: "sum" } : {}),
  }));
  const matrix = Object.entries(kind.matrix)
    .filter(([, [, , share]]) => random.uniform() < (share ?? 1))
    .map(([component, range]) => ({ component, concentration: row(component, range) }));
  for (let n = random.uniform() < 0.25 ? 1 + random.integerBelow(2) : 0; n > 0; n--) {
    const trace = oneOf(random, TRACES);
    if (trace in kind.analytes || matrix.some(({ component }) => component === trace)) continue;
    matrix.push({ component: trace, concentration: row(trace, TRACE_RANGE) });
  }
  const [volumeML, titrationVolumeML] = oneOf(random, kind.portions);
  const laboratory = { ...laboratoryOf(random), ...kind.laboratory };
  const elsewhere = random.uniform() < 0.08 ? { temperatureC: 5 + 5 * random.integerBelow(8) } : {};
  return {
    title: `Invented: ${kind.what} (${kind.family}, ${index} of seed ${seed})`,
    analytes,
    matrix,
    portion: { volumeML, titrationVolumeML },
    requirement: { relativeExpandedUncertaintyPercent: requirement(random, kind) },
    ...(Object.keys(laboratory).length > 0 ? { laboratory } : {}),
    ...elsewhere,
  };
}

/** Most briefs ask for what the trade asks; one in eight for a third of it, down to 0.3 %. */
function requirement(random: SeededRandom, kind: SampleKind): number {
  const usual = between(random, kind.percent, 2);
  return random.uniform() < 0.12 ? Math.max(0.3, Number((usual / 3).toPrecision(2))) : usual;
}

function laboratoryOf(random: SeededRandom): NonNullable<LooseBrief["laboratory"]> {
  const out: {
    -readonly [K in keyof NonNullable<LooseBrief["laboratory"]>]: NonNullable<LooseBrief["laboratory"]>[K];
  } = {};
  const draw = random.uniform();
  if (draw < 0.15) out.avoid = [...new Set([oneOf(random, REFUSED), oneOf(random, REFUSED)])];
  else if (draw < 0.25)
    out.available = [
      "EDTA",
      oneOf(random, SHELF_ACIDS),
      ...SHELF_BASE.filter(() => random.uniform() < 0.8),
      ...SHELF_DYES.filter(() => random.uniform() < 0.6),
      ...SHELF_MORE.filter(() => random.uniform() < 0.6),
    ];
  if (random.uniform() < 0.08) out.heating = false;
  const burette = random.uniform();
  if (burette < 0.25) out.buretteML = burette < 0.1 ? 10 : 50;
  const detection = random.uniform();
  if (detection < 0.1)
    out.detection =
      detection < 0.02
        ? ["electrode"]
        : detection < 0.04
          ? ["photometric"]
          : detection < 0.07
            ? ["visual", "electrode"]
            : ["visual", "photometric"];
  return out;
}

const oneOf = <T>(random: SeededRandom, list: readonly T[]): T => list[random.integerBelow(list.length)]!;

const between = (random: SeededRandom, [low, high]: LevelRange, digits = 3): number =>
  Number((low * (high / low) ** random.uniform()).toPrecision(digits));
