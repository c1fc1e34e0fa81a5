import { Router, type Request } from "express";
import type { Knowledge } from "../../constants/knowledge.ts";
import { InputError } from "../../errors.ts";
import { answerCurve, answerEquilibrium } from "../../recommendation/calculate.ts";
import { curveDescription, curveFigure } from "../figures/curve-figure.ts";
import { NARROW, WIDE } from "../figures/frame.ts";
import { curveCsv } from "../figures/figure-csv.ts";
import type { FieldFault } from "../form/form-to-brief.ts";
import { constantsHref, linkMarkup, type Names } from "../format/names.ts";
import { compositionMarkup } from "../format/composition.ts";
import { amount, fixed, percent, significant } from "../format/numbers.ts";
import { formulaMarkup } from "../format/typeset.ts";
import type { Markup } from "../render/markup.ts";
import { renderView } from "../render/render-view.ts";
import type { FigureSeries, WebServices } from "../services.ts";
import { calculatorForm, questionOf, type CalculatorForm } from "./calculator-form.ts";
import { shell } from "./shell.ts";

const DEFAULTS = {
  pH: "10",
  ionicStrength: "auto",
  temperatureC: "25",
  solids: "yes",
  sampleML: "50",
  titrant: "EDTA",
  titrantMolPerL: "0.01",
  follow: "",
  upToML: "40",
} as const;

const EXAMPLES = [
  {
    kind: "equilibrium",
    label: "Zinc and EDTA in an ammonia buffer",
    query:
      "pH=10&component=Zn2%2B&amount=0.002&how=total&component=EDTA&amount=0.002&how=total&component=ammonia&amount=0.1&how=total",
  },
  {
    kind: "curve",
    label: "Copper with EDTA at pH 5",
    query:
      "pH=5&component=Cu2%2B&amount=0.005&how=total&component=acetate&amount=0.05&how=total&sampleML=50&titrant=EDTA&titrantMolPerL=0.01&follow=Cu2%2B&upToML=45",
  },
] as const;

/** The two calculators as forms whose address holds the question. */
export function calculatorsPage({ knowledge }: WebServices, names: Names): Router {
  const router = Router();
  router.get("/calculators", (_request, response) => {
    response.send(
      renderView("calculators", {
        shell: shell(knowledge, "Calculators", "calculators"),
        examples: EXAMPLES.map((e) => ({ href: `/calculators/${e.kind}?${e.query}`, label: e.label })),
      }),
    );
  });
  router.get("/calculators/equilibrium", (request, response) => {
    const { status, view } = equilibriumAnswer(request, knowledge, names);
    response.status(status).send(renderView("equilibrium", view));
  });
  router.get("/calculators/curve", (request, response) => {
    const { status, view } = curveAnswer(request, knowledge, names);
    response.status(status).send(renderView("curve", view));
  });
  router.get("/calculators/curve.csv", (request, response) => {
    const question = questionOf(calculatorForm(request.query, DEFAULTS), "curve");
    if (!question.ok)
      throw new InputError(
        question.faults.map((f) => ({ path: f.field, expected: "a complete question", found: f.message })),
      );
    response
      .type("text/csv; charset=utf-8")
      .attachment("curve.csv")
      .send(
        curveCsv(curveSeries(denseCurve(question.question, knowledge), calculatorForm(request.query, DEFAULTS).follow)),
      );
  });
  return router;
}

function asked(request: Request): boolean {
  return Object.keys(request.query).length > 0;
}

/** The faults of a question, whether found in its fields or by the calculator. */
function faultsOf(error: unknown): readonly FieldFault[] {
  if (!(error instanceof InputError)) throw error;
  return error.faults.map((f) => ({ field: "form", message: `${f.path}: expected ${f.expected}, found ${f.found}` }));
}

