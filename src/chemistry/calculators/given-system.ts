import type { ComponentId, ConstantRecord, Knowledge } from "../../constants/knowledge.ts";
import { log10ActivityCoefficient } from "../activity.ts";
import type { ConstantUse, PreparedSpecies, PreparedSystem } from "../types.ts";
import type { AcidityRequest, GivenConstant } from "./types.ts";

/**
 * A system of the given components with the constants of the question itself, used as they are. Component names are free; a name the
 * knowledge holds has its charge, another none. Constants of components that are not in the solution are left out.
 * No water: hydroxo species count where they are given with a negative "H+". Columns: H+ first, then `ids` in order.
 */
export function givenSystem(
  constants: readonly GivenConstant[],
  ids: readonly ComponentId[],
  knowledge: Knowledge,
  temperatureC: number,
): PreparedSystem {
  const components = ["H+", ...ids.filter((id) => id !== "H+")];
  const index = new Map(components.map((id, column) => [id, column]));
  const chargeOf = (id: ComponentId) => (id === "H+" ? 1 : (knowledge.components.get(id)?.charge ?? 0));
  const used = constants.filter(({ components: c }) => Object.entries(c).every(([id, n]) => n === 0 || index.has(id)));
  const rows = [...components.map((id) => ({ components: { [id]: 1 }, log10Beta: 0 })), ...used];
  const species = rows.map((row): PreparedSpecies => {
    const parts = Object.entries(row.components).filter(([, n]) => n !== 0);
    return {
      id: parts.map(([id, n]) => (n === 1 ? id : `${id} x ${n}`)).join(", "),
      components: Object.fromEntries(parts),
      charge: parts.reduce((sum, [id, n]) => sum + n * chargeOf(id), 0),
      log10Beta: row.log10Beta,
      uncertainty: 0,
      evidence: NO_EVIDENCE,
    };
  });
  const stoichiometry = new Int8Array(species.length * components.length);
  species.forEach((s, i) => {
    for (const [id, n] of Object.entries(s.components)) stoichiometry[i * components.length + index.get(id)!] = n;
  });
  const water = species.find((s) => s.components["H+"] === -1 && Object.keys(s.components).length === 1);
  return {
    conditions: { ionicStrengthMolPerL: 0, temperatureC },
    outOfModelRange: false,
    components,
    index,
    species,
    rows: species,
    solids: [],
    solidRows: [],
    charges: Float64Array.from(species, (s) => s.charge),
    problem: {
      nComponents: components.length,
      nSpecies: species.length,
      stoichiometry,
      lnBeta: Float64Array.from(species, (s) => s.log10Beta * Math.LN10),
      solids: { stoichiometry: new Int8Array(0), lnBeta: new Float64Array(0), n: 0 },
    },
    log10GammaH: 0,
    log10Kw: water === undefined ? -14 : water.log10Beta,
  };
}

const NO_EVIDENCE: readonly ConstantUse[] = [];

/**
 * log10 of the hydrogen ion concentration of a question with constants of its own: log10H as given; a pH becomes a concentration by the
 * Davies equation only where the question states an ionic strength (mol/L), for "no correction" means none.
 */
export function givenLog10H(acidity: AcidityRequest, ionicStrength: "auto" | number, temperatureC: number): number {
  if (acidity.log10H !== undefined) return acidity.log10H;
  const stated = ionicStrength === "auto" ? 0 : ionicStrength;
  return -(acidity.pH ?? 7) - log10ActivityCoefficient(1, stated, temperatureC);
}

/** The source of a species' constant in words: the records it is made of, each once. */
export function sourceOf(species: PreparedSpecies, given: boolean): string {
  if (Object.keys(species.components).length === 1 && Object.values(species.components)[0] === 1) return "component";
  if (given) return "given with the question";
  return [...new Set(species.evidence.map((use) => inWords(use.record)))].join("; ");
}

function inWords({ provenance }: ConstantRecord): string {
  const place = provenance.record === undefined ? provenance.where : `record ${provenance.record}`;
  return `${provenance.source}${place === undefined ? "" : ` ${place}`}${provenance.basis === "read" ? "" : ` (${provenance.basis})`}`;
}
