import type { AgentRecord, ComponentId, Knowledge, MaskingRecord } from "../constants/knowledge.ts";
import { hazardBurden } from "./hazard-burden.ts";
import type { Shelf } from "./shelf.ts";
import type { Threat } from "./threats.ts";
import { countedIn, type MaskingStep, type StagePlan } from "./types.ts";

/** One way of keeping one component out of a titration. */
interface MaskOption {
  readonly agent: AgentRecord;
  readonly record: MaskingRecord;
}

const PH_SLACK = 0.3; // printed ranges are round figures
/** Sets handed on; `develop` skips what has been seen to fail and stops as soon as enough of them work. */
const SETS_KEPT = 120;
const COMBINATIONS_LIMIT = 400;

const burdenOf = (agent: AgentRecord, knowledge: Knowledge): number =>
  3 + (agent.special ? 15 : 0) + hazardBurden(agent.id, knowledge);

const inside = (pH: number, range: readonly [number, number]): boolean =>
  pH >= range[0] - PH_SLACK && pH <= range[1] + PH_SLACK;

/** A precipitate does not know the round figure at which a printed range ends; whether it forms the equilibrium says. */
const near = (pH: number, range: readonly [number, number]): boolean => pH >= range[0] - 1 && pH <= range[1] + 1;

/** Lookups that depend on the knowledge alone, made once: rows by agent and ion, pairs of components that share a species or a solid. */
interface MaskIndex {
  readonly rows: ReadonlyMap<string, readonly MaskingRecord[]>;
  readonly complexes: ReadonlySet<string>;
  readonly solids: ReadonlySet<string>;
  readonly hydroxides: ReadonlySet<ComponentId>;
}

const indexes = new WeakMap<Knowledge, MaskIndex>();

function indexOf(knowledge: Knowledge): MaskIndex {
  const known = indexes.get(knowledge);
  if (known) return known;
  const rows = new Map<string, MaskingRecord[]>();
  for (const row of knowledge.masking) {
    const key = `${row.agent} ${row.ion}`;
    const list = rows.get(key);
    if (list) list.push(row);
    else rows.set(key, [row]);
  }
  const pairs = (list: readonly { readonly components: Readonly<Record<ComponentId, number>> }[]): Set<string> => {
    const out = new Set<string>();
    for (const { components } of list) {
      const present = Object.keys(components).filter((c) => c !== "H+" && components[c]! > 0);
      for (const a of present) for (const b of present) if (a !== b) out.add(`${a} ${b}`);
    }
    return out;
  };
  const made: MaskIndex = {
    rows,
    complexes: pairs(knowledge.species),
    solids: pairs(knowledge.solids),
    hydroxides: new Set(
      knowledge.solids.filter((s) => (s.components["H+"] ?? 0) < 0).flatMap((s) => Object.keys(s.components)),
    ),
  };
  indexes.set(knowledge, made);
  return made;
}

/** Rows of practice for an agent and an ion at this pH. */
export function rowsFor(knowledge: Knowledge, agent: string, ion: ComponentId, pH: number): MaskingRecord[] {
  return (indexOf(knowledge).rows.get(`${agent} ${ion}`) ?? []).filter(
    (r) => inside(pH, r.pH) || (r.via === "precipitation" && near(pH, r.pH)),
  );
}

/** Whether some soluble species holds both components. */
export const pairHasComplex = (knowledge: Knowledge, a: ComponentId, b: ComponentId): boolean =>
  indexOf(knowledge).complexes.has(`${a} ${b}`);

/** Whether the model has constants for this pair: a soluble complex, or a solid where the mask precipitates. */
export function pairHasConstants(
  knowledge: Knowledge,
  agent: AgentRecord,
  ion: ComponentId,
  via: MaskingRecord["via"],
): boolean {
  const index = indexOf(knowledge);
  if (agent.id === "hydroxide") return index.hydroxides.has(ion);
  if (agent.component === null) return false;
  return (via === "precipitation" ? index.solids : index.complexes).has(`${ion} ${agent.component}`);
}

/**
 * Whether the claim of a row can be followed up: a reduction or oxidation needs to say what becomes of the ion, and a precipitate
 * a solid in the model; without them a "masked" ion would simply vanish from the account.
 */
