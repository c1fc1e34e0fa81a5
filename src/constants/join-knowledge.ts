import { DataError } from "../errors.ts";
import type {
  ComponentRecord,
  DataRemark,
  Knowledge,
  Reaction,
  SolidDefinition,
  SourceRecord,
  SpeciesDefinition,
} from "./knowledge.ts";
import { KNOWLEDGE_VERSION } from "./knowledge-version.ts";
import type { PracticeData } from "./load-practice.ts";
import { resolveIons } from "./resolve-ions.ts";

/** The equilibrium half of the knowledge, validated by its own loader. */
export interface EquilibriumData {
  readonly components: readonly ComponentRecord[];
  readonly reactions: readonly Reaction[];
  readonly species: readonly SpeciesDefinition[];
  readonly solids: readonly SolidDefinition[];
  readonly sources: readonly SourceRecord[];
  readonly remarks: readonly DataRemark[];
}

/**
 * Joins practice and equilibrium data into one frozen Knowledge: ions become component ids, ids are unique, every reference
 * and every source resolves, and every source is cited. Throws a DataError where one does not; what the model merely lacks
 * becomes a remark. `hash` is the digest of the files read.
 */
export function joinKnowledge(raw: PracticeData, equilibria: EquilibriumData, hash: string): Knowledge {
  const { practice, remarks } = resolveIons(raw, equilibria.components);
  const sources = joinSources(practice.sources, equilibria.sources);
  checkReferences(practice);
  checkDetours(practice, equilibria);
  const knowledge: Knowledge = {
    version: KNOWLEDGE_VERSION,
    hash,
    sources,
    components: byId("components", equilibria.components, (c) => c.id),
    reactions: byId("reactions", equilibria.reactions, (r) => r.id),
    species: equilibria.species,
    solids: equilibria.solids,
    titrants: byId("titrants.json", practice.titrants, (t) => t.id),
    metalTitrants: byId("metal-titrants.json", practice.metalTitrants, (t) => t.ion),
    indicators: byId("indicators.json", practice.indicators, (i) => i.id),
    buffers: byId("buffers.json", practice.buffers, (b) => b.id),
    agents: byId("agents.json", practice.agents, (a) => a.id),
    masking: practice.masking,
    kinetics: practice.kinetics,
    releases: practice.releases,
    electrodes: practice.electrodes,
    photometric: practice.photometric,
    reagents: byId("reagents.json", practice.reagents, (r) => r.id),
    cautions: practice.cautions,
    glassware: practice.glassware,
    standards: practice.standards,
    ionFacts: practice.ionFacts,
    precedents: practice.precedents,
    detours: byId("detours.json", practice.detours, (d) => d.id),
    separations: practice.separations,
    remarks: [...equilibria.remarks, ...practice.remarks, ...remarks],
    atomicWeights: new Map(practice.atomicWeights.map((a) => [a.element, a.gPerMol])),
  };
  checkSources(sources, [knowledge, practice.atomicWeights]);
  return freezeDeep(knowledge);
}

function byId<T>(file: string, records: readonly T[], idOf: (record: T) => string): ReadonlyMap<string, T> {
  const map = new Map<string, T>();
  records.forEach((record, i) => {
    const id = idOf(record);
    if (map.has(id)) throw new DataError(file, `$[${i}]`, `the id "${id}" stands twice`);
    map.set(id, record);
  });
  return map;
}

function joinSources(practice: readonly SourceRecord[], equilibria: readonly SourceRecord[]) {
  const sources = new Map(byId("the equilibrium sources", equilibria, (s) => s.id));
  practice.forEach((source, i) => {
    const other = sources.get(source.id);
    if (other !== undefined && other.citation !== source.citation)
      throw new DataError("sources-practice.json", `$[${i}]`, `"${source.id}" has another citation elsewhere`);
    sources.set(source.id, other ?? source);
  });
  return sources;
}

