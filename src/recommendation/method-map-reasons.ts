import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import type { EvaluatedMethod } from "../methods/methods.ts";
import type { Task } from "../methods/types.ts";
import type { MapReason, MapStatus, SingleMode } from "./contract.ts";
import { becauseOf } from "./document.ts";
import type { JudgedMethod } from "./judge.ts";
import { neededLog10K } from "./needed-constant.ts";
import { summaryOf } from "./summary.ts";

/** Why a mode is not open: the titration that came nearest, and what stands against it, the general before the particular. */
export interface Against {
  readonly status: MapStatus;
  readonly nearest: string | null;
  readonly reasons: readonly MapReason[];
}

const plain = (
  kind: MapReason["kind"],
  statement: string,
  facts: MapReason["facts"] = {},
  basis: string | null = "computed",
): MapReason => ({ kind, statement, rule: null, source: null, basis, facts });

/** The reasons against a mode in which nothing that was judged is open. `judged` is best first. */
export function reasonsAgainst(
  task: Task,
  mode: SingleMode,
  found: readonly EvaluatedMethod[],
  judged: readonly JudgedMethod[],
  knowledge: Knowledge,
): Against {
  const analyte = task.analytes[0]!;
  const general = [
    ...notByThisTechnique(analyte.component, knowledge),
    ...(mode === "direct" && found.length === 0 ? tooSlow(task, knowledge) : []),
  ];
  // Without constants everything calculated for the ion is a figure about nothing; ways round and releases rest on records of their own.
  if ((mode === "direct" || mode === "back") && titrantsOnRecord(analyte.component, knowledge).length === 0)
    return {
      status: general.length > 0 ? "closed" : "unknown",
      nearest: null,
      reasons: [...general, noConstants(analyte.shown)],
    };
  const nearest = judged[0] ?? null;
  const slow = general.some((r) => r.kind === "reacts-slowly");
  const particular = nearest
    ? [...(mode === "direct" || mode === "back" ? tooWeak(task, found) : []), ...againstNearest(task, nearest)]
    : whyNone(task, mode, knowledge);
  const reasons = [...general, ...(slow ? [] : particular)];
  return { status: "closed", nearest: nearest && summaryOf(task, nearest, knowledge), reasons };
}

const noConstants = (shown: string): MapReason =>
  plain(
    "no-constants",
    `No constant of ${shown} with any titrant is on record: a gap of the knowledge, from which neither yes nor no follows.`,
    { titrantsWithConstants: 0 },
  );

/** Titrants that a species of the model joins to the metal. */
function titrantsOnRecord(metal: ComponentId, knowledge: Knowledge): readonly string[] {
  return [...knowledge.titrants.keys()].filter((titrant) =>
    knowledge.species.some((s) => (s.components[metal] ?? 0) > 0 && (s.components[titrant] ?? 0) > 0),
  );
}

function notByThisTechnique(ion: ComponentId, knowledge: Knowledge): MapReason[] {
  return knowledge.ionFacts
    .filter((f) => f.ion === ion && f.kind === "not-by-this-technique")
    .map((f) => ({
      kind: "not-by-this-technique",
      statement: `On record: ${f.fact}.`,
      rule: null,
      source: knowledge.sources.get(f.provenance.source)?.citation ?? f.provenance.source,
      basis: f.provenance.basis,
      facts: {},
    }));
}

/** The largest conditional constant met in this mode, where it is below what the requirement asks for. */
function tooWeak(task: Task, found: readonly EvaluatedMethod[]): MapReason[] {
  const met = found
    .flatMap((m) => m.stages)
    .flatMap(({ plan, evaluation }) => {
      const k = evaluation.log10ConditionalK.get(plan.determines[0] ?? "");
      return k === undefined ? [] : [{ k, titrant: plan.titrant.id, pH: plan.pH }];
    });
  const best = met.sort((a, b) => b.k - a.k)[0];
  const needed = neededLog10K(task);
  if (!best || best.k >= needed) return [];
  return [
    plain(
      "too-weak",
      `log K' is ${best.k.toFixed(1)} at best (${best.titrant}, pH ${best.pH}); ${needed.toFixed(1)} is needed for ${task.requirementPercent} % at this level.`,
      {
        log10ConditionalK: Number(best.k.toPrecision(4)),
        neededLog10ConditionalK: Number(needed.toPrecision(3)),
        titrant: best.titrant,
        pH: best.pH,
      },
    ),
  ];
}

