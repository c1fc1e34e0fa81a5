import type { ComponentId, Knowledge, SolidDefinition, SpeciesDefinition } from "../constants/knowledge.ts";
import { beyondDaviesRange, daviesTerm, log10ActivityCoefficient } from "./activity.ts";
import { constantUse, log10KAt, uncertaintyAt } from "./move-constant.ts";
import type { ChosenConstants, SystemTemplate, TemplateRow } from "./system-template.ts";
import { buildTemplate, chooseConstants, filterTemplate } from "./system-template.ts";
import type { Conditions, ConstantUse, PreparedSpecies, PreparedSystem } from "./types.ts";

/** Which solids and species a system is made with. */
export interface PrepareOptions {
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

/** A prepared species; its evidence is put together only when it is asked for, for a search asks for it seldom. */
class PreparedRow implements PreparedSpecies {
  readonly id: string;
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly charge: number;
  readonly log10Beta: number;
  readonly uncertainty: number;
  readonly #row: TemplateRow;
  readonly #basis: EvidenceBasis;

  constructor(row: TemplateRow, log10Beta: number, uncertainty: number, basis: EvidenceBasis) {
    this.id = row.id;
    this.components = row.components;
    this.charge = row.charge;
    this.log10Beta = log10Beta;
    this.uncertainty = uncertainty;
    this.#row = row;
    this.#basis = basis;
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
  const { reactions } = template;
  const log10K = new Float64Array(reactions.length);
  const variance = new Float64Array(reactions.length);
  for (let i = 0; i < reactions.length; i++) {
    const constant = chosen.movable[i]!;
    log10K[i] = log10KAt(constant, term);
    variance[i] = uncertaintyAt(constant, reactions[i]!.deltaZ2, term) ** 2;
  }
  const basis = { template, chosen, conditions };
  const prepare = (rows: readonly TemplateRow[], lnBeta: Float64Array): PreparedRow[] =>
    rows.map((row, i) => {
      let log10Beta = 0;
      let sum = 0;
      for (const { reaction, factor } of row.chain) {
        log10Beta += factor * log10K[reaction]!;
        sum += factor * factor * variance[reaction]!;
      }
      lnBeta[i] = log10Beta * Math.LN10;
      return new PreparedRow(row, log10Beta, Math.sqrt(sum), basis);
    });
  const lnBeta = new Float64Array(template.species.length);
  const lnBetaOfSolids = new Float64Array(template.solids.length);
  const species = prepare(template.species, lnBeta);
  const solids = prepare(template.solids, lnBetaOfSolids);
  return {
    conditions,
    outOfModelRange: beyondDaviesRange(conditions.ionicStrengthMolPerL),
    components: template.components,
    index: template.index,
    species,
    solids,
    charges: template.charges,
    problem: {
      nComponents: template.components.length,
      nSpecies: species.length,
      stoichiometry: template.stoichiometry,
      lnBeta,
      solids: { stoichiometry: template.solidStoichiometry, lnBeta: lnBetaOfSolids, n: solids.length },
    },
    log10GammaH: log10ActivityCoefficient(1, conditions.ionicStrengthMolPerL, conditions.temperatureC),
    log10Kw: template.waterRow < 0 ? LOG10_KW_25C : species[template.waterRow]!.log10Beta,
  };
}

/** Ion product of water at 25 C and I = 0, used only where the knowledge holds no hydroxide. */
const LOG10_KW_25C = -13.997;
