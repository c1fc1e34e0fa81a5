import type {
  ComponentId,
  ConstantRecord,
  Knowledge,
  Reaction,
  SolidDefinition,
  SpeciesDefinition,
  SpeciesId,
} from "../constants/knowledge.ts";
import { selectRecord } from "../constants/select-constant.ts";
import { AppError } from "../errors.ts";
import type { MovableConstant } from "./move-constant.ts";
import { movableConstant, selectionConditions } from "./move-constant.ts";
import type { Conditions } from "./types.ts";

/** A row of a template: a species or a solid, with the reactions its constant is made of (indices into `reactions`). */
export interface TemplateRow {
  readonly id: SpeciesId;
  readonly components: Readonly<Record<ComponentId, number>>;
  readonly charge: number;
  readonly chain: readonly { readonly reaction: number; readonly factor: number }[];
}

/** The chains of a list of rows as one list: row i holds the entries from start[i] to start[i + 1]. */
export interface Chains {
  readonly start: Int32Array;
  readonly reaction: Int32Array;
  readonly factor: Float64Array;
}

/** Everything about a set of components that does not depend on ionic strength or temperature. */
export interface SystemTemplate {
  readonly components: readonly ComponentId[];
  readonly index: ReadonlyMap<ComponentId, number>;
  readonly species: readonly TemplateRow[]; // the free components first, in the order of the columns
  readonly solids: readonly TemplateRow[];
  readonly reactions: readonly Reaction[];
  readonly chains: Chains; // of the species
  readonly solidChains: Chains;
  readonly stoichiometry: Int8Array; // species x components
  readonly solidStoichiometry: Int8Array; // solids x components
  readonly charges: Float64Array;
  readonly waterRow: number; // row of the hydroxide ion, -1 where the knowledge has none
}

/** The records chosen for each reaction of a template, ready to be moved to any ionic strength. */
export interface ChosenConstants {
  readonly records: readonly ConstantRecord[];
  readonly passedOver: readonly number[];
  readonly movable: readonly MovableConstant[];
  readonly log10KAtZeroTerm: Float64Array; // of the movable constants
  readonly slope: Float64Array;
}

/**
 * Builds the template of a set of components: columns H+ first, then `componentIds` as given; rows the free components, then every
 * species of `knowledge` made of these components alone. Throws AppError "unknown-component" or "unknown-reaction".
 */
export function buildTemplate(knowledge: Knowledge, componentIds: readonly ComponentId[]): SystemTemplate {
  const components = ["H+", ...componentIds.filter((id, i) => id !== "H+" && componentIds.indexOf(id) === i)];
  const index = new Map(components.map((id, column) => [id, column]));
  const reactions: Reaction[] = [];
  const reactionIndex = new Map<string, number>();
  const chainOf = (chain: readonly { readonly reaction: string; readonly factor: number }[]) =>
    chain.map(({ reaction, factor }) => {
      let at = reactionIndex.get(reaction);
      if (at === undefined) {
        const found = knowledge.reactions.get(reaction);
        if (found === undefined)
          throw new AppError("unknown-reaction", `reaction ${reaction} is not known`, { reaction });
        at = reactions.push(found) - 1;
        reactionIndex.set(reaction, at);
      }
      return { reaction: at, factor };
    });
  const species: TemplateRow[] = components.map((id) => ({
    id,
    components: { [id]: 1 },
    charge: chargeOf(knowledge, id),
    chain: [],
  }));
  const known = componentIndexOf(knowledge);
  for (const found of rowsMadeOf(index, known.species)) species.push({ ...found, chain: chainOf(found.chain) });
  const solids = rowsMadeOf(index, known.solids).map((found) => ({
    id: found.id,
    components: found.components,
    charge: 0,
    chain: chainOf(found.chain),
  }));
  return {
    components,
    index,
    species,
    solids,
    reactions,
    chains: chainsOf(species),
    solidChains: chainsOf(solids),
    stoichiometry: matrixOf(species, index),
    solidStoichiometry: matrixOf(solids, index),
    charges: Float64Array.from(species, (row) => row.charge),
    waterRow: waterRowOf(species),
  };
}

interface Composed {
  readonly components: Readonly<Record<ComponentId, number>>;
}
/** Rows by the rarest component of each, so that a set of components looks at few rows that it does not hold whole. */
type RowsByComponent<R extends Composed> = ReadonlyMap<
  ComponentId,
  readonly { readonly at: number; readonly row: R }[]
>;
interface ComponentIndex {
  readonly species: RowsByComponent<SpeciesDefinition>;
  readonly solids: RowsByComponent<SolidDefinition>;
}
const indexes = new WeakMap<Knowledge, ComponentIndex>();

function componentIndexOf(knowledge: Knowledge): ComponentIndex {
  let found = indexes.get(knowledge);
  if (found === undefined) {
    found = {
      species: byRarest(knowledge.species.filter(({ components }) => !isFreeComponent(components))),
      solids: byRarest(knowledge.solids),
    };
    indexes.set(knowledge, found);
  }
  return found;
}

