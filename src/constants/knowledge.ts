import type {
  ComponentId,
  ComponentRecord,
  DataRemark,
  Reaction,
  ReactionId,
  SolidDefinition,
  SourceId,
  SourceRecord,
  SpeciesDefinition,
} from "./equilibria-types.ts";
import type { ElectrodeRecord, IndicatorRecord, PhotometricRecord } from "./indicator-types.ts";
import type { AgentRecord, BufferRecord, IonFact, KineticRecord, MaskingRecord } from "./agent-types.ts";
import type { DetourRecord, PrecedentRecord, ReleaseRecord, SeparationRecord } from "./way-types.ts";
import type {
  CautionRecord,
  GlasswareRecord,
  MetalTitrantRecord,
  PrimaryStandardRecord,
  ReagentRecord,
  TitrantRecord,
} from "./shelf-types.ts";

/**
 * What the program knows, as types: data with provenance, no behaviour. Every layer above reads these.
 * Logs are base 10, amounts mol/L, temperatures as named; charges in units of e.
 */

export type {
  Basis,
  ComponentForm,
  ComponentId,
  ComponentRecord,
  Confidence,
  ConstantRecord,
  DataRemark,
  EnthalpyRecord,
  Provenance,
  Reaction,
  ReactionId,
  SolidDefinition,
  SolidPace,
  SourceId,
  SourceRecord,
  SpeciesDefinition,
  SpeciesId,
} from "./equilibria-types.ts";
export type {
  ElectrodeRecord,
  EndPointModel,
  IndicatorBlocker,
  IndicatorClass,
  IndicatorRecord,
  IndicatorUse,
  PhotometricRecord,
} from "./indicator-types.ts";
export type {
  AgentRecord,
  BufferRecord,
  IonFact,
  KineticClass,
  KineticRecord,
  MaskingEffect,
  MaskingRecord,
  MaskingVia,
} from "./agent-types.ts";
export type { DetourReagent, DetourRecord, PrecedentRecord, ReleaseRecord, SeparationRecord } from "./way-types.ts";
export type {
  CautionRecord,
  GlasswareRecord,
  HazardTag,
  MetalTitrantRecord,
  PrimaryStandardRecord,
  ReagentRecord,
  TitrantRecord,
} from "./shelf-types.ts";

/** Everything the program knows. Immutable after loading. */
export interface Knowledge {
  readonly version: string;
  readonly hash: string; // sha256 of the canonical content of all data files and rules read, first 16 hex digits shown
  readonly sources: ReadonlyMap<SourceId, SourceRecord>;
  readonly components: ReadonlyMap<ComponentId, ComponentRecord>;
  readonly reactions: ReadonlyMap<ReactionId, Reaction>;
  readonly species: readonly SpeciesDefinition[];
  readonly solids: readonly SolidDefinition[];
  readonly titrants: ReadonlyMap<string, TitrantRecord>;
  readonly metalTitrants: ReadonlyMap<ComponentId, MetalTitrantRecord>;
  readonly indicators: ReadonlyMap<string, IndicatorRecord>;
  readonly buffers: ReadonlyMap<string, BufferRecord>;
  readonly agents: ReadonlyMap<string, AgentRecord>;
  readonly masking: readonly MaskingRecord[];
  readonly kinetics: readonly KineticRecord[];
  readonly releases: readonly ReleaseRecord[];
  readonly electrodes: readonly ElectrodeRecord[];
  readonly photometric: readonly PhotometricRecord[];
  readonly reagents: ReadonlyMap<string, ReagentRecord>;
  readonly cautions: readonly CautionRecord[];
  readonly glassware: readonly GlasswareRecord[];
  readonly standards: readonly PrimaryStandardRecord[];
  readonly ionFacts: readonly IonFact[];
  readonly precedents: readonly PrecedentRecord[];
  readonly detours: ReadonlyMap<string, DetourRecord>;
  readonly separations: readonly SeparationRecord[];
  readonly remarks: readonly DataRemark[];
  /** Atomic weights, g/mol, by element symbol. */
  readonly atomicWeights: ReadonlyMap<string, number>;
}
