import { Router } from "express";
import { type ContractIds, type Coverage, loadContractIds, vocabularyCoverage } from "../../constants/index.ts";
import type { Knowledge, Provenance } from "../../constants/knowledge.ts";
import { anchor, type Names } from "../format/names.ts";
import { renderView } from "../render/render-view.ts";
import type { WebServices } from "../services.ts";
import { shell } from "./shell.ts";

/** What the program knows and does not: version, counts, gaps, doubtful values, sources with their notices; and what it is for. */
export function knowledgePage({ knowledge, rules }: WebServices, names: Names): Router {
  const router = Router();
  router.get("/knowledge", (_request, response) => {
    response.send(renderView("knowledge", knowledgeView(knowledge, rules.length, names)));
  });
  router.get("/about", (_request, response) => {
    response.send(
      renderView("about", {
        shell: shell(knowledge, "About", "about"),
        notices: notices(knowledge),
        cautions: knowledge.cautions.map((c) => names.set(c.text)),
      }),
    );
  });
  return router;
}

const notices = (knowledge: Knowledge): readonly string[] => [
  ...new Set([...knowledge.sources.values()].flatMap((s) => (s.notice === undefined ? [] : [s.notice]))),
];

const VOCABULARY: Readonly<Record<keyof ContractIds, string>> = {
  titrants: "Titrants",
  metalTitrants: "Metal solutions",
  indicators: "Indicators",
  buffers: "Buffers, acids and alkalis",
  agents: "Masking and demasking agents",
  indicatorClasses: "Classes of indicators",
  preparation: "Preparation steps",
};

/** Every id that briefs and answers use: how many have usable data, and by name which have none and what each lacks. */
function vocabularyView(coverage: readonly Coverage[]): object {
  const kinds = Object.keys(VOCABULARY) as (keyof ContractIds)[];
  return {
    rows: kinds.map((kind) => {
      const ids = coverage.filter((c) => c.kind === kind);
      const bare = ids.filter((c) => c.status === "no-usable-data");
      return {
        what: VOCABULARY[kind],
        total: String(ids.length),
        held: String(ids.length - bare.length),
        none: String(bare.length),
        names: bare.length === 0 ? "–" : bare.map((c) => c.id).join(", "),
      };
    }),
    lacking: coverage
      .filter((c) => c.missing.length > 0)
      .map((c) => ({
        id: c.id,
        kind: VOCABULARY[c.kind],
        rests: c.rests.length === 0 ? "no usable data" : c.rests.join(", "),
        missing: c.missing.join(", "),
      })),
    count: String(coverage.filter((c) => c.missing.length > 0).length),
  };
}

function knowledgeView(knowledge: Knowledge, ruleCount: number, names: Names): object {
  const ofKind = (kind: string): number => [...knowledge.components.values()].filter((c) => c.kind === kind).length;
  const tally = (list: readonly Provenance[]): Record<"read" | "memory" | "computed", number> => {
    const count = { read: 0, memory: 0, computed: 0 };
    for (const p of list) count[p.basis]++;
    return count;
  };
  const basisRow = (what: string, list: readonly Provenance[]): object => {
    const { read, memory, computed } = tally(list);
    return { what, read: String(read), memory: String(memory), computed: String(computed), total: String(list.length) };
  };
  const dyes = [...knowledge.indicators.values()];
  const kinds = ["gap", "suspect", "disagreement", "unusable", "passed-over"] as const;
  const titles: Readonly<Record<(typeof kinds)[number], string>> = {
    gap: "Gaps: what is missing",
    suspect: "Values that look wrong beside their neighbours",
    disagreement: "Sources that disagree",
    unusable: "Records that cannot be used",
    "passed-over": "Records passed over",
  };
  return {
    shell: shell(knowledge, "Knowledge", "knowledge"),
    version: knowledge.version,
    hash: knowledge.hash,
    counts: [
      ["Metal ions", ofKind("metal")],
      ["Ligands", ofKind("ligand")],
      ["Species", knowledge.species.length],
      ["Solids", knowledge.solids.length],
      ["Reactions", knowledge.reactions.size],
      ["Titrants", knowledge.titrants.size],
      ["Indicators", knowledge.indicators.size],
      ["Indicators with constants", dyes.filter((d) => d.hasConstants).length],
      ["Buffers, acids and alkalis", knowledge.buffers.size],
      ["Masking and auxiliary agents", knowledge.agents.size],
      ["Masking records", knowledge.masking.length],
      ["Kinetic records", knowledge.kinetics.length],
      ["Electrodes", knowledge.electrodes.length],
      ["Photometric records", knowledge.photometric.length],
      ["Rules", ruleCount],
    ].map(([what, count]) => ({ what: String(what), count: String(count) })),
    basis: [
      basisRow(
        "Equilibrium constants",
        [...knowledge.reactions.values()].flatMap((r) => r.records.map((x) => x.provenance)),
      ),
      basisRow(
        "Enthalpies",
        [...knowledge.reactions.values()].flatMap((r) => r.enthalpies.map((x) => x.provenance)),
      ),
      basisRow(
        "Indicator colours",
        dyes.flatMap((d) => d.colours.map((c) => c.provenance)),
      ),
      basisRow(
        "Indicator uses",
        dyes.flatMap((d) => d.uses.map((c) => c.provenance)),
      ),
      basisRow(
        "Blocking of indicators",
        dyes.flatMap((d) => d.blockers.map((c) => c.provenance)),
      ),
      basisRow(
        "Masking",
        knowledge.masking.map((m) => m.provenance),
      ),
      basisRow(
        "Kinetics",
        knowledge.kinetics.map((k) => k.provenance),
      ),
      basisRow(
        "Glassware",
        knowledge.glassware.map((g) => g.provenance),
      ),
      basisRow(
        "Primary standards",
        knowledge.standards.map((s) => s.provenance),
      ),
    ],
    vocabulary: vocabularyView(vocabularyCoverage(knowledge, loadContractIds())),
    remarks: kinds.map((kind) => ({
      title: titles[kind],
      id: kind,
      items: knowledge.remarks
        .filter((r) => r.kind === kind)
        .map((r) => ({ about: names.set(r.about), text: names.set(r.text) })),
      count: String(knowledge.remarks.filter((r) => r.kind === kind).length),
    })),
    sources: [...knowledge.sources.values()].map((s) => ({
      id: `source-${anchor(s.id)}`,
      citation: s.citation,
      notice: s.notice ?? "",
    })),
  };
}
