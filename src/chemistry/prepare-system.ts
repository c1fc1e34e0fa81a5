import type { ComponentId, Knowledge, SolidDefinition, SpeciesDefinition } from "../constants/knowledge.ts";
import { beyondDaviesRange, daviesTerm, log10ActivityCoefficient } from "./activity.ts";
import { constantUse, uncertaintyAt } from "./move-constant.ts";
import type { Chains, ChosenConstants, SystemTemplate, TemplateRow } from "./system-template.ts";
import { buildTemplate, chooseConstants, filterTemplate } from "./system-template.ts";
import type { Conditions, ConstantUse, PreparedSpecies, PreparedSystem } from "./types.ts";

/** Which solids and species a system is made with. */
export interface PrepareOptions {
  /** Names the choice that `solids` and `exclude` make: calls with the same components and key choose the same, and ask them once. */
  readonly key?: string;
  readonly solids?: (solid: SolidDefinition) => boolean; // default: every solid of the components
  readonly exclude?: (species: SpeciesDefinition) => boolean; // default: none
}

interface CachedTemplate {
  readonly template: SystemTemplate;
  readonly chosen: Map<string, ChosenConstants>;
}
interface KnowledgeCache {
  readonly full: Map<string, SystemTemplate>;
  readonly filtered: Map<string, CachedTemplate>;
  readonly named: Map<string, CachedTemplate>; // those of `filtered` by the key of the caller
  readonly definitions: Map<string, SpeciesDefinition>;
  readonly solids: Map<string, SolidDefinition>;
}

/** Templates kept per knowledge; the oldest goes first. A recommendation meets some hundreds of component sets. */
const CACHED_TEMPLATES = 1000;
/** Templates depend on the knowledge alone, which never changes: remembering them is not state that anyone can see. */
const caches = new WeakMap<Knowledge, KnowledgeCache>();

/**
 * A set of components ready to solve at `conditions` (mol/L, C): every species of `knowledge` made of these components, constants
 * moved to the conditions (beyond 0.5 mol/L with the Davies term at 0.5 and `outOfModelRange`). Column 0 is H+ whether listed or not; the
 * others keep the order of `componentIds`. Throws AppError "unknown-component" and "unknown-reaction".
 */
export function prepareSystem(
  knowledge: Knowledge,
  componentIds: readonly ComponentId[],
  conditions: Conditions,
  options: PrepareOptions = {},
): PreparedSystem {
  const cached = templateOf(knowledge, componentIds, options);
  return assemble(cached.template, chosenOf(cached, conditions), conditions);
}

function cacheOf(knowledge: Knowledge): KnowledgeCache {
  let cache = caches.get(knowledge);
  if (cache === undefined) {
    cache = {
      full: new Map(),
      filtered: new Map(),
      named: new Map(),
      definitions: new Map(knowledge.species.map((species) => [species.id, species])),
      solids: new Map(knowledge.solids.map((solid) => [solid.id, solid])),
    };
    caches.set(knowledge, cache);
  }
  return cache;
}

function remember<V>(map: Map<string, V>, key: string, make: () => V): V {
  const known = map.get(key);
  if (known !== undefined) return known;
  const made = make();
  if (map.size >= CACHED_TEMPLATES) map.delete(map.keys().next().value!);
  map.set(key, made);
  return made;
}

function templateOf(knowledge: Knowledge, ids: readonly ComponentId[], options: PrepareOptions): CachedTemplate {
  const cache = cacheOf(knowledge);
  const key = ids.join("\u0000");
  const full = remember(cache.full, key, () => buildTemplate(knowledge, ids));
  const { solids, exclude } = options;
  if (solids === undefined && exclude === undefined) {
    return remember(cache.filtered, key, () => ({ template: full, chosen: new Map() }));
  }
  if (options.key === undefined) return filteredTemplate(cache, key, full, options);
  return remember(cache.named, `${key}\u0001${options.key}`, () => filteredTemplate(cache, key, full, options));
}

function filteredTemplate(
  cache: KnowledgeCache,
  key: string,
  full: SystemTemplate,
  { solids, exclude }: PrepareOptions,
): CachedTemplate {
  const keepSpecies = full.species.map(({ id }) => {
    const known = cache.definitions.get(id);
    return exclude === undefined || known === undefined || !exclude(known);
  });
  const keepSolids = full.solids.map(({ id }) => solids === undefined || solids(cache.solids.get(id)!));
  const mask = [...keepSpecies, ...keepSolids].map((keep) => (keep ? "1" : "0")).join("");
  return remember(cache.filtered, `${key}\u0001${mask}`, () => ({
    template: filterTemplate(full, keepSpecies, keepSolids),
    chosen: new Map(),
  }));
}