/** Ids named by kinetic and masking rows exist, or a remark says that the agent is never proposed. */
function checkReferences(practice: PracticeData): void {
  const indicators = new Set(practice.indicators.map((i) => i.id));
  const agents = new Set(practice.agents.map((a) => a.id));
  const titrants = new Set(practice.titrants.map((t) => t.id));
  const remarked = new Set(practice.remarks.map((r) => r.about));
  practice.kinetics.forEach((row, i) => {
    if (row.indicator !== null && !indicators.has(row.indicator))
      throw new DataError("kinetics.json", `$[${i}].indicator`, `unknown indicator "${row.indicator}"`);
    if (row.titrant !== null && !titrants.has(row.titrant) && !agents.has(row.titrant))
      throw new DataError("kinetics.json", `$[${i}].titrant`, `unknown titrant "${row.titrant}"`);
  });
  practice.photometric.forEach((row, i) => {
    if (row.indicator !== null && !indicators.has(row.indicator))
      throw new DataError("photometric.json", `$[${i}].indicator`, `unknown indicator "${row.indicator}"`);
  });
  const electrodes = new Set(practice.electrodes.map((e) => e.id));
  practice.electrodes.forEach((row, i) => {
    if (row.membraneOf !== null && !electrodes.has(row.membraneOf))
      throw new DataError("electrodes.json", `$[${i}].membraneOf`, `unknown electrode "${row.membraneOf}"`);
  });
  practice.releases.forEach((row, i) => {
    const unknown = [
      ...[row.agent, ...row.beside].filter((id) => !agents.has(id)),
      ...row.indicators.filter((id) => !indicators.has(id)),
      ...row.titrants.filter((id) => !titrants.has(id)),
    ];
    if (unknown.length > 0) throw new DataError("releases.json", `$[${i}]`, `no record for "${unknown.join('", "')}"`);
  });
  practice.masking.forEach((row, i) => {
    if (row.agent !== "none" && !agents.has(row.agent) && !remarked.has(row.agent))
      throw new DataError("masking.json", `$[${i}].agent`, `unknown agent "${row.agent}", and no remark says so`);
  });
}

/** Components, solids and dyes that a way round names exist, and a way that is calculated has a solid or needs none. */
function checkDetours(practice: PracticeData, equilibria: EquilibriumData): void {
  const components = new Set(equilibria.components.map((c) => c.id));
  const solids = new Set(equilibria.solids.map((s) => s.id));
  const indicators = new Set(practice.indicators.map((i) => i.id));
  practice.detours.forEach((row, i) => {
    const fault = (field: string, text: string): DataError => new DataError("detours.json", `$[${i}].${field}`, text);
    const named = [
      row.analyte,
      row.metal,
      ...row.finish.backTitrants,
      ...Object.keys(row.reagent.components),
      ...Object.keys(row.precipitant?.components ?? {}),
      ...Object.keys(row.precipitation?.with ?? {}),
    ];
    for (const id of named) if (!components.has(id)) throw fault("analyte", `unknown component "${id}"`);
    for (const id of row.solids) if (!solids.has(id)) throw fault("solids", `unknown solid "${id}"`);
    for (const id of row.finish.dyes) if (!indicators.has(id)) throw fault("finish.dyes", `unknown indicator "${id}"`);
    if ((row.finish.mode === "back") !== row.finish.backTitrants.length > 0)
      throw fault("finish", "a back titration names its back titrants, a direct one has none");
    if (row.rests === "equilibrium" && row.precipitation !== null && row.solids.length === 0)
      throw fault("solids", "a precipitation that is calculated needs a solid of the model");
  });
}

/** Ids of all sources that some provenance inside the value cites. */
export function citedSources(value: unknown): ReadonlySet<string> {
  const cited = new Set<string>();
  const visit = (node: unknown): void => {
    if (node === null || typeof node !== "object") return;
    if (node instanceof Map) node.forEach(visit);
    if ("source" in node && "basis" in node && typeof node.source === "string") cited.add(node.source);
    Object.values(node).forEach(visit);
  };
  visit(value);
  return cited;
}

function checkSources(sources: ReadonlyMap<string, SourceRecord>, holders: readonly unknown[]): void {
  const cited = citedSources(holders);
  for (const id of cited) if (!sources.has(id)) throw new DataError("sources", "$", `"${id}" is cited but not listed`);
  for (const id of sources.keys())
    if (!cited.has(id)) throw new DataError("sources", "$", `"${id}" is listed but nowhere cited`);
}

const refuse = (): never => {
  throw new TypeError("the knowledge is read-only");
};

/** Freezes the value and everything in it; a Map keeps its contents in slots that freezing does not reach, so its writers refuse. */
function freezeDeep<T>(value: T): T {
  if (value === null || typeof value !== "object" || Object.isFrozen(value)) return value;
  if (value instanceof Map) {
    value.forEach(freezeDeep);
    Object.assign(value, { set: refuse, delete: refuse, clear: refuse });
  } else Object.values(value).forEach(freezeDeep);
  return Object.freeze(value);
}
