import { Router } from "express";
import type { AgentRecord, BufferRecord, IndicatorRecord, Knowledge } from "../../constants/knowledge.ts";
import { colourMarkup } from "../format/colour-words.ts";
import { agentHref, anchor, constantsHref, indicatorHref, type Names } from "../format/names.ts";
import { amount, fixed } from "../format/numbers.ts";
import { VIA_WORDS, listing, wordsOf } from "../format/words.ts";
import { joinMarkup } from "../render/markup.ts";
import { renderView } from "../render/render-view.ts";
import type { WebServices } from "../services.ts";
import { sourceMarkup } from "./constants-page.ts";
import { shell } from "./shell.ts";

const range = ([low, high]: readonly [number, number]): string => `${fixed(low, 1)} to ${fixed(high, 1)}`;

/** Indicators, masking agents and buffers: what the knowledge base holds, with the source of each statement. */
export function dataPages({ knowledge }: WebServices, names: Names): Router {
  const router = Router();
  router.get("/indicators", (_request, response) => {
    response.send(renderView("indicators", indicatorsView(knowledge, names)));
  });
  router.get("/indicators/:id", (request, response, next) => {
    const dye = knowledge.indicators.get(request.params.id);
    if (!dye) {
      next();
      return;
    }
    response.send(
      renderView("indicator", {
        shell: shell(knowledge, dye.name, "indicators"),
        dye: indicatorView(knowledge, dye, names),
      }),
    );
  });
  router.get("/masking/:id", (request, response, next) => {
    const agent = knowledge.agents.get(request.params.id);
    if (!agent) {
      next();
      return;
    }
    response.send(
      renderView("agent", {
        shell: shell(knowledge, agent.name, "masking"),
        agent: agentView(knowledge, agent, names),
      }),
    );
  });
  router.get("/masking", (_request, response) => {
    response.send(renderView("masking", maskingView(knowledge, names)));
  });
  router.get("/buffers", (_request, response) => {
    response.send(renderView("buffers", buffersView(knowledge, names)));
  });
  return router;
}

function indicatorView(knowledge: Knowledge, dye: IndicatorRecord, names: Names): object {
  return {
    id: anchor(dye.id),
    href: indicatorHref(dye.id),
    name: dye.name,
    key: dye.id,
    class: `${dye.class.charAt(0).toUpperCase()}${dye.class.slice(1)}`,
    special: dye.special,
    basis: dye.hasConstants
      ? "end point from constants"
      : dye.transitions.length > 0
        ? "end point from published transitions"
        : "no constants or transitions: an empirical record",
    constantsHref: knowledge.components.has(dye.id) ? constantsHref(dye.id) : "",
    usual: amount(dye.usualMolPerL, 2),
    band: `±${fixed(dye.observerBandPM, 2)} pM`,
    synonyms: dye.synonyms.join(", "),
    colours: dye.colours.map((c) => ({
      pH: range(c.pH),
      free: colourMarkup(c.free, names.set),
      bound: c.bound === "-" ? joinMarkup(["not stated"]) : colourMarkup(c.bound, names.set),
      contrast: c.contrast,
      source: sourceMarkup(c.provenance),
    })),
    uses: dye.uses.map((u) => ({
      ions: joinMarkup(
        u.ions.map((i) => names.name(i)),
        " + ",
      ),
      mode: u.backTitrant === undefined ? u.mode : joinMarkup([`${u.mode}, with `, names.name(u.backTitrant)]),
      pH: range(u.pH),
      detail: names.set(u.detail),
      source: sourceMarkup(u.provenance),
    })),
    blockers: dye.blockers.map((b) => ({
      ion: names.name(b.ion),
      kind: b.kind === "blocks" ? "holds it" : "exchanges slowly",
      from:
        b.fromMolPerL === null
          ? "level not stated"
          : b.fromMolPerL === 0
            ? "at every level"
            : `from ${amount(b.fromMolPerL, 2)}`,
      detail: names.set(b.detail),
      source: sourceMarkup(b.provenance),
    })),
    facts: [...dye.instability, ...dye.needs].map((f) => ({
      text: names.set(f.fact),
      source: sourceMarkup(f.provenance),
    })),
    transitions: dye.transitions.map((t) => ({
      ion: names.name(t.ion),
      points: t.points.map(([pH, pM]) => `pH ${fixed(pH, 1)}: ${fixed(pM, 1)}`).join("; "),
      source: sourceMarkup(t.provenance),
    })),
  };
}

