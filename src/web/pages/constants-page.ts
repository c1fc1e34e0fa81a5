import { Router } from "express";
import type {
  ComponentRecord,
  ConstantRecord,
  Knowledge,
  Provenance,
  Reaction,
  SpeciesDefinition,
} from "../../constants/knowledge.ts";
import { selectRecord } from "../../constants/select-constant.ts";
import {
  agentHref,
  anchor,
  constantsHref,
  indicatorHref,
  linkMarkup,
  reactionHref,
  type Names,
} from "../format/names.ts";
import { compositionMarkup } from "../format/composition.ts";
import { amount, fixed, signed } from "../format/numbers.ts";
import { BASIS_WORDS, wordsOf } from "../format/words.ts";
import { formulaMarkup, reactionMarkup } from "../format/typeset.ts";
import { Markup, joinMarkup } from "../render/markup.ts";
import { renderView } from "../render/render-view.ts";
import { precedentWords } from "../../recommendation/precedents.ts";
import type { WebServices } from "../services.ts";
import { shell } from "./shell.ts";

/** Conditions at which a page shows which record would be taken. */
const SHOWN_AT = { ionicStrengthMolPerL: 0.1, temperatureC: 25 } as const;

/** The constants: every component, its species and reactions, every record with its source and which one is taken. */
export function constantsPage({ knowledge }: WebServices, names: Names): Router {
  const router = Router();
  const index = indexKnowledge(knowledge);

  router.get("/constants", (request, response) => {
    const typed = typeof request.query["q"] === "string" ? request.query["q"].trim().slice(0, 100) : "";
    response.send(renderView("constants", listView(knowledge, index, names, typed)));
  });
  router.get("/constants/:id", (request, response, next) => {
    const component = knowledge.components.get(request.params.id);
    if (!component) {
      next();
      return;
    }
    response.send(renderView("component", componentView(knowledge, index, names, component)));
  });
  router.get("/reactions/:id", (request, response, next) => {
    const reaction = knowledge.reactions.get(request.params.id);
    if (!reaction) {
      next();
      return;
    }
    response.send(renderView("reaction", reactionView(knowledge, index, names, reaction)));
  });
  return router;
}

interface KnowledgeIndex {
  readonly speciesOf: ReadonlyMap<string, readonly SpeciesDefinition[]>; // by component
  readonly usesOf: ReadonlyMap<string, readonly { readonly id: string; readonly components: readonly string[] }[]>; // by reaction
}

function indexKnowledge(knowledge: Knowledge): KnowledgeIndex {
  const speciesOf = new Map<string, SpeciesDefinition[]>();
  const usesOf = new Map<string, { id: string; components: readonly string[] }[]>();
  const push = <T>(map: Map<string, T[]>, key: string, value: T): void => {
    const list = map.get(key);
    if (list) list.push(value);
    else map.set(key, [value]);
  };
  for (const species of knowledge.species)
    for (const id of Object.keys(species.components)) push(speciesOf, id, species);
  for (const s of [...knowledge.species, ...knowledge.solids])
    for (const link of s.chain) push(usesOf, link.reaction, { id: s.id, components: Object.keys(s.components) });
  return { speciesOf, usesOf };
}

const KINDS = [
  ["metal", "Metal ions"],
  ["ligand", "Ligands: titrants, buffers, masking agents, anions"],
  ["dye", "Indicators with constants"],
  ["inert", "Ions that take no part"],
] as const;

