import type { BufferRecord, ComponentId, ElectrodeRecord, Knowledge } from "../constants/knowledge.ts";
import { metalKinetics } from "./kinetics.ts";
import { pairHasComplex } from "./masks.ts";
import { PHOTOMETRIC_DYE_PART } from "./read-photometer.ts";
import { releaseSkeletons } from "./release-plan.ts";
import { stepAllowed } from "./shelf.ts";
import { backPlan, backSkeletons, calculable } from "./back-skeletons.ts";
import { basePlan, directSkeletons, forbidden, type Make, type Skeleton } from "./skeletons.ts";
import { benchPH } from "./dye-uses.ts";
import { buffersFor } from "./buffers.ts";
import type { StagePlan } from "./types.ts";

/** Every titration worth a look with the detections that the laboratory has. */
export function skeletonsOf(make: Make): Skeleton[] {
  const { detection } = make.task.laboratory;
  const eye = detection.includes("visual") || detection.includes("photometric");
  // A release tells the analyte from other metals; where it stands alone there is nothing to tell (but see `stagesFor`).
  const releases = besideOthers(make) ? releaseSkeletons(make) : [];
  const withDye = eye ? [...directSkeletons(make), ...backSkeletons(make), ...releases] : [];
  return [
    ...(detection.includes("visual") ? withDye : []),
    ...(detection.includes("photometric") ? [...photometricSkeletons(make, withDye), ...selfColoured(make)] : []),
    // An electrode has no dye to vary: the wider fields bring nothing but other titrants.
    ...(detection.includes("electrode") && !make.field.analogous ? electrodeSkeletons(make) : []),
  ];
}

/** Whether the sample holds a metal beside those determined that a complexone could bind. */
export function besideOthers({ task, knowledge, determines }: Make): boolean {
  const rows = [...task.analytes, ...task.matrix];
  const own = rows.filter(({ component }) => determines.includes(component)).reduce((sum, row) => sum + row.molPerL, 0);
  return rows.some(({ component, molPerL }) => {
    const record = knowledge.components.get(component);
    const binds = record?.kind === "metal" && record.charge > 1;
    return binds && !determines.includes(component) && molPerL > LEAST_COMPANY * own;
  });
}

/** Part of the analyte below which another metal is as good as absent. */
const LEAST_COMPANY = 1e-5;

/** The titrations with a dye, read with a photometer: for dyes whose colour can be calculated, with less of the dye. */
function photometricSkeletons({ knowledge }: Make, withDye: readonly Skeleton[]): Skeleton[] {
  return withDye.flatMap((skeleton) => {
    const { indicator, determines, backTitrant, chelate } = skeleton.plan;
    const dye = knowledge.indicators.get(indicator?.id ?? "");
    if (!dye || !indicator || (dye.endPointModel !== "two-colour" && dye.endPointModel !== "one-colour")) return [];
    const watched = backTitrant ? [backTitrant.id] : [...determines, ...(chelate ? [chelate.metal] : [])];
    if (!watched.some((metal) => calculable(dye, metal))) return [];
    // A one-colour reagent gives colour by its amount; of a dye that changes colour less is enough.
    const part = dye.endPointModel === "two-colour" ? PHOTOMETRIC_DYE_PART : 1;
    const molPerL = Number((part * indicator.molPerL).toPrecision(2));
    return [
      { ...skeleton, plan: { ...skeleton.plan, detection: "photometric", indicator: { ...indicator, molPerL } } },
    ];
  });
}

/** Complexes with colour enough of their own: no dye. */
function selfColoured(make: Make): Skeleton[] {
  const { knowledge, determines, field, shelf, task } = make;
  if (field.analogous || determines.length !== 1) return [];
  return knowledge.photometric.flatMap((record): Skeleton[] => {
    const { complex, pH: window } = record;
    if (complex === null || complex.metal !== determines[0] || !field.titrants.includes(complex.titrant)) return [];
    const pH = benchPH(window);
    const buffer = buffersFor(pH, knowledge, shelf, new Set())[0];
    if (!buffer || !shelf(complex.titrant)) return [];
    const plan: StagePlan = { ...basePlan(make, complex.titrant, null, pH, buffer, null), detection: "photometric" };
    return forbidden(task, plan.preparation) ? [] : [{ plan, use: "published", useBasis: basisOf(record), window }];
  });
}

const basisOf = (record: { readonly provenance: { readonly basis: string } }): "read" | "memory" =>
  record.provenance.basis === "read" ? "read" : "memory";

/** How firmly practice knows the electrode for these ions in this mode. */
function precedent(
  electrode: ElectrodeRecord,
  mode: "direct" | "back",
  ions: readonly ComponentId[],
): Pick<Skeleton, "use" | "useBasis"> {
  const use = electrode.uses.find((u) => u.mode === mode && ions.every((ion) => u.ions.includes(ion)));
  return use ? { use: "published", useBasis: basisOf(use) } : { use: "analogous", useBasis: "none" };
}

/** pH values that a bench sets in a titration with an electrode; each stands for its neighbourhood. */
const BENCH_PH = [2.2, 3.5, 5, 5.5, 7, 8.5, 9.5, 10, 12.5];
const NEIGHBOURHOOD = 1;
/** Chelate that lends the electrode its ion: in the middle of the usual 1e-5 to 1e-4 mol/L (practice, recalled). */
const CHELATE_MOL_PER_L = 5e-5;
/** Iron(II) that makes a redox electrode respond, as a share of the iron(III) (practice, recalled: a trace). */
const COUPLE_PART = 0.01;