function formView(form: CalculatorForm, faults: readonly FieldFault[], knowledge: Knowledge): object {
  const id = (key: string): string => `f-${key.replace(/[^A-Za-z0-9]+/g, "-").replace(/-$/, "")}`;
  const messageAt = (key: string): string =>
    faults
      .filter((f) => f.field === key)
      .map((f) => f.message)
      .join("; ");
  const field = (key: string, value: string): object => ({
    id: id(key),
    value,
    invalid: messageAt(key) !== "",
    message: messageAt(key),
  });
  return {
    faults: faults.map((f) => ({ href: `#${id(f.field === "form" ? "pH" : f.field)}`, text: f.message })),
    rows: form.rows.map((row, i) => ({
      ...field(`row[${i}]`, row.component),
      amount: row.amount,
      free: row.how === "free",
      number: String(i + 1),
    })),
    pH: field("pH", form.pH),
    ionicStrength: field("ionicStrength", form.ionicStrength),
    temperatureC: field("temperatureC", form.temperatureC),
    solids: form.solids === "yes",
    sampleML: field("sampleML", form.sampleML),
    titrant: field("titrant", form.titrant),
    titrantMolPerL: field("titrantMolPerL", form.titrantMolPerL),
    follow: field("follow", form.follow),
    upToML: field("upToML", form.upToML),
    components: [...knowledge.components.values()]
      .filter((c) => c.kind !== "proton")
      .map((c) => ({ value: c.ion, label: c.name })),
  };
}

interface Answered {
  readonly status: number;
  readonly view: object;
}

function equilibriumAnswer(request: Request, knowledge: Knowledge, names: Names): Answered {
  const form = calculatorForm(request.query, DEFAULTS);
  const base = { shell: shell(knowledge, "Equilibrium of a solution", "calculators") };
  const answered = (faults: readonly FieldFault[], answer: object | null): Answered => ({
    status: faults.length > 0 ? 400 : 200,
    view: { ...base, form: formView(form, faults, knowledge), answer },
  });
  if (!asked(request)) return answered([], null);
  const question = questionOf(form, "equilibrium");
  if (!question.ok) return answered(question.faults, null);
  try {
    const a = answerEquilibrium(question.question, knowledge);
    const formulas = formulasByComposition(knowledge);
    const formulaOf = (components: Readonly<Record<string, number>>): Markup => {
      const id = formulas.get(compositionKey(components));
      return id === undefined ? compositionMarkup(components, names) : formulaMarkup(id);
    };
    const totals = new Map(a.components.map((c) => [c.id, c.totalMolPerL]));
    return answered([], {
      status: a.status === "converged" ? "converged" : a.status,
      residual: significant(a.residual, 2),
      iterations: String(a.iterations),
      ionicStrength: amount(a.ionicStrengthMolPerL, 3),
      components: a.components.map((c) => ({
        name: linkMarkup(constantsHref(c.id), names.component(c.id)),
        total: amount(c.totalMolPerL),
        free: amount(c.freeMolPerL),
        alpha: fixed(c.sideReaction.log10Alpha, 2),
      })),
      conditional: a.conditional.map((c) => ({
        metal: names.component(c.metal),
        ligand: names.component(c.ligand),
        alphaMetal: fixed(c.log10AlphaMetal, 2),
        alphaLigand: fixed(c.log10AlphaLigand, 2),
        value: fixed(c.log10ConditionalK, 2),
      })),
      species: [...a.species]
        .sort((x, y) => y.molPerL - x.molPerL)
        .slice(0, 60)
        .map((s) => ({
          what: formulaOf(s.components),
          composition: compositionMarkup(s.components, names),
          amount: amount(s.molPerL),
          share: shareOf(s, totals),
          beta: fixed(s.log10Beta, 2),
          source: s.source,
        })),
      solids: a.solids.map((s) => ({
        name: formulaMarkup(s.id),
        saturation: fixed(s.saturationIndex, 2),
        amount: s.molPerL > 0 ? amount(s.molPerL) : s.mayForm ? "none" : "not allowed to form",
      })),
      notes: a.notes.map((n) => names.set(n)),
    });
  } catch (error) {
    return answered(faultsOf(error), null);
  }
}