function chosenOf(cached: CachedTemplate, conditions: Conditions): ChosenConstants {
  const { ionicStrengthMolPerL: i, temperatureC } = conditions;
  const key = `${temperatureC} ${i <= 0 ? "0" : Math.max(-81, Math.round(Math.log10(i) * 20))}`;
  return remember(cached.chosen, key, () => chooseConstants(cached.template, conditions));
}

/** A prepared species; uncertainty and evidence are put together only when they are asked for, for a search asks for them seldom. */
class PreparedRow implements PreparedSpecies {
  readonly id: string;
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly charge: number;
  readonly log10Beta: number;
  readonly #row: TemplateRow;
  readonly #basis: EvidenceBasis;

  constructor(row: TemplateRow, log10Beta: number, basis: EvidenceBasis) {
    this.id = row.id;
    this.components = row.components;
    this.charge = row.charge;
    this.log10Beta = log10Beta;
    this.#row = row;
    this.#basis = basis;
  }

  get uncertainty(): number {
    const { template, chosen, conditions } = this.#basis;
    const term = daviesTerm(conditions.ionicStrengthMolPerL);
    let sum = 0;
    for (const { reaction, factor } of this.#row.chain) {
      const own = uncertaintyAt(chosen.movable[reaction]!, template.reactions[reaction]!.deltaZ2, term);
      sum += factor * factor * own ** 2;
    }
    return Math.sqrt(sum);
  }

  get evidence(): readonly ConstantUse[] {
    const { template, chosen, conditions } = this.#basis;
    return this.#row.chain.map(({ reaction: at, factor }) => ({
      ...constantUse(
        template.reactions[at]!,
        chosen.records[at]!,
        chosen.passedOver[at]!,
        chosen.movable[at]!,
        conditions,
      ),
      factor,
    }));
  }
}

interface EvidenceBasis {
  readonly template: SystemTemplate;
  readonly chosen: ChosenConstants;
  readonly conditions: Conditions;
}

function assemble(template: SystemTemplate, chosen: ChosenConstants, conditions: Conditions): PreparedSystem {
  const term = daviesTerm(conditions.ionicStrengthMolPerL);
  const basis = { template, chosen, conditions };
  const ofSpecies = log10Betas(template.chains, chosen, term);
  const ofSolids = log10Betas(template.solidChains, chosen, term);
  const prepared = (rows: readonly TemplateRow[], log10Beta: Float64Array): PreparedRow[] =>
    rows.map((row, i) => new PreparedRow(row, log10Beta[i]!, basis));
  let species: readonly PreparedSpecies[] | null = null;
  let solids: readonly PreparedSpecies[] | null = null;
  return {
    conditions,
    outOfModelRange: beyondDaviesRange(conditions.ionicStrengthMolPerL),
    components: template.components,
    index: template.index,
    // A search makes some systems only to find an ionic strength: their rows are never looked at.
    get species() {
      return (species ??= prepared(template.species, ofSpecies));
    },
    get solids() {
      return (solids ??= prepared(template.solids, ofSolids));
    },
    rows: template.species,
    solidRows: template.solids,
    charges: template.charges,
    problem: {
      nComponents: template.components.length,
      nSpecies: template.species.length,
      stoichiometry: template.stoichiometry,
      lnBeta: ofSpecies.map((value) => value * Math.LN10),
      solids: {
        stoichiometry: template.solidStoichiometry,
        lnBeta: ofSolids.map((value) => value * Math.LN10),
        n: template.solids.length,
      },
    },
    log10GammaH: log10ActivityCoefficient(1, conditions.ionicStrengthMolPerL, conditions.temperatureC),
    log10Kw: template.waterRow < 0 ? LOG10_KW_25C : ofSpecies[template.waterRow]!,
  };
}

function log10Betas({ start, reaction, factor }: Chains, chosen: ChosenConstants, term: number): Float64Array {
  const { log10KAtZeroTerm, slope } = chosen;
  const out = new Float64Array(start.length - 1);
  for (let i = 0; i < out.length; i++) {
    let sum = 0;
    for (let p = start[i]!; p < start[i + 1]!; p++)
      sum += factor[p]! * (log10KAtZeroTerm[reaction[p]!]! + slope[reaction[p]!]! * term);
    out[i] = sum;
  }
  return out;
}

/** Ion product of water at 25 C and I = 0, used only where the knowledge holds no hydroxide. */
const LOG10_KW_25C = -13.997;