function indicatorsView(knowledge: Knowledge, names: Names): object {
  return {
    shell: shell(knowledge, "Indicators", "indicators"),
    indicators: [...knowledge.indicators.values()]
      .sort((a, b) => a.name.localeCompare(b.name, "en"))
      .map((dye) => indicatorView(knowledge, dye, names)),
  };
}

function agentView(knowledge: Knowledge, agent: AgentRecord, names: Names): object {
  const reagent = knowledge.reagents.get(agent.id);
  const tags = reagent?.hazardTags ?? [];
  return {
    id: anchor(agent.id),
    href: agentHref(agent.id),
    name: agent.name,
    key: agent.id,
    special: agent.special,
    usual: `${amount(agent.usualMolPerL, 2)}, at most ${amount(agent.usualMaxMolPerL, 2)}`,
    pH: range(agent.pH),
    constantsHref: agent.component === null ? "" : constantsHref(agent.component),
    source: sourceMarkup(agent.provenance),
    cautions: [
      ...(reagent?.hazards ?? []),
      ...knowledge.cautions.filter((c) => tags.includes(c.tag)).map((c) => c.text),
    ].map((t) => names.set(t)),
    converts: agent.converts.map((c) => ({
      what: joinMarkup([names.name(c.from), " to ", names.name(c.to), ` ${wordsOf(VIA_WORDS, c.via)}`]),
      pH: range(c.pH),
      conditions: names.set(c.conditions),
      source: sourceMarkup(c.provenance),
    })),
    records: knowledge.masking
      .filter((m) => m.agent === agent.id)
      .map((m) => ({
        ion: names.link(m.ion),
        effect: effectWords(m.effect, m.via),
        pH: range(m.pH),
        upTo: names.set(m.upToText ?? (m.upToMolPerL === null ? "level not stated" : amount(m.upToMolPerL, 2))),
        remarks: names.set(
          [m.failsWhen === null ? "" : `fails: ${m.failsWhen}`, m.order ?? "", m.sideEffects ?? ""]
            .filter((t) => t !== "")
            .join(". "),
        ),
        source: sourceMarkup(m.provenance),
      })),
  };
}

function maskingView(knowledge: Knowledge, names: Names): object {
  const agents = [...knowledge.agents.values()].sort((a, b) => a.name.localeCompare(b.name, "en"));
  return {
    shell: shell(knowledge, "Masking and auxiliary agents", "masking"),
    agents: agents.map((agent) => agentView(knowledge, agent, names)),
  };
}

function effectWords(effect: string, via: string | null): string {
  const words: Readonly<Record<string, string>> = {
    masks: "masks",
    partial: "masks in part",
    doesNotMask: "does not mask",
    auxiliary: "keeps dissolved",
    demasks: "sets free again",
  };
  return `${words[effect] ?? effect}${via === null ? "" : ` ${wordsOf(VIA_WORDS, via)}`}`;
}

function buffersView(knowledge: Knowledge, names: Names): object {
  const view = (buffer: BufferRecord): object => ({
    id: anchor(buffer.id),
    name: buffer.name,
    key: buffer.id,
    kind: buffer.kind === "pair" ? "buffer pair" : buffer.kind.replace("-", " "),
    working: range(buffer.workingPH),
    usual: `${amount(buffer.usualMolPerL[0], 2)} to ${amount(buffer.usualMolPerL[1], 2)}`,
    pKa: buffer.pKa.map((p) => ({
      value: `${fixed(p.value, 2)} ± ${fixed(p.uncertainty, 2)}`,
      source: sourceMarkup(p.provenance),
    })),
    constantsHref: buffer.component === null ? "" : constantsHref(buffer.component),
    precipitates:
      buffer.precipitates.length === 0 ? joinMarkup(["none listed"]) : names.set(listing(buffer.precipitates)),
    incompatible: buffer.incompatible.map((i) => ({
      text: names.set(`${i.with}: ${i.why}`),
      source: sourceMarkup(i.provenance),
    })),
    source: sourceMarkup(buffer.provenance),
  });
  const sorted = [...knowledge.buffers.values()].sort((a, b) => a.workingPH[0] - b.workingPH[0]);
  return { shell: shell(knowledge, "Buffers, acids and alkalis", "buffers"), buffers: sorted.map(view) };
}
