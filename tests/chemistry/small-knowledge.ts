import type {
  ComponentRecord,
  ConstantRecord,
  EnthalpyRecord,
  Knowledge,
  Provenance,
  Reaction,
  SolidDefinition,
  SolidPace,
  SpeciesDefinition,
  TitrantRecord,
} from "../../src/constants/knowledge.ts";

const provenance: Provenance = { source: "made-up", record: "1", basis: "computed", confidence: "high" };

/** A species of a small knowledge: log10 beta at 0.1 mol/L and 25 C unless said otherwise. */
export interface SmallSpecies {
  readonly components: Readonly<Record<string, number>>;
  readonly log10Beta: number;
  readonly ionicStrengthMolPerL?: number;
  readonly enthalpyKJPerMol?: number;
}

/** A record of a reaction for tests, with plain defaults. */
export function record(log10K: number, change: Partial<ConstantRecord> = {}): ConstantRecord {
  return {
    log10K,
    ionicStrengthMolPerL: 0.1,
    temperatureC: 25,
    uncertainty: 0.05,
    uncertaintyStated: true,
    doubtful: false,
    provenance,
    ...change,
  };
}

/** A reaction for tests. */
export function reaction(
  id: string,
  deltaZ2: number,
  records: readonly ConstantRecord[],
  enthalpies: readonly EnthalpyRecord[] = [],
): Reaction {
  return { id, text: id, deltaZ2, records, enthalpies };
}

/** An enthalpy record for tests. */
export function enthalpy(kJPerMol: number, change: Partial<EnthalpyRecord> = {}): EnthalpyRecord {
  return { kJPerMol, ionicStrengthMolPerL: 0.1, temperatureC: 25, doubtful: false, provenance, ...change };
}

/** A small knowledge made by hand: components with charges, species and solids with constants, water always in; titrants by name. */
export function smallKnowledge(
  charges: Readonly<Record<string, number>>,
  species: readonly SmallSpecies[],
  solids: readonly (SmallSpecies & { readonly id: string; readonly pace?: SolidPace })[] = [],
  titrants: readonly string[] = ["EDTA"],
): Knowledge {
  const components = new Map<string, ComponentRecord>(
    Object.entries({ "H+": 1, ...charges }).map(([id, charge]) => [
      id,
      {
        id,
        kind: id === "H+" ? "proton" : charge > 0 ? "metal" : "ligand",
        charge,
        name: id,
        ion: id,
        forms: [],
        synonyms: [],
        molarMassGPerMol: 1,
      },
    ]),
  );
  const reactions = new Map<string, Reaction>();
  const chargeOf = (parts: Readonly<Record<string, number>>) =>
    Object.entries(parts).reduce((sum, [id, n]) => sum + n * components.get(id)!.charge, 0);
  const add = (row: SmallSpecies, productZ2: number): string => {
    const id = `${JSON.stringify(row.components)} ${row.log10Beta}`;
    const z2 = Object.entries(row.components).reduce((sum, [c, n]) => sum + n * components.get(c)!.charge ** 2, 0);
    const where = row.ionicStrengthMolPerL === undefined ? {} : { ionicStrengthMolPerL: row.ionicStrengthMolPerL };
    const heats = row.enthalpyKJPerMol === undefined ? [] : [enthalpy(row.enthalpyKJPerMol)];
    reactions.set(id, reaction(id, productZ2 - z2, [record(row.log10Beta, where)], heats));
    return id;
  };
  const water: SmallSpecies = { components: { "H+": -1 }, log10Beta: -13.78 };
  const definitions: SpeciesDefinition[] = [water, ...species].map((row) => ({
    id: Object.entries(row.components)
      .map(([id, n]) => `${id}*${n}`)
      .join(" "),
    components: row.components,
    charge: chargeOf(row.components),
    chain: [{ reaction: add(row, chargeOf(row.components) ** 2), factor: 1 }],
  }));
  const solidDefinitions: SolidDefinition[] = solids.map((row) => ({
    id: row.id,
    components: row.components,
    chain: [{ reaction: add(row, 0), factor: 1 }],
    pace: row.pace ?? "fast",
    redissolvesWhileTitrated: true,
    fresh: true,
    provenance,
  }));
  return {
    version: "test",
    hash: "0".repeat(16),
    sources: new Map(),
    components,
    reactions,
    species: definitions,
    solids: solidDefinitions,
    titrants: new Map(
      titrants.map((id): [string, TitrantRecord] => [
        id,
        { id, name: id, usualMolPerL: [0.01], donors: 6, special: false },
      ]),
    ),
    metalTitrants: new Map(),
    indicators: new Map(),
    buffers: new Map(),
    agents: new Map(),
    masking: [],
    detours: new Map(),
    kinetics: [],
    releases: [],
    electrodes: [],
    photometric: [],
    reagents: new Map(),
    cautions: [],
    glassware: [],
    standards: [],
    ionFacts: [],
    precedents: [],
    separations: [],
    remarks: [],
    atomicWeights: new Map(),
  };
}

/** EDTA with zinc and calcium in ammonia: round constants of the usual size, for tests only. */
export function zincKnowledge(): Knowledge {
  return smallKnowledge(
    { "Zn2+": 2, "Ca2+": 2, EDTA: -4, ammonia: 0, fluoride: -1 },
    [
      { components: { EDTA: 1, "H+": 1 }, log10Beta: 10.2 },
      { components: { EDTA: 1, "H+": 2 }, log10Beta: 16.3 },
      { components: { EDTA: 1, "H+": 3 }, log10Beta: 19 },
      { components: { EDTA: 1, "H+": 4 }, log10Beta: 21 },
      { components: { "Zn2+": 1, EDTA: 1 }, log10Beta: 16.5 },
      { components: { "Zn2+": 1, EDTA: 1, "H+": 1 }, log10Beta: 19.5 },
      { components: { "Zn2+": 1, EDTA: 1, "H+": -1 }, log10Beta: 4.9 },
      { components: { "Ca2+": 1, EDTA: 1 }, log10Beta: 10.65 },
      { components: { ammonia: 1, "H+": 1 }, log10Beta: 9.3 },
      { components: { "Zn2+": 1, ammonia: 1 }, log10Beta: 2.3 },
      { components: { "Zn2+": 1, ammonia: 2 }, log10Beta: 4.6 },
      { components: { "Zn2+": 1, ammonia: 3 }, log10Beta: 7 },
      { components: { "Zn2+": 1, ammonia: 4 }, log10Beta: 9.1 },
      { components: { "Zn2+": 1, "H+": -1 }, log10Beta: -9 },
      { components: { "Zn2+": 1, "H+": -2 }, log10Beta: -17 },
      { components: { "Ca2+": 1, "H+": -1 }, log10Beta: -12.7 },
      { components: { fluoride: 1, "H+": 1 }, log10Beta: 2.9 },
      { components: { "Ca2+": 1, fluoride: 1 }, log10Beta: 0.6 },
    ],
    [
      { id: "CaF2", components: { "Ca2+": 1, fluoride: 2 }, log10Beta: 9.6 },
      { id: "slow CaF2", components: { "Ca2+": 1, fluoride: 2 }, log10Beta: 10.4, pace: "slow" },
    ],
  );
}