const WHY_NO_END_POINT: Readonly<Record<string, string>> = {
  "no-colour": "the dye does not show the ion, so there is no change to see",
  "no-end-point": "the colour does not change within the reach of the burette",
  "dye-held": "the ion holds the dye before the back titrant comes",
  "not-converged": "its equilibrium could not be solved",
};

/** What a rule says when the calculation gave nothing; the evaluation's own word is more exact. */
const NO_FIGURE = ["precision/not-computed"];

function againstNearest(task: Task, nearest: JudgedMethod): MapReason[] {
  const why = nearest.method.stages.map((s) => s.evaluation.why).find((w) => w !== null);
  const noEndPoint = why
    ? [plain("no-end-point", `The nearest has no end point: ${WHY_NO_END_POINT[why] ?? why}.`, { why })]
    : [];
  const rules = nearest.excludedBy
    .map(becauseOf)
    .filter((b) => !(why && NO_FIGURE.includes(b.rule)))
    .map(
      (b): MapReason => ({
        kind: "rule",
        statement: b.statement,
        rule: b.rule,
        source: b.source,
        basis: b.basis,
        facts: b.facts,
      }),
    );
  return [...noEndPoint, ...rules, ...(rules.length + noEndPoint.length > 0 ? [] : misses(task, nearest))];
}

function misses(task: Task, { method, expandedPercent }: JudgedMethod): MapReason[] {
  const result = method.results[0]!;
  const largest = result.budget.terms[0];
  const bias = 100 * result.biasFraction;
  return [
    plain(
      "misses",
      `The nearest misses the requirement: expanded uncertainty ${expandedPercent.toPrecision(2)} % where ${task.requirementPercent} % is wanted (bias ${(bias + 0).toFixed(2).replace("-0.00", "0.00")} %${
        largest ? `; largest part of the rest: ${largest.source}, ${(100 * largest.relative).toPrecision(2)} %` : ""
      }).`,
      {
        relativeExpandedUncertaintyPercent: Number(expandedPercent.toPrecision(4)),
        requirementPercent: task.requirementPercent,
        biasPercent: Number(bias.toFixed(4)),
      },
    ),
  ];
}

/** Why the search worked out nothing of this mode. */
function whyNone(task: Task, mode: SingleMode, knowledge: Knowledge): MapReason[] {
  const { component, shown } = task.analytes[0]!;
  if (mode === "indirect" || mode === "displacement")
    return [
      plain(
        "no-way",
        mode === "indirect"
          ? `The search knows no way to ${shown} through another metal.`
          : `The search knows no agent that sets the titrant of ${shown} free again, and no exchange for it.`,
        { titrationsTried: 0 },
      ),
    ];
  const dyes = [...knowledge.indicators.values()].filter((d) =>
    d.uses.some((u) => u.ions.includes(component) && (mode === "back") === (u.mode === "back")),
  );
  return dyes.length === 0
    ? [plain("no-dye", `No dye is on record for ${shown} in a ${mode} titration.`, { dyesOnRecord: 0 })]
    : [plain("no-way", `Nothing was worked out for a ${mode} titration of ${shown}.`)];
}

/** A metal that no titrant binds in the time of a direct titration. */
function tooSlow(task: Task, knowledge: Knowledge): MapReason[] {
  const { component, shown } = task.analytes[0]!;
  const kinetics = [...knowledge.titrants.keys()].map((titrant) => metalKinetics(knowledge, component, titrant));
  if (kinetics.some((k) => k.class === "fast")) return [];
  const rate = kinetics.flatMap((k) => k.records).find((r) => r.waterExchangePerS !== undefined);
  const exchange = rate?.waterExchangePerS;
  const needs = [...new Set(kinetics.map((k) => NEED_WORDS[k.needs]))].join(" or ");
  return [
    {
      kind: "reacts-slowly",
      statement: `${shown} reacts too slowly with every titrant to be titrated directly${
        exchange === undefined
          ? ""
          : ` (it exchanges its water at ${exchange < 1e-2 ? exchange.toExponential(1) : exchange} per second)`
      }: it needs titrant in excess and ${needs}.`,
      rule: null,
      source: rate ? (knowledge.sources.get(rate.provenance.source)?.citation ?? rate.provenance.source) : null,
      basis: rate?.provenance.basis ?? null,
      facts: exchange === undefined ? {} : { waterExchangePerS: exchange },
    },
  ];
}

const NEED_WORDS: Readonly<Record<string, string>> = {
  none: "no more",
  wait: "time",
  heat: "heat",
  boil: "boiling",
};
