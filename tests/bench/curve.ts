import { explicitCurve } from "../../src/chemistry/curve-explicit.ts";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { eliminatedSolver } from "../../src/chemistry/solve-eliminated.ts";
import type { Titration } from "../../src/chemistry/titration.ts";
import { loadKnowledge } from "../../src/constants/index.ts";
import { atBar, type Bench, type BenchReport } from "./bench.ts";
import { interleaved, medianRatio, microsecondsPer, timingLine } from "./interleave.ts";

const ROUNDS = 9;
const POINTS = 200;
const REPEATS = 200;
const AGREE = 1e-10; // of ln free zinc, both forms at the same volume
const LEAST_RATIO = 2;

/** Microseconds a point of the explicit curve beside the eliminated solver, where no auxiliary ligand is used up. */
export const curveBench: Bench = { name: "curve", run: () => Promise.resolve(measure()) };

/** Six metals with EDTA in ammonia held at 0.1 mol/L, pH 10: an invented sample on the constants of the knowledge. */
function titration(): Titration {
  const metals = { "Zn2+": 1e-3, "Ca2+": 1e-3, "Mg2+": 5e-4, "Cu2+": 1e-5, "Ni2+": 1e-5, "Cd2+": 1e-5 };
  const ids = Object.keys(metals);
  return {
    system: prepareSystem(
      loadKnowledge(),
      [...ids, "EDTA", "ammonia"],
      { ionicStrengthMolPerL: 0.1, temperatureC: 25 },
      {
        solids: () => false,
        exclude: (species) => ids.reduce((atoms, id) => atoms + (species.components[id] ?? 0), 0) > 1,
      },
    ),
    log10H: -9.9,
    sampleVolumeML: 100,
    sampleMolPerL: metals,
    titrant: { component: "EDTA", molPerL: 0.01 },
    freeMolPerL: { ammonia: 0.1 },
    follow: "Zn2+",
  };
}

function measure(): BenchReport {
  const t = titration();
  const { system } = t;
  const curve = explicitCurve(t);
  const column = (id: string): number => system.index.get(id)!;
  // Free titrant over the whole curve, as far as half an excess of titrant.
  const from = -60;
  const to = Math.log(t.titrant.molPerL / 10);
  const step = (to - from) / (POINTS - 1);
  const volumes = Float64Array.from({ length: POINTS }, (_, i) => curve.volumeML(from + step * i));
  const fixed = new Float64Array(system.components.length).fill(NaN);
  fixed[0] = t.log10H * Math.LN10;
  fixed[column("ammonia")] = Math.log(t.freeMolPerL["ammonia"]!);
  const solver = eliminatedSolver(system.problem, fixed, Object.keys(t.sampleMolPerL).map(column))!;
  const totals = new Float64Array(system.components.length);
  const lnFree = new Float64Array(system.components.length);
  const sample = Object.entries(t.sampleMolPerL).map(([id, molPerL]) => ({ at: column(id), molPerL }));
  const [titrant, zinc] = [column("EDTA"), column("Zn2+")];
  const atVolume = (volumeML: number): number => {
    const dilution = t.sampleVolumeML / (t.sampleVolumeML + volumeML);
    for (const { at, molPerL } of sample) totals[at] = molPerL * dilution;
    totals[titrant] = t.titrant.molPerL * (1 - dilution);
    return solver.solve(totals, lnFree).method === "eliminated" ? lnFree[zinc]! : NaN;
  };
  const restart = (): void => {
    lnFree.fill(-12);
    lnFree[titrant] = from;
  };
  let worst = 0;
  restart();
  for (let i = 0; i < POINTS; i++) {
    if (!(volumes[i]! > 1e-6)) continue;
    worst = Math.max(worst, Math.abs(atVolume(volumes[i]!) + curve.point(from + step * i).pM * Math.LN10));
  }
  let sink = 0;
  const times = interleaved(
    [
      {
        name: "metals eliminated",
        run: () =>
          microsecondsPer(POINTS, REPEATS, () => {
            restart();
            for (let i = 0; i < POINTS; i++) sink += atVolume(volumes[i]!);
          }),
      },
      {
        name: "explicit curve",
        run: () =>
          microsecondsPer(POINTS, REPEATS, () => {
            for (let i = 0; i < POINTS; i++) sink += curve.point(from + step * i).pM;
          }),
      },
    ],
    ROUNDS,
  );
  const ratio = medianRatio(times.get("metals eliminated")!, times.get("explicit curve")!);
  const missed: string[] = [];
  const lines = [
    ...[...times].map(([name, values]) => timingLine(name, values, "a point")),
    atBar(
      `explicit curve: ${ratio.toFixed(2)} times as fast as the eliminated solver, median of the ratios within a round`,
      ratio >= LEAST_RATIO,
      `at least ${LEAST_RATIO}`,
      missed,
    ),
    `${system.species.length} species, 6 metals, EDTA, ammonia held; ln free zinc of both differs by ${worst.toExponential(1)} at most; median of ${ROUNDS} interleaved rounds`,
  ];
  const failures =
    Number.isFinite(sink) && worst <= AGREE ? [] : [`curve: both forms differ by ${worst} in ln free zinc`];
  return { lines, missing: [], failures, missed };
}
