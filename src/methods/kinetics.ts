import type { ComponentId, KineticClass, KineticRecord, Knowledge } from "../constants/knowledge.ts";

/** How fast a metal meets a titrant, and what the slow ones need. */
export interface MetalKinetics {
  readonly class: KineticClass;
  /** What brings the reaction to completion: nothing, standing, heat or boiling (with the titrant in excess). */
  readonly needs: "none" | "wait" | "heat" | "boil";
  /** Whether its polymers have to be broken in strong acid before the titrant can reach it. */
  readonly polymeric: boolean;
  readonly records: readonly KineticRecord[]; // those that decided
}

/**
 * Water exchange limits complex formation (dissociative interchange): below 1e-2 /s a metal does not react in the time of a
 * titration (Cr(III), Rh(III)), below 50 /s it needs minutes or heat (Al(III), 1.3 /s); Fe(III), 160 /s, still titrates.
 */
const INERT_BELOW_PER_S = 1e-2;
const SLOW_BELOW_PER_S = 50;

/** Depends on the knowledge alone; asked for thousands of times in a search. */
const remembered = new WeakMap<Knowledge, Map<string, MetalKinetics>>();

/** Kinetic class of a metal with a titrant, from the kinetic records. */
export function metalKinetics(knowledge: Knowledge, ion: ComponentId, titrant: string): MetalKinetics {
  const known = remembered.get(knowledge) ?? new Map<string, MetalKinetics>();
  remembered.set(knowledge, known);
  const key = `${ion} ${titrant}`;
  const answer = known.get(key) ?? fromRecords(knowledge, ion, titrant);
  known.set(key, answer);
  return answer;
}

function fromRecords(knowledge: Knowledge, ion: ComponentId, titrant: string): MetalKinetics {
  const all = knowledge.kinetics.filter((k) => k.ion === ion && k.indicator === null);
  const own = all.filter((k) => k.titrant === titrant);
  const rate = all.find((k) => k.waterExchangePerS !== undefined);
  const polymer = all.filter((k) => k.consequences.includes("depolymerise"));
  const exchange = rate?.waterExchangePerS ?? Number.POSITIVE_INFINITY;
  const polymeric = polymer.some((k) => k.consequences.includes("boil"));
  if (exchange >= SLOW_BELOW_PER_S && polymer.length === 0) return hydrolysed(knowledge, ion, own, rate, exchange);
  // A record of this very titrant that asks only for time (Al with CDTA) needs no heat.
  const time = own.filter((k) => k.consequences.includes("excess-and-wait"));
  const hot = own.filter((k) => k.consequences.includes("boil") || k.consequences.includes("heat"));
  if (time.length > 0 && hot.length === 0)
    return { class: "slow", needs: "wait", polymeric, records: [...time, ...(rate ? [rate] : [])] };
  const kineticClass: KineticClass = exchange < INERT_BELOW_PER_S ? "inert" : "slow";
  const boils = [...own, ...polymer].some((k) => k.consequences.includes("boil"));
  return {
    class: kineticClass,
    needs: boils || kineticClass === "inert" ? "boil" : "heat",
    polymeric,
    records: [...(rate ? [rate] : []), ...hot, ...polymer],
  };
}

/** A metal that exchanges water faster than this meets the titrant at once, hydrolysed or not. */
const AT_ONCE_ABOVE_PER_S = 1e3;

/**
 * Metals of which no slow exchange is on record. Some stand hydrolysed when the titrant comes, and practice puts it in excess and
 * heats (Ga, Sn): a record says so by heat and back titration together. An ion of charge 4 is then called slow.
 */
function hydrolysed(
  knowledge: Knowledge,
  ion: ComponentId,
  own: readonly KineticRecord[],
  rate: KineticRecord | undefined,
  exchange: number,
): MetalKinetics {
  const asked = own.filter(
    (k) => k.consequences.includes("back-only") && k.consequences.some((c) => c === "boil" || c === "heat"),
  );
  const inTime = exchange > AT_ONCE_ABOVE_PER_S && Number.isFinite(exchange);
  if (asked.length === 0 || inTime)
    return { class: "fast", needs: "none", polymeric: false, records: rate ? [rate] : [] };
  const highlyCharged = (knowledge.components.get(ion)?.charge ?? 0) >= 4;
  return {
    class: highlyCharged ? "slow" : "fast",
    needs: asked.some((k) => k.consequences.includes("boil")) ? "boil" : "heat",
    polymeric: false,
    records: [...(rate ? [rate] : []), ...asked],
  };
}

/** Records are given for a narrow pH range; a little beyond it the rate is still of the same order. */
const PH_SLACK = 0.3;

/**
 * Metals of the vessel that stay out of the titration: those that do not react unless boiled with the titrant, and slow ones
 * that a record says to stand aside at this pH (Al beside Fe(III) in acid).
 * @param hot whether the solution is boiled or heated with the titrant in it
 */
export function inertMetals(
  knowledge: Knowledge,
  metals: Iterable<ComponentId>,
  titrant: string,
  pH: number,
  hot: boolean,
): Set<ComponentId> {
  const out = new Set<ComponentId>();
  if (hot) return out;
  for (const metal of metals) {
    const kinetics = metalKinetics(knowledge, metal, titrant);
    if (kinetics.class === "inert" || (kinetics.class === "slow" && standsAside(knowledge, metal, titrant, pH)))
      out.add(metal);
  }
  return out;
}

function standsAside(knowledge: Knowledge, metal: ComponentId, titrant: string, pH: number): boolean {
  return knowledge.kinetics.some(
    (k) =>
      k.ion === metal &&
      k.indicator === null &&
      (k.titrant === null || k.titrant === titrant) &&
      k.consequences.includes("kinetic-masking") &&
      k.pH !== null &&
      pH <= k.pH[1] + PH_SLACK,
  );
}
