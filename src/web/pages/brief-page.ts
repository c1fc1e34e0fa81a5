import { Router } from "express";
import { CONCENTRATION_UNITS, DETECTIONS, BRIEF_LIMITS } from "../../recommendation/contract.ts";
import { editForm, emptyForm, formFromBody, FORM_ROWS, type BriefForm, type MatrixRow } from "../form/brief-form.ts";
import { decodeBrief, encodeBrief } from "../form/brief-link.ts";
import { formFromBrief } from "../form/brief-to-form.ts";
import { briefFromForm, type FieldFault } from "../form/form-to-brief.ts";
import { SCENARIOS } from "../form/scenarios.ts";
import type { Names } from "../format/names.ts";
import { renderView } from "../render/render-view.ts";
import type { WebServices } from "../services.ts";
import { shell } from "./shell.ts";

const DETECTION_WORDS: Readonly<Record<string, string>> = {
  visual: "by eye, with an indicator",
  photometric: "photometer",
  electrode: "electrode",
};
/** Units offered in the form; the two spellings of micro are one choice. */
const UNITS = CONCENTRATION_UNITS.filter((unit) => !unit.startsWith("u"));

/** The brief: an empty or filled form, its edit buttons, and the way to an answer. */
export function briefPage(services: WebServices, names: Names): Router {
  const router = Router();
  const page = (form: BriefForm, faults: readonly FieldFault[], open: boolean): string =>
    renderView("brief", briefView(services, names, form, faults, open));

  router.get("/", (request, response) => {
    const { scenario, brief } = request.query;
    if (typeof scenario === "string") {
      const found = SCENARIOS.find((s) => s.id === scenario);
      if (!found) {
        response
          .status(404)
          .send(page(emptyForm(), [{ field: "form", message: `there is no demo “${scenario}”` }], false));
        return;
      }
      response.send(page(formFromBrief(found.brief), [], true));
      return;
    }
    if (typeof brief === "string") {
      const decoded = decodeBrief(brief);
      response.send(page(formFromBrief(typeof decoded === "object" && decoded !== null ? decoded : {}), [], true));
      return;
    }
    response.send(page(emptyForm(), [], false));
  });

  router.post("/recommendation", (request, response) => {
    const body = request.body as Readonly<Record<string, unknown>> | undefined;
    const form = formFromBody(body ?? {});
    const action = typeof body?.["action"] === "string" ? body["action"] : "recommend";
    const edited = editForm(form, action);
    if (edited) {
      response.send(page(edited, [], true));
      return;
    }
    const reading = briefFromForm(form, services.knowledge);
    if (!reading.ok) {
      response.status(400).send(page(form, reading.faults, true));
      return;
    }
    response.redirect(303, `/recommendation?brief=${encodeBrief(reading.brief)}`);
  });
  return router;
}

interface FieldView {
  readonly name: string;
  readonly id: string;
  readonly value: string;
  readonly invalid: boolean;
  readonly message: string;
}

