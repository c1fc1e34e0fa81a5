import type { ComponentRecord, Knowledge } from "../../constants/knowledge.ts";
import {
  SINGLE_MODES,
  type IonMap,
  type MappedMethod,
  type MappedMode,
  type MapReason,
  type MapStatus,
  type MethodMap,
} from "../../recommendation/contract.ts";
import { MAP_QUESTION } from "../../recommendation/method-map-text.ts";
import { encodeBrief } from "../form/brief-link.ts";
import { constantsHref, ruleHref, type Names } from "../format/names.ts";
import { fixed, percent, signedPercent } from "../format/numbers.ts";
import { BASIS_WORDS, listing, MODE_WORDS, PREPARATION_WORDS, wordsOf } from "../format/words.ts";
import { joinMarkup, type Markup } from "../render/markup.ts";
import type { FactListing, WebServices } from "../services.ts";
import { factViews } from "./reasons-view.ts";
import { shell } from "./shell.ts";

const mapHref = (ion: string): string => `/method-map/${encodeURIComponent(ion)}`;

/** A sign and its words: the sign reads in print and without colour, the words without the sign. */
const STATUS: Readonly<Record<MapStatus, { readonly sign: string; readonly words: string; readonly short: string }>> = {
  open: { sign: "●", words: "open", short: "open" },
  "open-with-reservations": { sign: "◐", words: "open, with reservations", short: "reserved" },
  closed: { sign: "○", words: "closed", short: "closed" },
  unknown: { sign: "?", words: "not known", short: "unknown" },
};

/** A reason in a few words, for the table. */
const SHORT_REASON: Readonly<Record<MapReason["kind"], string>> = {
  "not-by-this-technique": "not by this technique",
  "no-constants": "no constants on record",
  "no-way": "no way known to the search",
  "no-dye": "no dye on record",
  "reacts-slowly": "reacts too slowly",
  "too-weak": "complex too weak",
  rule: "excluded by a rule",
  misses: "misses the requirement",
  "no-end-point": "no end point",
};

const statusView = (status: MapStatus): object => ({ ...STATUS[status], id: status });

/** Names of the electrodes by their ids. */
type ElectrodeNames = ReadonlyMap<string, string>;
const electrodeNames = (knowledge: Knowledge): ElectrodeNames =>
  new Map(knowledge.electrodes.map((e) => [e.id, e.name]));

/** The table of all ions. */
export function methodMapView({ knowledge }: WebServices, names: Names, map: MethodMap): object {
  const opened = (mode: string): number =>
    map.ions.filter((i) => i.modes.some((m) => m.mode === mode && m.methods.length > 0)).length;
  const electrodes = electrodeNames(knowledge);
  return {
    shell: shell(knowledge, "Method map", "method-map"),
    question: MAP_QUESTION,
    complete: map.done >= map.total,
    progress: `${map.done} of ${map.total}`,
    openIons: String(map.ions.filter((i) => i.status.startsWith("open")).length),
    ionCount: String(map.ions.length),
    heads: SINGLE_MODES.map((mode) => ({
      words: capital(mode),
      title: MODE_WORDS[mode] ?? mode,
      count: String(opened(mode)),
    })),
    legend: Object.values(STATUS).map(({ sign, words }) => ({ sign, words })),
    rows: map.ions.map((ion) => ({
      href: mapHref(ion.ion),
      formula: names.name(ion.ion),
      name: ion.name,
      cells: ion.modes.map((mode) => ({
        status: statusView(mode.status),
        detail: cellDetail(mode, names, electrodes),
        more: moreTitrants(mode),
      })),
    })),
    failed: map.failed.map((f) => ({ ion: names.name(f.ion), message: f.message })),
    several: Object.entries(map.severalAnalytes).map(([mode, why]) => ({ mode: capital(mode), why })),
  };
}

function cellDetail(mode: MappedMode, names: Names, electrodes: ElectrodeNames): Markup {
  const best = mode.methods[0];
  if (!best) return joinMarkup([mode.reasons[0] ? SHORT_REASON[mode.reasons[0].kind] : ""]);
  return joinMarkup([
    best.titrant.id,
    ...(best.through === null ? [] : [" through ", names.name(best.through)]),
    ...(best.backTitrant ? [", back with ", names.name(best.backTitrant.id)] : []),
    `, pH ${fixed(best.pH, 1)}, `,
    seenBy(best, names, electrodes),
    `: ${percent(best.relativeExpandedUncertaintyPercent)}`,
  ]);
}