function byRarest<R extends Composed>(rows: readonly R[]): RowsByComponent<R> {
  const count = new Map<ComponentId, number>();
  for (const { components } of rows) for (const id of Object.keys(components)) count.set(id, (count.get(id) ?? 0) + 1);
  const lists = new Map<ComponentId, { readonly at: number; readonly row: R }[]>();
  rows.forEach((row, at) => {
    const [first, ...others] = Object.keys(row.components);
    const rarest = others.reduce((a, b) => (count.get(b)! < count.get(a)! ? b : a), first!);
    const list = lists.get(rarest);
    if (list === undefined) lists.set(rarest, [{ at, row }]);
    else list.push({ at, row });
  });
  return lists;
}

/** The rows made of these components alone, in the order of the knowledge. */
function rowsMadeOf<R extends Composed>(index: ReadonlyMap<ComponentId, number>, rows: RowsByComponent<R>): R[] {
  const found: { readonly at: number; readonly row: R }[] = [];
  for (const id of index.keys())
    for (const one of rows.get(id) ?? [])
      if (Object.keys(one.row.components).every((part) => index.has(part))) found.push(one);
  return found.sort((a, b) => a.at - b.at).map(({ row }) => row);
}

function chainsOf(rows: readonly TemplateRow[]): Chains {
  const start = new Int32Array(rows.length + 1);
  rows.forEach(({ chain }, i) => (start[i + 1] = start[i]! + chain.length));
  const entries = rows.flatMap(({ chain }) => chain);
  return {
    start,
    reaction: Int32Array.from(entries, (e) => e.reaction),
    factor: Float64Array.from(entries, (e) => e.factor),
  };
}

/** Chooses a record for every reaction of `template` (on the selection grid of `conditions`) and prepares it for moving. */
export function chooseConstants(template: SystemTemplate, conditions: Conditions): ChosenConstants {
  const selection = selectionConditions(conditions);
  const at = choicesAt(selection);
  const n = template.reactions.length;
  const records = new Array<ConstantRecord>(n);
  const passedOver = new Array<number>(n);
  const movable = new Array<MovableConstant>(n);
  const log10KAtZeroTerm = new Float64Array(n);
  const slope = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const chosen = chosenFor(template.reactions[i]!, selection, at);
    records[i] = chosen.record;
    passedOver[i] = chosen.passedOver;
    movable[i] = chosen.movable;
    log10KAtZeroTerm[i] = chosen.movable.log10KAtZeroTerm;
    slope[i] = chosen.movable.slope;
  }
  return { records, passedOver, movable, log10KAtZeroTerm, slope };
}

interface ChosenConstant {
  readonly record: ConstantRecord;
  readonly passedOver: number;
  readonly movable: MovableConstant;
}

/** Points of the selection grid kept; the oldest goes first. */
const CHOICES_KEPT = 300;
/** Many templates hold the same reaction: its record is chosen once for each point of the selection grid. */
const choices = new Map<string, WeakMap<Reaction, ChosenConstant>>();

function choicesAt(selection: Conditions): WeakMap<Reaction, ChosenConstant> {
  const key = `${selection.temperatureC} ${selection.ionicStrengthMolPerL}`;
  let found = choices.get(key);
  if (found !== undefined) return found;
  found = new WeakMap();
  if (choices.size >= CHOICES_KEPT) choices.delete(choices.keys().next().value!);
  choices.set(key, found);
  return found;
}

function chosenFor(reaction: Reaction, selection: Conditions, at: WeakMap<Reaction, ChosenConstant>): ChosenConstant {
  const known = at.get(reaction);
  if (known !== undefined) return known;
  const { record, passedOver } = selectRecord(reaction, selection);
  const made = { record, passedOver: passedOver.length, movable: movableConstant(reaction, record, selection) };
  at.set(reaction, made);
  return made;
}

/** The template with only the species and solids that the masks keep; the free components always stay. */
export function filterTemplate(
  template: SystemTemplate,
  keepSpecies: readonly boolean[],
  keepSolids: readonly boolean[],
): SystemTemplate {
  const free = template.components.length;
  const species = template.species.filter((_, i) => i < free || keepSpecies[i]!);
  const solids = template.solids.filter((_, i) => keepSolids[i]!);
  return {
    ...template,
    species,
    solids,
    chains: chainsOf(species),
    solidChains: chainsOf(solids),
    stoichiometry: matrixOf(species, template.index),
    solidStoichiometry: matrixOf(solids, template.index),
    charges: Float64Array.from(species, (row) => row.charge),
    waterRow: waterRowOf(species),
  };
}

/** Charge of a component in units of e. Throws AppError "unknown-component". */
export function chargeOf(knowledge: Knowledge, id: ComponentId): number {
  if (id === "H+") return 1;
  const record = knowledge.components.get(id);
  if (record === undefined) throw new AppError("unknown-component", `component ${id} is not known`, { component: id });
  return record.charge;
}

function isFreeComponent(components: Readonly<Record<ComponentId, number>>): boolean {
  const entries = Object.values(components);
  return entries.length === 1 && entries[0] === 1;
}

function waterRowOf(species: readonly TemplateRow[]): number {
  return species.findIndex(({ components }) => components["H+"] === -1 && Object.keys(components).length === 1);
}

function matrixOf(rows: readonly TemplateRow[], index: ReadonlyMap<ComponentId, number>): Int8Array {
  const width = index.size;
  const matrix = new Int8Array(rows.length * width);
  rows.forEach((row, i) => {
    for (const [id, count] of Object.entries(row.components)) matrix[i * width + index.get(id)!] = count;
  });
  return matrix;
}