function canBeJudged(
  knowledge: Knowledge,
  agent: AgentRecord,
  threat: Threat,
  row: MaskingRecord,
  pH: number,
): boolean {
  if (threat.holdsAnalyte) return true;
  if (row.via === "reduction" || row.via === "oxidation")
    return agent.converts.some((c) => c.from === threat.component && inside(pH, c.pH));
  return row.via !== "precipitation" || pairHasConstants(knowledge, agent, threat.component, row.via);
}

/** Agents that practice uses for this component at the pH of the plan and that leave analyte, chelate and back titrant alone. */
function optionsFor(threat: Threat, plan: StagePlan, knowledge: Knowledge, shelf: Shelf): MaskOption[] {
  const spared = [
    ...countedIn(plan),
    ...(plan.backTitrant ? [plan.backTitrant.id] : []),
    ...(plan.chelate ? [plan.chelate.metal] : []),
  ];
  // An agent that brings the analyte itself, or what the reagent of a way round holds, would undo the way.
  const ofWay = new Set(
    plan.detour
      ? [...plan.determines, ...Object.keys(knowledge.detours.get(plan.detour.id)?.reagent.components ?? {})]
      : [],
  );
  const out: MaskOption[] = [];
  for (const agent of knowledge.agents.values()) {
    // Hydroxide is what the pH itself does; its precipitates are in the equilibrium of the plan already.
    if (agent.id !== "hydroxide" && !shelf(agent.id)) continue;
    if (agent.component !== null && ofWay.has(agent.component)) continue;
    if (agent.id === plan.release?.agent) continue; // what frees the analyte cannot be in the vessel before
    // The lower end of an agent's range is safety (cyanide, sulfide); the upper end is only the round figure of its records.
    if (plan.pH < agent.pH[0] || plan.pH > agent.pH[1] + 1) continue;
    const record = rowsFor(knowledge, agent.id, threat.component, plan.pH).find(
      (r) => (r.effect === "masks" || r.effect === "partial") && canBeJudged(knowledge, agent, threat, r, plan.pH),
    );
    if (!record) continue;
    const harms = spared.some((ion) =>
      rowsFor(knowledge, agent.id, ion, plan.pH).some(
        (r) =>
          r.effect === "masks" ||
          // What precipitates the analyte harms it whatever the constants say of the rest; a weak complex they can judge.
          (r.effect === "partial" && (r.via === "precipitation" || !pairHasConstants(knowledge, agent, ion, r.via))),
      ),
    );
    if (harms) continue;
    out.push({ agent, record });
  }
  return out;
}

/** A set of masking steps, and which threats it leaves unanswered. */
export interface MaskSet {
  readonly steps: readonly MaskingStep[];
  readonly unanswered: readonly Threat[];
  readonly burden: number;
}

/**
 * Sets of agents, alone and combined, that answer the threats as practice does, least burden first.
 * Threats for which no agent serves are named as unanswered (they must be separated, or the method fails).
 */
export function maskSets(threats: readonly Threat[], plan: StagePlan, knowledge: Knowledge, shelf: Shelf): MaskSet[] {
  if (threats.length === 0) return [{ steps: [], unanswered: [], burden: 0 }];
  const options = threats.map((t) => optionsFor(t, plan, knowledge, shelf));
  const answered = threats.map((_, i) => i).filter((i) => options[i]!.length > 0);
  const unanswered = threats.filter((_, i) => options[i]!.length === 0);
  if (answered.length === 0) return [{ steps: [], unanswered, burden: 0 }];
  // Agents that answer several threats come first, so that the limited product still meets them.
  const reach = new Map<string, number>();
  for (const list of options) for (const o of list) reach.set(o.agent.id, (reach.get(o.agent.id) ?? 0) + 1);
  const sorted = answered.map((i) =>
    [...options[i]!].sort(
      (a, b) =>
        reach.get(b.agent.id)! - reach.get(a.agent.id)! || burdenOf(a.agent, knowledge) - burdenOf(b.agent, knowledge),
    ),
  );
  let combinations: Combination[] = [{ options: [], burden: 0 }];
  for (const list of sorted) {
    const next: Combination[] = [];
    for (const head of combinations)
      for (const option of list) {
        const together = [...head.options, option];
        next.push({ options: together, burden: setBurden(together, knowledge) });
      }
    combinations = next.sort((a, b) => a.burden - b.burden).slice(0, COMBINATIONS_LIMIT);
  }
  const seen = new Set<string>();
  const sets: MaskSet[] = [];
  for (const { options: combination, burden } of combinations) {
    const key = [...new Set(combination.map((o) => o.agent.id))].sort().join("+");
    if (seen.has(key)) continue;
    seen.add(key);
    if (
      !enoughAgent(
        combination,
        answered.map((i) => threats[i]!),
      )
    )
      continue;
    sets.push({
      steps: stepsOf(
        combination,
        answered.map((i) => threats[i]!),
        plan.pH,
        knowledge,
      ),
      unanswered,
      burden,
    });
    if (sets.length >= SETS_KEPT) break;
  }
  return sets;
}