const moreTitrants = (mode: MappedMode): string =>
  mode.methods.length < 2 ? "" : `also ${listing(mode.methods.slice(1).map((m) => m.titrant.id))}`;

const seenBy = (method: MappedMethod, names: Names, electrodes: ElectrodeNames): Markup => {
  if (method.electrode !== null) return names.set(electrodes.get(method.electrode) ?? method.electrode);
  const dye = method.indicator === null ? "own colour" : names.name(method.indicator);
  return joinMarkup([dye, ...(method.detection === "photometric" ? [", photometer"] : [])]);
};

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

/** One ion: each mode with its methods and their values, or the reasons against it. */
export function ionMapView(
  { knowledge }: WebServices,
  names: Names,
  catalogue: ReadonlyMap<string, FactListing>,
  ion: IonMap,
  [before, after]: readonly [IonMap | undefined, IonMap | undefined],
): object {
  const component = [...knowledge.components.values()].find((c) => c.ion === ion.ion);
  const electrodes = electrodeNames(knowledge);
  const link = (to: IonMap | undefined): object | null =>
    to ? { href: mapHref(to.ion), formula: names.name(to.ion) } : null;
  return {
    shell: shell(knowledge, `${ion.name} on the method map`, "method-map"),
    formula: names.name(ion.ion),
    name: ion.name,
    status: statusView(ion.status),
    question: MAP_QUESTION,
    constantsHref: constantsHref(component?.id ?? ion.ion),
    answerHref: `/recommendation?brief=${encodeBrief(ion.brief)}`,
    briefHref: `/?brief=${encodeBrief(ion.brief)}`,
    modes: ion.modes.map((mode) => modeView(mode, names, catalogue, electrodes)),
    log10K: ion.log10K.map((k) => ({
      titrant: k.titrant,
      best: fixed(k.best, 1),
      pH: fixed(k.pH, 1),
      needed: fixed(k.needed, 1),
      enough: k.best >= k.needed ? "yes" : "no",
    })),
    before: link(before),
    after: link(after),
  };
}

function modeView(
  mode: MappedMode,
  names: Names,
  catalogue: ReadonlyMap<string, FactListing>,
  electrodes: ElectrodeNames,
): object {
  return {
    id: mode.mode,
    title: capital(MODE_WORDS[mode.mode] ?? mode.mode),
    status: statusView(mode.status),
    effort: `${mode.tried} worked out, ${mode.judged} judged`,
    methods: mode.methods.map((method) => methodView(method, names, electrodes)),
    cautions: [...new Set(mode.methods.flatMap((m) => m.cautions))].map((c) => names.set(c)),
    nearest: mode.nearest === null ? null : names.set(mode.nearest),
    reasons: mode.reasons.map((reason) => ({
      statement: names.set(reason.statement),
      kind: SHORT_REASON[reason.kind],
      rule: reason.rule ?? "",
      ruleHref: reason.rule === null ? "" : ruleHref(reason.rule),
      source: reason.source === null ? null : names.set(reason.source),
      basis: reason.basis === null ? "" : wordsOf(BASIS_WORDS, reason.basis),
      facts: factViews(reason.facts, catalogue, names),
    })),
  };
}

function methodView(method: MappedMethod, names: Names, electrodes: ElectrodeNames): object {
  const brief = encodeBrief(method.brief);
  return {
    summary: names.set(method.summary),
    titrant: method.titrant.id,
    back: method.backTitrant ? names.name(method.backTitrant.id) : joinMarkup(["–"]),
    pH: fixed(method.pH, 1),
    seen: seenBy(method, names, electrodes),
    steps: method.preparation.map((p) => wordsOf(PREPARATION_WORDS, p)).join("; ") || "–",
    log10K: fixed(method.log10ConditionalK, 1),
    bias: signedPercent(method.biasPercent),
    uncertainty: percent(method.relativeExpandedUncertaintyPercent),
    reservations: method.reservations.map((r) => names.set(r)),
    answerHref: `/recommendation?brief=${brief}&method=${encodeURIComponent(method.id)}`,
    briefHref: `/?brief=${brief}`,
  };
}

/** An ion whose turn has not come yet, or whose calculation failed. */
export function pendingIonView(
  { knowledge }: WebServices,
  names: Names,
  component: ComponentRecord,
  map: MethodMap,
): object {
  return {
    shell: shell(knowledge, `${component.name} on the method map`, "method-map"),
    formula: names.name(component.ion),
    name: component.name,
    progress: `${map.done} of ${map.total}`,
    complete: map.done >= map.total,
    message: map.failed.find((f) => f.ion === component.id)?.message ?? "",
  };
}