/** The view model of the form; `filled` says that it holds something to be kept, so the introduction is short. */
export function briefView(
  { knowledge }: WebServices,
  names: Names,
  form: BriefForm,
  faults: readonly FieldFault[],
  filled: boolean,
): object {
  const messageAt = (key: string): string =>
    faults
      .filter((f) => f.field === key)
      .map((f) => f.message)
      .join("; ");
  const field = (name: string, key: string, value: string): FieldView => {
    const message = messageAt(key);
    return { name, id: fieldId(key), value, invalid: message !== "", message };
  };
  const row = (kind: "analyte" | "matrix", source: MatrixRow, i: number): Record<string, unknown> => {
    const key = `${kind === "analyte" ? "analytes" : "matrix"}[${i}]`;
    const units: readonly string[] = UNITS;
    return {
      number: String(i + 1),
      ion: field(`${kind}Ion`, `${key}.ion`, source.ion),
      level: field(`${kind}Value`, `${key}.value`, source.value),
      unit: {
        ...field(`${kind}Unit`, `${key}.unit`, source.unit),
        options: units.map((unit) => ({ unit, selected: unit === source.unit.replace(/^u/, "µ") })),
      },
      as: field(`${kind}As`, `${key}.as`, source.as),
      remove: `remove-${kind}-${i}`,
    };
  };
  const ticks = (chosen: readonly string[], name: string): readonly object[] =>
    reagentGroups(names, knowledge).map((group) => ({
      label: group.label,
      items: group.ids.map((id) => ({
        id,
        name,
        inputId: `${name}-${fieldId(id)}`,
        label: names.name(id),
        checked: chosen.includes(id),
      })),
    }));
  const scalar = (name: keyof BriefForm, value: string): FieldView => field(name, name, value);
  return {
    shell: shell(knowledge, "Brief", "brief"),
    filled,
    faults: faults.map((f) => ({ href: `#${fieldId(f.field)}`, text: `${fieldLabel(f.field)}: ${f.message}` })),
    title: scalar("title", form.title),
    analytes: form.analytes.map((a, i) => ({ ...row("analyte", a, i), sum: a.report === "sum" })),
    canAddAnalyte: form.analytes.length < FORM_ROWS.analytes,
    canRemoveAnalyte: form.analytes.length > 1,
    matrix: form.matrix.map((m, i) => row("matrix", m, i)),
    canAddMatrix: form.matrix.length < FORM_ROWS.matrix,
    volumeML: scalar("volumeML", form.volumeML),
    titrationVolumeML: scalar("titrationVolumeML", form.titrationVolumeML),
    requirement: scalar("requirement", form.requirement),
    buretteML: scalar("buretteML", form.buretteML),
    temperatureC: scalar("temperatureC", form.temperatureC),
    heating: form.heating === "yes",
    detection: {
      ...scalar("detection", ""),
      options: DETECTIONS.map((d) => ({
        value: d,
        label: DETECTION_WORDS[d] ?? d,
        checked: form.detection.includes(d),
      })),
    },
    avoid: {
      groups: ticks(form.avoid, "avoid"),
      count: String(form.avoid.length),
      open: form.avoid.length > 0,
      message: messageAt("avoid"),
    },
    available: {
      groups: ticks(form.available, "available"),
      listed: form.shelf === "listed",
      count: String(form.available.length),
      open: form.shelf === "listed",
      message: messageAt("available"),
    },
    ions: ionChoices(knowledge),
    formulas: ["CaCO3", "CaO", "MgO", "Al2O3", "Fe2O3", "ZnO", "PbO", "NiO", "CuO", "SO3", "P2O5"],
    scenarios: SCENARIOS.map((s) => ({
      href: `/?scenario=${s.id}`,
      answerHref: `/recommendation?brief=${encodeBrief(s.brief)}`,
      title: s.brief.title,
      teaser: s.teaser,
    })),
    limits: {
      title: String(BRIEF_LIMITS.titleCharacters),
      analytes: String(FORM_ROWS.analytes),
    },
  };
}

const fieldId = (key: string): string => `f-${key.replace(/[^A-Za-z0-9]+/g, "-").replace(/-$/, "")}`;

/** The name of a field in the list of faults. */
function fieldLabel(key: string): string {
  const row = /^(analytes|matrix)\[(\d+)\]\.(\w+)$/.exec(key);
  if (row) {
    const cell = { ion: "ion", value: "level", unit: "unit", as: "counted as" }[row[3] ?? "ion"] ?? "ion";
    return `${row[1] === "analytes" ? "To determine" : "Also in the solution"}, row ${Number(row[2]) + 1}, ${cell}`;
  }
  const labels: Readonly<Record<string, string>> = {
    title: "Title",
    volumeML: "Portion taken",
    titrationVolumeML: "Made up to",
    requirement: "Requirement",
    buretteML: "Burette",
    temperatureC: "Temperature",
    detection: "End point seen",
    avoid: "Never to be proposed",
    available: "Shelf",
    heating: "Heating",
  };
  return labels[key] ?? "Brief";
}

function ionChoices(knowledge: WebServices["knowledge"]): readonly { value: string; label: string }[] {
  const choices = new Map<string, string>();
  for (const component of knowledge.components.values()) {
    if (component.kind === "dye" || component.kind === "proton") continue;
    for (const form of component.forms) choices.set(form.spelling, component.name);
    choices.set(component.ion, component.name);
  }
  return [...choices].map(([value, label]) => ({ value, label }));
}

function reagentGroups(
  names: Names,
  knowledge: WebServices["knowledge"],
): readonly { label: string; ids: readonly string[] }[] {
  const sorted = (ids: Iterable<string>): readonly string[] =>
    [...ids].sort((a, b) => names.plain(a).localeCompare(names.plain(b), "en"));
  return [
    { label: "Titrants", ids: sorted(knowledge.titrants.keys()) },
    { label: "Metal solutions", ids: sorted(knowledge.metalTitrants.keys()) },
    { label: "Indicators", ids: sorted(knowledge.indicators.keys()) },
    { label: "Buffers, acids, alkalis", ids: sorted(knowledge.buffers.keys()) },
    {
      label: "Masking and auxiliary agents",
      ids: sorted(
        [...knowledge.agents.keys()].filter((id) => !knowledge.buffers.has(id) && !knowledge.titrants.has(id)),
      ),
    },
  ];
}