/** Formulas of the species of the knowledge base, by what they are made of. */
function formulasByComposition(knowledge: Knowledge): ReadonlyMap<string, string> {
  return new Map(knowledge.species.map((s) => [compositionKey(s.components), s.id]));
}

const compositionKey = (components: Readonly<Record<string, number>>): string =>
  Object.entries(components)
    .map(([id, n]) => `${id}*${n}`)
    .sort()
    .join(" ");

/** The share of a species in its least abundant component other than the proton. */
function shareOf(
  s: { components: Readonly<Record<string, number>>; molPerL: number },
  totals: ReadonlyMap<string, number>,
): string {
  let best = "";
  let least = Number.POSITIVE_INFINITY;
  for (const [id, n] of Object.entries(s.components)) {
    const total = totals.get(id);
    if (id === "H+" || total === undefined || total <= 0 || n <= 0 || total >= least) continue;
    least = total;
    best = `${percent((100 * n * s.molPerL) / total)} of ${id}`;
  }
  return best;
}

/** Distances from equivalence, relative to it, at which a curve gets points of its own. */
const NEAR_EQUIVALENCE = [1e-4, 3e-4, 1e-3, 3e-3, 1e-2, 2e-2];

/** Answers a question to the curve calculator with further points about the equivalence, where the curve is steep. */
function denseCurve(question: Readonly<Record<string, unknown>>, knowledge: Knowledge): ReturnType<typeof answerCurve> {
  const even = question["volumesML"] as readonly number[];
  const { equivalenceML } = answerCurve({ ...question, volumesML: even.slice(0, 1) }, knowledge);
  const near = [0, ...NEAR_EQUIVALENCE.flatMap((d) => [-d, d])].map((d) => equivalenceML * (1 + d));
  const last = even.at(-1) ?? 0;
  const volumesML = [...new Set([...even, ...near.filter((v) => v > 0 && v < last)])].sort((a, b) => a - b);
  return answerCurve({ ...question, volumesML }, knowledge);
}

function curveSeries(answer: ReturnType<typeof answerCurve>, follow: string): FigureSeries["curve"] {
  return {
    volumeML: answer.points.map((p) => p.volumeML),
    pM: answer.points.map((p) => p.pM),
    label: follow.trim(),
    endPoint: null,
    equivalenceML: answer.equivalenceML,
  };
}

function curveAnswer(request: Request, knowledge: Knowledge, names: Names): Answered {
  const form = calculatorForm(request.query, DEFAULTS);
  const base = { shell: shell(knowledge, "Titration curve", "calculators") };
  const answered = (faults: readonly FieldFault[], answer: object | null): Answered => ({
    status: faults.length > 0 ? 400 : 200,
    view: { ...base, form: formView(form, faults, knowledge), answer },
  });
  if (!asked(request)) return answered([], null);
  const question = questionOf(form, "curve");
  if (!question.ok) return answered(question.faults, null);
  try {
    const a = denseCurve(question.question, knowledge);
    const series = curveSeries(a, form.follow);
    return answered([], {
      status: a.status,
      residual: significant(a.residual, 2),
      equivalence: `${fixed(a.equivalenceML, 3)} mL`,
      pMEquivalence: fixed(a.atEquivalence.pM, 2),
      label: names.set(`p(${form.follow.trim()})`),
      wide: curveFigure("curve-wide", series, WIDE, names.set),
      narrow: curveFigure("curve-narrow", series, NARROW, names.set),
      description: names.set(curveDescription(series)),
      csvHref: `/calculators/curve.csv?${new URLSearchParams(request.originalUrl.split("?")[1] ?? "").toString()}`,
      points: a.points
        .filter((_, i) => i % 6 === 0)
        .map((p) => ({
          volume: fixed(p.volumeML, 2),
          pM: fixed(p.pM, 2),
          pMTotal: fixed(p.pMTotal, 2),
          titrated: percent(p.fractionTitrated * 100),
        })),
      notes: a.notes.map((n) => names.set(n)),
    });
  } catch (error) {
    return answered(faultsOf(error), null);
  }
}