function listView(knowledge: Knowledge, index: KnowledgeIndex, names: Names, typed: string): object {
  const wanted = typed.toLowerCase();
  const matches = (c: ComponentRecord): boolean =>
    wanted === "" ||
    [c.id, c.ion, c.name, ...c.synonyms, ...c.forms.map((f) => f.spelling)].some((s) =>
      s.toLowerCase().includes(wanted),
    );
  const groups = KINDS.map(([kind, label]) => ({
    label,
    id: kind,
    rows: [...knowledge.components.values()]
      .filter((c) => c.kind === kind && matches(c))
      .sort((a, b) => a.id.localeCompare(b.id, "en"))
      .map((c) => ({
        formula: linkMarkup(constantsHref(c.id), names.name(c.ion)),
        name: c.name,
        species: String(index.speciesOf.get(c.id)?.length ?? 0),
        forms: joinMarkup(
          c.forms.filter((f) => f.spelling !== c.ion).map((f) => names.name(f.spelling)),
          ", ",
        ),
      })),
  })).filter((g) => g.rows.length > 0);
  return {
    shell: shell(knowledge, "Constants", "constants"),
    typed,
    groups,
    found:
      groups.reduce((sum, g) => sum + g.rows.length, 0) === 0
        ? "Nothing of that name or spelling is in the knowledge base."
        : "",
    counts: `${knowledge.components.size} components, ${knowledge.species.length} species, ${knowledge.solids.length} solids, ${knowledge.reactions.size} reactions`,
  };
}

/** Sum of the chosen records at I = 0.1 mol/L and 25 °C, as found: no correction. */
function log10BetaAsFound(knowledge: Knowledge, chain: SpeciesDefinition["chain"]): number | null {
  let sum = 0;
  for (const { reaction, factor } of chain) {
    const known = knowledge.reactions.get(reaction);
    if (!known || known.records.length === 0) return null;
    sum += factor * selectRecord(known, SHOWN_AT).record.log10K;
  }
  return sum;
}

function chainMarkup(chain: SpeciesDefinition["chain"], knowledge: Knowledge, names: Names): Markup {
  return joinMarkup(
    chain.map(({ reaction, factor }) =>
      joinMarkup([
        factor === 1 ? "" : `${signed(factor, 0)} × `,
        linkMarkup(reactionHref(reaction), reactionMarkup(reaction, names.set)),
      ]),
    ),
    "; ",
  );
}

function componentView(knowledge: Knowledge, index: KnowledgeIndex, names: Names, component: ComponentRecord): object {
  const { id } = component;
  const row = (s: {
    id: string;
    components: SpeciesDefinition["components"];
    chain: SpeciesDefinition["chain"];
  }): object => ({
    id: anchor(s.id),
    formula: formulaMarkup(s.id),
    composition: compositionMarkup(s.components, names),
    value: fixed(log10BetaAsFound(knowledge, s.chain), 2),
    chain: chainMarkup(s.chain, knowledge, names),
  });
  const about = (list: readonly { provenance: Provenance }[], text: (i: number) => string): readonly object[] =>
    list.map((entry, i) => ({ text: names.set(text(i)), source: sourceMarkup(entry.provenance) }));
  const facts = knowledge.ionFacts.filter((f) => f.ion === id);
  const precedents = knowledge.precedents.filter((p) => p.ion === id);
  const kinetics = knowledge.kinetics.filter((k) => k.ion === id);
  const masking = knowledge.masking.filter((m) => m.ion === id);
  return {
    shell: shell(knowledge, `${component.name}, constants`, "constants"),
    formula: names.name(component.ion),
    name: component.name,
    kind: component.kind,
    agentHref: knowledge.agents.has(id) ? agentHref(id) : "",
    indicatorHref: knowledge.indicators.has(id) ? indicatorHref(id) : "",
    spellings: joinMarkup([...component.forms.map((f) => names.name(f.spelling)), ...component.synonyms], ", "),
    species: (index.speciesOf.get(id) ?? []).filter((s) => s.chain.length > 0).map(row),
    solids: knowledge.solids.filter((s) => id in s.components).map((s) => ({ ...row(s), pace: s.pace })),
    facts: about(facts, (i) => facts[i]?.fact ?? ""),
    precedents: about(precedents, (i) => (precedents[i] ? precedentWords(precedents[i]) : "")),
    kinetics: about(kinetics, (i) => {
      const k = kinetics[i];
      return k
        ? `${k.statement}${k.titrant === null ? "" : ` (with ${k.titrant})`}${k.indicator === null ? "" : ` (with ${k.indicator})`}`
        : "";
    }),
    masking: masking.map((m) => ({
      agent: knowledge.agents.has(m.agent) ? linkMarkup(agentHref(m.agent), names.name(m.agent)) : names.name(m.agent),
      effect: m.effect,
      pH: `${fixed(m.pH[0], 1)} to ${fixed(m.pH[1], 1)}`,
      source: sourceMarkup(m.provenance),
    })),
    remarks: remarksAbout(knowledge, names, (about) => about === id || about.split(/[\s,;/]+/).includes(id)),
  };
}

