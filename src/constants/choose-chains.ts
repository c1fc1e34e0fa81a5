import type { Composition, Term } from "./equilibria-rows.ts";

/** A reaction as the choice of chains sees it. */
export interface ChainReaction {
  readonly id: string;
  readonly terms: readonly Term[];
  readonly usable: boolean;
  readonly weight: number; // see `reactionWeight`
}

/** How one composition is reached: reactions times factors (sorted by reaction), and what the route costs. */
export interface Derivation {
  readonly components: Composition;
  readonly chain: readonly (readonly [reaction: string, factor: number])[];
  readonly cost: number;
}

/** What makes a reaction a poor link. */
export interface ReactionQuality {
  readonly allDoubtful: boolean;
  readonly nearUsualConditions: boolean; // a record that is not doubtful between 0.05 and 1 mol/L
  readonly read: boolean; // a record that was read, not recalled
}

/** Cost of a reaction as a link of a chain: 1, and more for doubtful (10), recalled (8) and far from usual conditions (0.5). */
export function reactionWeight(quality: ReactionQuality): number {
  return 1 + (quality.allDoubtful ? 10 : 0) + (quality.read ? 0 : 8) + (quality.nearUsualConditions ? 0 : 0.5);
}

/** A key for a composition: entries in order of component, zeros dropped. */
export function compositionKey(components: Composition): string {
  const ids = Object.keys(components);
  if (ids.length > 1) ids.sort();
  let key = "";
  for (const id of ids) {
    const count = components[id]!;
    if (count !== 0) key += `${key === "" ? "" : " "}${id}:${count}`;
  }
  return key;
}

/** The partners of a reaction, equal ones merged. */
interface Partner {
  readonly key: string;
  readonly components: Composition;
  readonly phase: "" | "s" | "g";
  coefficient: number;
}

interface Link {
  readonly reaction: string;
  readonly partners: readonly Partner[];
  readonly target: Partner;
  readonly cost: number;
}

/**
 * The cheapest derivation of every dissolved composition that the usable reactions reach from the free components and water. The cost of a route
 * is the weight of its last reaction plus the costs of that reaction's other partners (times their relative coefficients where above 1): it
 * only grows along a route, so the best routes are found by relaxation and hold no circle. Ties go to the reaction whose id sorts first; the order
 * of the reactions does not matter. Returns a map from `compositionKey`; free components and water are in it with an empty chain.
 */
export function chooseChains(
  reactions: readonly ChainReaction[],
  componentIds: Iterable<string>,
): Map<string, Derivation> {
  const free = new Map<string, Composition>([["", {}]]);
  for (const id of componentIds) free.set(compositionKey({ [id]: 1 }), { [id]: 1 });
  const links = new Map<string, Link>();
  const costOf = (partner: Partner): number =>
    partner.phase !== ""
      ? Number.POSITIVE_INFINITY
      : free.has(partner.key)
        ? 0
        : (links.get(partner.key)?.cost ?? Number.POSITIVE_INFINITY);
  const prepared = reactions.filter((r) => r.usable).map((r) => ({ ...r, partners: mergeTerms(r.terms) }));
  for (let changed = true; changed; ) {
    changed = false;
    for (const { id, weight, partners } of prepared) {
      const costs = partners.map(costOf);
      if (costs.filter((cost) => cost === Number.POSITIVE_INFINITY).length > 1) continue;
      partners.forEach((target, t) => {
        if (target.phase !== "" || free.has(target.key)) return;
        let cost = weight;
        partners.forEach((partner, p) => {
          if (p !== t) cost += Math.max(1, Math.abs(partner.coefficient / target.coefficient)) * costs[p]!;
        });
        if (cost === Number.POSITIVE_INFINITY) return;
        const present = links.get(target.key);
        if (present !== undefined && (present.cost < cost || (present.cost === cost && present.reaction <= id))) return;
        links.set(target.key, { reaction: id, partners, target, cost });
        changed = true;
      });
    }
  }
  const derived = new Map<string, Derivation>();
  for (const [key, components] of free) derived.set(key, { components, chain: [], cost: 0 });
  for (const key of links.keys()) resolve(key, links, derived);
  return derived;
}

function resolve(key: string, links: ReadonlyMap<string, Link>, derived: Map<string, Derivation>): void {
  if (derived.has(key)) return;
  const link = links.get(key)!;
  for (const partner of link.partners) if (partner !== link.target) resolve(partner.key, links, derived);
  derived.set(key, derive(link.reaction, link.partners, link.target, derived, link.cost)!);
}

/** Every partner of `reaction` in `phase`, expressed through the others as far as these are known; the cost of each is 0. */
export function derivations(
  reaction: Pick<ChainReaction, "id" | "terms">,
  known: ReadonlyMap<string, Derivation>,
  phase: "" | "s" = "",
): Derivation[] {
  const partners = mergeTerms(reaction.terms);
  return partners
    .filter((partner) => partner.phase === phase)
    .map((target) => derive(reaction.id, partners, target, known, 0))
    .filter((derivation) => derivation !== undefined);
}

function derive(
  reaction: string,
  partners: readonly Partner[],
  target: Partner,
  known: ReadonlyMap<string, Derivation>,
  cost: number,
): Derivation | undefined {
  const factors = new Map<string, number>([[reaction, 1 / target.coefficient]]);
  for (const partner of partners) {
    if (partner === target) continue;
    const derivation = partner.phase === "" ? known.get(partner.key) : undefined;
    if (derivation === undefined) return undefined;
    for (const [id, factor] of derivation.chain) {
      factors.set(id, (factors.get(id) ?? 0) - (partner.coefficient / target.coefficient) * factor);
    }
  }
  const chain = [...factors]
    .map(([id, factor]) => [id, Math.round(factor * 1e9) / 1e9] as const)
    .filter(([, factor]) => factor !== 0)
    .sort(([a], [b]) => (a < b ? -1 : 1));
  return { components: target.components, chain, cost };
}

function mergeTerms(terms: readonly Term[]): Partner[] {
  const merged = new Map<string, Partner>();
  for (const [coefficient, components, phase = ""] of terms) {
    const key = compositionKey(components);
    const present = merged.get(`${key}|${phase}`);
    if (present === undefined) merged.set(`${key}|${phase}`, { key, components, phase, coefficient });
    else present.coefficient += coefficient;
  }
  return [...merged.values()].filter((partner) => partner.coefficient !== 0);
}
