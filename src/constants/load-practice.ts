import { z } from "zod";
import type {
  AgentRecord,
  BufferRecord,
  CautionRecord,
  DataRemark,
  DetourRecord,
  ElectrodeRecord,
  GlasswareRecord,
  IndicatorRecord,
  IonFact,
  KineticRecord,
  MaskingRecord,
  MetalTitrantRecord,
  PhotometricRecord,
  PrecedentRecord,
  PrimaryStandardRecord,
  ReagentRecord,
  ReleaseRecord,
  SeparationRecord,
  SourceRecord,
  TitrantRecord,
} from "./knowledge.ts";
import * as detection from "./detection-schema.ts";
import { detourSchema } from "./detour-schema.ts";
import * as schema from "./practice-schema.ts";
import { type ReadFile, readRecords } from "./read-records.ts";
import { releaseSchema } from "./release-schema.ts";
import * as shelf from "./shelf-schema.ts";

/** Handbook and trade knowledge as its files hold it: ions still in the spelling of the files, nothing joined. */
export interface PracticeData {
  readonly sources: readonly SourceRecord[];
  readonly titrants: readonly TitrantRecord[];
  readonly metalTitrants: readonly MetalTitrantRecord[];
  readonly indicators: readonly IndicatorRecord[];
  readonly buffers: readonly BufferRecord[];
  readonly agents: readonly AgentRecord[];
  readonly masking: readonly MaskingRecord[];
  readonly kinetics: readonly KineticRecord[];
  readonly releases: readonly ReleaseRecord[];
  readonly electrodes: readonly ElectrodeRecord[];
  readonly photometric: readonly PhotometricRecord[];
  readonly reagents: readonly ReagentRecord[];
  readonly cautions: readonly CautionRecord[];
  readonly glassware: readonly GlasswareRecord[];
  readonly standards: readonly PrimaryStandardRecord[];
  readonly ionFacts: readonly IonFact[];
  readonly precedents: readonly PrecedentRecord[];
  readonly detours: readonly DetourRecord[];
  readonly separations: readonly SeparationRecord[];
  readonly remarks: readonly DataRemark[];
  readonly atomicWeights: readonly z.infer<typeof schema.atomicWeightSchema>[];
}

/** Reads and validates every practice file. Throws a DataError (file, JSON path) for the first one that breaks its schema. */
export function loadPractice(readFile: ReadFile): PracticeData {
  const list = <T>(name: string, record: z.ZodType<T>): readonly T[] =>
    readRecords(readFile, name, z.array(record).min(1));
  return {
    sources: list("sources-practice.json", schema.sourceSchema),
    titrants: list("titrants.json", shelf.titrantSchema),
    metalTitrants: list("metal-titrants.json", shelf.metalTitrantSchema),
    indicators: list("indicators.json", schema.indicatorSchema),
    buffers: list("buffers.json", schema.bufferSchema),
    agents: list("agents.json", schema.agentSchema),
    masking: list("masking.json", schema.maskingSchema),
    kinetics: list("kinetics.json", schema.kineticSchema),
    electrodes: list("electrodes.json", detection.electrodeSchema),
    photometric: list("photometric.json", detection.photometricSchema),
    releases: list("releases.json", releaseSchema),
    reagents: list("reagents.json", shelf.reagentSchema),
    cautions: list("cautions.json", shelf.cautionSchema),
    glassware: list("glassware.json", shelf.glasswareSchema),
    standards: list("standards.json", shelf.standardSchema),
    ionFacts: list("ion-facts.json", schema.ionFactSchema),
    precedents: list("precedents.json", schema.precedentSchema),
    detours: list("detours.json", detourSchema),
    separations: list("separations.json", schema.separationSchema),
    remarks: list("practice-remarks.json", schema.remarkSchema),
    atomicWeights: list("atomic-weights.json", schema.atomicWeightSchema),
  };
}