/** Remarks on the data that concern something. */
function remarksAbout(knowledge: Knowledge, names: Names, concerns: (about: string) => boolean): readonly object[] {
  return knowledge.remarks
    .filter((r) => concerns(r.about))
    .map((r) => ({ kind: r.kind.replace("-", " "), text: names.set(r.text) }));
}

function reactionView(knowledge: Knowledge, index: KnowledgeIndex, names: Names, reaction: Reaction): object {
  const selection = reaction.records.length === 0 ? null : selectRecord(reaction, SHOWN_AT);
  const uses = index.usesOf.get(reaction.id) ?? [];
  const recordRow = (r: ConstantRecord): object => ({
    chosen: r === selection?.record ? "taken" : "passed over",
    value: fixed(r.log10K, 3),
    uncertainty: `${fixed(r.uncertainty, 2)}${r.uncertaintyStated ? "" : " (assumed)"}`,
    conditions: `${amount(r.ionicStrengthMolPerL, 2)}${r.medium === undefined ? "" : ` ${r.medium}`}, ${fixed(r.temperatureC, 0)} °C`,
    doubtful: r.doubtful ? "doubtful" : "",
    source: sourceText(knowledge, r.provenance),
    href: `/knowledge#source-${anchor(r.provenance.source)}`,
  });
  const ordered = selection ? [selection.record, ...selection.passedOver] : [];
  const ids = new Set([
    reaction.id,
    ...reaction.records.flatMap((r) => (r.provenance.record === undefined ? [] : [r.provenance.record])),
  ]);
  return {
    shell: shell(knowledge, reaction.id, "constants"),
    text: reactionMarkup(reaction.id, names.set),
    id: reaction.id,
    deltaZ2: signed(reaction.deltaZ2, 0),
    reason: selection === null ? "there is no record" : selection.reason,
    shownAt: `${amount(SHOWN_AT.ionicStrengthMolPerL, 2)}, ${SHOWN_AT.temperatureC} °C`,
    records: ordered.map(recordRow),
    enthalpies: reaction.enthalpies.map((h) => ({
      value: signed(h.kJPerMol, 1),
      conditions: `${amount(h.ionicStrengthMolPerL, 2)}, ${fixed(h.temperatureC, 0)} °C`,
      doubtful: h.doubtful ? "doubtful" : "",
      source: sourceText(knowledge, h.provenance),
    })),
    components: [...new Set(uses.flatMap((u) => u.components))].filter((c) => c !== "H+").map((c) => names.link(c)),
    usedBy: joinMarkup(
      uses.map((u) => formulaMarkup(u.id)),
      ", ",
    ),
    remarks: remarksAbout(
      knowledge,
      names,
      (about) => ids.has(about) || about.split(/[\s,;]+/).some((part) => ids.has(part)),
    ),
  };
}

/** Where a value comes from, short: the source as a link to its citation, its record or place, and whether it was read or remembered. */
export function sourceMarkup(p: Provenance): Markup {
  const detail = [p.record === undefined ? "" : ` ${p.record}`, p.where === undefined ? "" : `, ${p.where}`].join("");
  return joinMarkup([
    linkMarkup(`/knowledge#source-${anchor(p.source)}`, p.source),
    `${detail} (${wordsOf(BASIS_WORDS, p.basis)}, confidence ${p.confidence})`,
  ]);
}

/** Where a value comes from, in words: citation, record or place, and whether it was read or remembered. */
export function sourceText(knowledge: Knowledge, p: Provenance): string {
  const citation = knowledge.sources.get(p.source)?.citation ?? p.source;
  return [
    citation,
    p.record === undefined ? "" : `, record ${p.record}`,
    p.where === undefined ? "" : `, ${p.where}`,
    ` (${wordsOf(BASIS_WORDS, p.basis)}, confidence ${p.confidence})`,
  ].join("");
}