function electrodeSkeletons(make: Make): Skeleton[] {
  const { knowledge, determines } = make;
  return knowledge.electrodes.flatMap((electrode) => {
    const all = electrode.shows.length > 0 && determines.every((ion) => electrode.shows.includes(ion));
    // The water hardness electrode sees both of its ions: it cannot tell one beside the other, and is not used for one alone.
    const alone = electrode.shows.length > determines.length && determines.length === 1;
    return [
      ...(all && !alone ? directWith(make, electrode) : []),
      ...(electrode.chelate !== null && !determines.includes(electrode.ion) ? directWith(make, electrode) : []),
      ...(electrode.shows.join() === electrode.ion ? backWith(make, electrode) : []),
    ];
  });
}

function directWith(make: Make, electrode: ElectrodeRecord): Skeleton[] {
  const { task, knowledge, shelf, determines, field } = make;
  const step = electrode.chelate === null ? null : `add-${electrode.chelate}`;
  if (step !== null && !stepAllowed(task, step)) return [];
  // The other half of the couple is a bottle like any other.
  if (electrode.couple !== null && !shelf(electrode.couple)) return [];
  return field.titrants.flatMap((titrant) => {
    if (!shelf(titrant) || (electrode.chelate !== null && electrode.chelate !== `Cu-${titrant}`)) return [];
    if (determines.some((ion) => metalKinetics(knowledge, ion, titrant).class !== "fast")) return [];
    return settings(make, electrode).map(({ pH, buffer, window }) => {
      const base = basePlan(make, titrant, null, pH, buffer, null);
      const plan: StagePlan = {
        ...base,
        detection: "electrode",
        electrode: electrode.id,
        preparation: [
          ...base.preparation,
          ...(step === null ? [] : [step]),
          // The couple follows faster at 40 to 60 C (practice, recalled).
          ...(electrode.couple !== null && task.laboratory.heating ? ["warm"] : []),
        ],
        chelate: step === null ? null : { metal: electrode.ion, ligand: titrant, molPerL: CHELATE_MOL_PER_L },
        added: electrode.couple === null ? base.added : [...base.added, trace(make, electrode.couple)],
      };
      return { plan, ...precedent(electrode, "direct", determines), window };
    });
  });
}

function trace({ task, determines }: Make, couple: ComponentId): StagePlan["added"][number] {
  const dilution = task.portion.volumeML / task.portion.titrationVolumeML;
  const iron = task.analytes.filter((a) => determines.includes(a.component)).reduce((s, a) => s + a.molPerL, 0);
  const molPerL = Number((COUPLE_PART * iron * dilution).toPrecision(2));
  return { id: couple, molPerL, purpose: "gives the platinum its redox couple" };
}

function backWith(make: Make, electrode: ElectrodeRecord): Skeleton[] {
  const { task, knowledge, shelf, determines, field } = make;
  if (!knowledge.metalTitrants.has(electrode.ion)) return [];
  if (!shelf(electrode.ion) || determines.includes(electrode.ion) || electrode.couple !== null) return [];
  return field.titrants.flatMap((titrant) => {
    if (!shelf(titrant)) return [];
    return settings(make, electrode).flatMap(({ pH, buffer, window }): Skeleton[] => {
      const back = backPlan(make, titrant, null, pH, buffer, electrode.ion, null);
      const plan: StagePlan = { ...back, detection: "electrode", electrode: electrode.id };
      return forbidden(task, plan.preparation) ? [] : [{ plan, ...precedent(electrode, "back", determines), window }];
    });
  });
}

/** pH, buffer and neighbourhood in which an electrode can be tried: buffers that bind its ion or harm it come last or not at all. */
function settings(
  { knowledge, shelf }: Make,
  electrode: ElectrodeRecord,
): { readonly pH: number; readonly buffer: BufferRecord; readonly window: readonly [number, number] }[] {
  const blind = new Set(electrode.avoidBuffers.map((b) => b.buffer));
  const seen = new Set<string>();
  return BENCH_PH.filter((pH) => pH >= electrode.pH[0] && pH <= electrode.pH[1]).flatMap((pH) => {
    const buffer = leastBinding(buffersFor(pH, knowledge, shelf, blind), electrode.ion, knowledge);
    if (!buffer || seen.has(`${buffer.id} ${Math.round(pH)}`)) return [];
    seen.add(`${buffer.id} ${Math.round(pH)}`);
    return [
      {
        pH,
        buffer,
        window: [Math.max(electrode.pH[0], pH - NEIGHBOURHOOD), Math.min(electrode.pH[1], pH + NEIGHBOURHOOD)] as const,
      },
    ];
  });
}

function leastBinding(
  buffers: readonly BufferRecord[],
  ion: ComponentId,
  knowledge: Knowledge,
): BufferRecord | undefined {
  const binds = (b: BufferRecord): boolean => b.component !== null && pairHasComplex(knowledge, b.component, ion);
  return buffers.find((b) => !binds(b)) ?? buffers[0];
}