/** One option for each threat that has any, and what they burden together. */
interface Combination {
  readonly options: readonly MaskOption[];
  readonly burden: number;
}

function setBurden(options: readonly MaskOption[], knowledge: Knowledge): number {
  let burden = 0;
  options.forEach(({ agent }, i) => {
    const first = options.findIndex((o) => o.agent.id === agent.id) === i;
    if (first) burden += burdenOf(agent, knowledge);
  });
  for (const option of options) {
    if (option.record.effect === "partial") burden += 4;
    // Of equals the one that more sources know comes first.
    burden += 1 / (1 + option.record.otherSources.length);
  }
  return burden;
}

/** An agent that would be used up by what it masks is not a mask: two ligands a metal ion must fit in its usual maximum. */
function enoughAgent(combination: readonly MaskOption[], threats: readonly Threat[]): boolean {
  const need = new Map<string, { molPerL: number; most: number }>();
  combination.forEach(({ agent, record }, i) => {
    if (agent.id === "hydroxide") return;
    const perMetal = record.via === "reduction" || threats[i]!.holdsAnalyte ? 1 : 2;
    const entry = need.get(agent.id) ?? { molPerL: 0, most: agent.usualMaxMolPerL };
    entry.molPerL += perMetal * threats[i]!.molPerL;
    need.set(agent.id, entry);
  });
  return [...need.values()].every((n) => n.molPerL <= n.most);
}

/** Ligands needed per metal ion when an agent binds it fully: enough for the highest usual coordination. */
const LIGANDS_PER_METAL = 6;
const EXCESS = 1.2;

function stepsOf(
  combination: readonly MaskOption[],
  threats: readonly Threat[],
  pH: number,
  knowledge: Knowledge,
): MaskingStep[] {
  const byKey = new Map<
    string,
    { option: MaskOption; basis: MaskingStep["basis"]; masks: ComponentId[]; need: number }
  >();
  combination.forEach((option, i) => {
    const threat = threats[i]!;
    const via = option.record.via ?? "complexation";
    const basis: MaskingStep["basis"] =
      via === "reduction" ||
      via === "oxidation" ||
      threat.holdsAnalyte ||
      option.agent.converts.some((c) => c.from === threat.component && inside(pH, c.pH))
        ? "conversion"
        : pairHasConstants(knowledge, option.agent, threat.component, option.record.via)
          ? "equilibrium"
          : "empirical";
    const key = `${option.agent.id} ${via} ${basis}`;
    const entry = byKey.get(key) ?? { option, basis, masks: [], need: 0 };
    entry.masks.push(threat.component);
    entry.need += threat.molPerL * (basis === "conversion" ? 1 : LIGANDS_PER_METAL) * EXCESS;
    byKey.set(key, entry);
  });
  return [...byKey.values()].map(({ option, basis, masks, need }) => ({
    agent: option.agent.id,
    masks,
    via: option.record.via ?? "complexation",
    molPerL:
      option.agent.id === "hydroxide"
        ? 0
        : benchAmount(Math.max(option.agent.usualMolPerL, Math.min(need, option.agent.usualMaxMolPerL))),
    basis,
  }));
}

/** Rounded up to what a bench uses: 1, 1.5, 2, 3, 5, 8 times a power of ten. */
export function benchAmount(molPerL: number): number {
  if (!(molPerL > 0)) return 0;
  const decade = 10 ** Math.floor(Math.log10(molPerL) + 1e-9);
  const step = [1, 1.5, 2, 3, 5, 8, 10].find((s) => s * decade >= molPerL * (1 - 1e-9)) ?? 10;
  return Number((step * decade).toPrecision(3));
}
