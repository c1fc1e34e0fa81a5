import type { Knowledge } from "../constants/knowledge.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import type { ToleranceLimit } from "../methods/tolerance.ts";
import { bufferStrain } from "../methods/protons.ts";
import { vesselSample } from "../methods/solution.ts";
import { separationsOf, type Separation } from "../methods/separation.ts";
import type { StagePlan, Task } from "../methods/types.ts";
import { amountsOf } from "./bench-amounts.ts";
import type { Because, RecommendedMethod, StageDocument } from "./contract.ts";
import { conditionsDocument } from "./condition-words.ts";
import type { JudgedMethod, Verdict } from "./judge.ts";
import { budgetDocument, resultFigures, wouldMeetDocument } from "./budget-document.ts";
import { signif } from "./figures-shown.ts";
import { maskingDocument } from "./masking-document.ts";
import { precedentsOf } from "./precedents.ts";
import { resultFormulas } from "./result-formula.ts";
import { cautionTexts } from "./reagents.ts";
import { shownIon } from "./spelling.ts";
import { detourDocument } from "./detour-words.ts";
import { summaryOf } from "./summary.ts";

type Preparation = StageDocument["preparation"][number];

/** A rule's word as the contract writes it. */
export function becauseOf({ finding, stage }: Verdict): Because {
  return {
    rule: finding.rule,
    effect: finding.effect,
    statement: finding.statement,
    facts: { ...finding.facts },
    source: finding.source,
    basis: finding.basis,
    rationale: finding.rationale,
    stage,
  };
}

/** The colour alone, without the species and remarks that the record puts in brackets. */
const plainColour = (text: string): string => text.replace(/\s*\([^)]*\)/g, "").trim() || text;

/** One metal's part of a text that names several: "Ni yellow, Ca orange-red" is "yellow" for nickel. */
function colourOfMetal(text: string, metal: string | null): string {
  const symbol = metal?.replace(/\d*\+$/, "");
  const own = text.split(", ").find((part) => symbol && part.startsWith(`${symbol} `));
  return own === undefined ? text : own.slice(symbol!.length + 1);
}

/** Colours of a dye at a pH as [before, after] the end point. */
export function colourChangeOf(stage: DevelopedStage): readonly [string, string] {
  const indicator = stage.evaluation.model.indicator;
  if (!indicator) return ["not stated", "not stated"];
  const { pH } = stage.plan;
  const distance = (range: readonly [number, number]): number =>
    pH < range[0] ? range[0] - pH : pH > range[1] ? pH - range[1] : 0;
  const nearest = [...indicator.colours].sort((a, b) => distance(a.pH) - distance(b.pH))[0];
  if (!nearest) return ["not stated", "not stated"];
  const free = plainColour(nearest.free);
  const bound = colourOfMetal(plainColour(nearest.bound), stage.evaluation.indicatorMetal);
  return stage.plan.backTitrant ? [free, bound] : [bound, free];
}

/** What a chelate is added for. */
function chelatePurpose({ mode, electrode }: StagePlan): string {
  if (mode === "displacement") return "gives up its metal to the analyte, in bulk";
  return electrode === null ? "lends the indicator its metal" : "lends the electrode its ion";
}

function stageDocument(task: Task, method: JudgedMethod, index: number, knowledge: Knowledge): StageDocument {
  const { stages } = method.method;
  const stage = stages[index]!;
  const range = method.ranges[index] ?? null;
  const separation = separationsOf(
    stages.map((s) => s.plan),
    knowledge,
  )[index]!;
  const { plan, evaluation } = stage;
  const head = stages[0]!.plan;
  const ion = (id: string): string => shownIon(task, id, knowledge);
  const added = [
    ...plan.added.map((a) => ({ ...a })),
    ...(plan.chelate
      ? [
          {
            id: `${plan.chelate.metal.replace(/\d?\+$/, "")}-${plan.chelate.ligand}`,
            molPerL: plan.chelate.molPerL,
            purpose: chelatePurpose(plan),
          },
        ]
      : []),
    ...(plan.excessTitrantMolPerL > 0
      ? [{ id: plan.titrant.id, molPerL: signif(plan.excessTitrantMolPerL, 4), purpose: "titrant in excess" }]
      : []),
  ];
  const sameTitrant = plan.titrant.id === head.titrant.id && plan.titrant.molPerL === head.titrant.molPerL;
  const sameBack = plan.backTitrant?.id === head.backTitrant?.id;
  const change = colourChangeOf(stage);
  const converged = evaluation.status !== "failed";
  return {
    determines: plan.determines.map(ion),
    mode: plan.mode,
    titrant: sameTitrant ? null : { ...plan.titrant },
    backTitrant: sameBack ? null : plan.backTitrant && { ...plan.backTitrant },
    added,
    titreML: converged ? signif(evaluation.endPointML, 5) : null,
    pH: {
      target: plan.pH,
      low: range?.low ?? plan.pH,
      high: range?.high ?? plan.pH,
      drop: converged ? pHDropOf(task, stage, knowledge) : null,
    },
    buffer: { ...plan.buffer },
    conditions: [...conditionsDocument(stage, range, method.choices?.[index] ?? null, ion)],
    detection: plan.detection,
    indicator:
      plan.indicator && evaluation.model.indicator
        ? {
            id: plan.indicator.id,
            class: evaluation.model.indicator.class,
            colourChange: [change[0], change[1]],
            molPerL: plan.indicator.molPerL,
          }
        : null,
    masking: maskingDocument(stage, knowledge, ion),
    auxiliary: plan.auxiliary.map((a) => ({ ...a })),
    preparation: [...plan.preparation] as Preparation[],
    amounts: amountsOf(task, plan, knowledge),
    vessel: {
      removed: [...plan.removed],
      ...separationDocument(separation, knowledge, ion),
      chelate: plan.chelate && { ...plan.chelate },
      excessTitrantMolPerL: plan.excessTitrantMolPerL,
      carried: plan.carried && {
        metals: [...plan.carried.metals],
        titrantMolPerL: plan.carried.titrantMolPerL,
        addedML: plan.carried.addedML,
      },
      electrode: plan.electrode,
      detour: plan.detour && detourDocument(plan.detour, plan, ion, knowledge),
      release: plan.release && { ...plan.release },
      demasked: plan.demasked && { ...plan.demasked, frees: plan.demasked.frees.map(ion) },
    },
    ionicStrength: {
      molPerL: signif(evaluation.model.ionicStrengthMolPerL, 4),
      outOfModelRange: evaluation.model.system.outOfModelRange,
    },
    endPoint: {
      basis: evaluation.basis,
      pM: evaluation.pM === null ? null : signif(evaluation.pM, 5),
      pMEquivalence: evaluation.pMEquivalence === null ? null : signif(evaluation.pMEquivalence, 5),
      bandPM: evaluation.bandPM,
      sharpnessPercent: converged ? signif(100 * evaluation.sharpnessFraction, 4) : null,
      indicatorMetal: evaluation.indicatorMetal === null ? null : ion(evaluation.indicatorMetal),
      electrode: evaluation.electrode && {
        id: evaluation.electrode.id,
        name: evaluation.electrode.name,
        slopeMVPerDecade: evaluation.electrode.slopeMVPerDecade,
        readingMV: evaluation.electrode.readingMV,
        jumpMV: signif(evaluation.electrode.jumpMV, 3),
        interferingIon: evaluation.electrode.interferingIon && ion(evaluation.electrode.interferingIon),
      },
      wavelengthNm: evaluation.photometric?.wavelengthNm ? [...evaluation.photometric.wavelengthNm] : null,
    },
    conditional: [...evaluation.log10ConditionalK].map(([metal, k]) => ({
      metal: ion(metal),
      log10ConditionalK: signif(k, 4),
    })),
    interferents: vesselSample(task, plan)
      .filter((c) => !plan.determines.includes(c.component) && knowledge.components.get(c.component)?.kind === "metal")
      .map((c) => {
        const mask = plan.masking.find((m) => m.masks.includes(c.component));
        const share = evaluation.titrated.get(c.component);
        return {
          component: ion(c.component),
          titratedFraction: share === undefined ? null : signif(share, 4),
          biasPercent: share === undefined ? null : signif(100 * (evaluation.biasOf.get(c.component) ?? 0), 4),
          maskedBy: mask?.agent ?? (plan.removed.includes(c.component) ? "separate" : null),
        };
      }),
  };
}

/** Units of pH by which a titration falls from its start to its end point; null where the buffer is not on record. */
function pHDropOf(task: Task, { evaluation }: DevelopedStage, knowledge: Knowledge): number | null {
  const strain = bufferStrain(evaluation, task.temperatureC, knowledge);
  return strain && Number(strain.pHDrop.toFixed(3));
}

/** How what is removed is parted from the analyte, as far as a step is on record. */
function separationDocument(
  { steps, unknown }: Separation,
  knowledge: Knowledge,
  ion: (id: string) => string,
): Pick<StageDocument["vessel"], "separation" | "separationUnknown"> {
  return {
    separation: steps.map(({ record, takes, ions }) => ({
      kind: record.kind,
      step: record.step,
      takes,
      ions: ions.map(ion),
      source: knowledge.sources.get(record.provenance.source)?.citation ?? record.provenance.source,
      basis: record.provenance.basis,
    })),
    separationUnknown: unknown.map(ion),
  };
}

/** A tolerance limit as the contract writes it. */
export const limitRow = (
  task: Task,
  limit: ToleranceLimit,
  knowledge: Knowledge,
): RecommendedMethod["tolerance"][number] => ({
  component: shownIon(task, limit.component, knowledge),
  limitMolPerL: signif(limit.limitMolPerL, 4),
  presentMolPerL: signif(limit.presentMolPerL, 6),
  withMasking: limit.withMasking,
  endsBy: limit.endsBy,
});

/** What a judged method is worth for the brief. */
export const verdictOf = ({ meets, reservations }: JudgedMethod): RecommendedMethod["verdict"] =>
  !meets ? "not-fit" : reservations.length > 0 ? "fit-with-reservations" : "fit";

/** One judged method as the contract writes it. */
export function methodDocument(
  task: Task,
  judged: JudgedMethod,
  rankNumber: number,
  tolerance: readonly ToleranceLimit[],
  knowledge: Knowledge,
): RecommendedMethod {
  const { method } = judged;
  const head = method.stages[0]!;
  const ion = (id: string): string => shownIon(task, id, knowledge);
  const worst = [...method.results].sort((a, b) => b.budget.expanded - a.budget.expanded)[0]!;
  const figures = method.results.map((result) => resultFigures(task, method, result, knowledge));
  const meets = judged.meets;
  return {
    id: method.id,
    rank: rankNumber,
    summary: summaryOf(task, judged, knowledge),
    mode: method.mode,
    titrant: { ...head.plan.titrant },
    backTitrant: method.stages.find((s) => s.plan.backTitrant)?.plan.backTitrant ?? null,
    stages: method.stages.map((_, i) => stageDocument(task, judged, i, knowledge)),
    calculation: resultFormulas(task, method, knowledge),
    predicted: {
      ...figures[method.results.indexOf(worst)]!,
      titreML: signif(head.evaluation.endPointML, 5),
      perAnalyte: method.results.map((result, i) => ({ determines: result.determines.map(ion), ...figures[i]! })),
    },
    meetsRequirement: meets,
    verdict: verdictOf(judged),
    reservations: [...judged.reservations],
    tolerance: tolerance.map((limit) => limitRow(task, limit, knowledge)),
    uncertaintyBudget: worst.budget.terms.map((t) => ({ source: t.source, percent: signif(100 * t.relative, 3) })),
    budget: budgetDocument(task, method, worst, knowledge),
    wouldMeet: rankNumber === 1 && !meets ? wouldMeetDocument(task, method, worst, knowledge) : null,
    workingConditions: {
      ionicStrengthMolPerL: signif(head.evaluation.model.ionicStrengthMolPerL, 4),
      temperatureC: task.temperatureC,
      outOfModelRange: method.stages.some((s) => s.evaluation.model.system.outOfModelRange),
    },
    scores: judged.verdicts
      .filter(({ finding }) => finding.weight !== 0)
      .map(({ finding }) => ({ rule: finding.rule, weight: finding.weight, statement: finding.statement })),
    because: judged.verdicts.map(becauseOf),
    precedents: precedentsOf(method, knowledge),
    cautions: cautionTexts(
      method.stages.map((s) => s.plan),
      [
        ...sampleReagents(task, knowledge),
        ...separationsOf(
          method.stages.map((s) => s.plan),
          knowledge,
        )
          .flatMap(({ steps }) => steps)
          .flatMap((step) => step.record.hazards),
      ],
      knowledge,
    ),
  };
}

/** Components of a sample whose hazards stand under another bottle's name. */
const HAZARD_OF_COMPONENT: Readonly<Record<string, string>> = { perchlorate: "perchloric-acid" };

/** Below this a component of the sample is a trace, not a reagent to be warned of. */
const HAZARDOUS_FROM_MOL_PER_L = 1e-6;

/** Reagent ids under which the hazards of the sample's own components are kept (a cyanide bath, a mercury solution). */
function sampleReagents(task: Task, knowledge: Knowledge): string[] {
  return [...task.analytes, ...task.matrix]
    .filter((c) => c.molPerL > HAZARDOUS_FROM_MOL_PER_L)
    .map((c) => HAZARD_OF_COMPONENT[c.component] ?? c.component)
    .filter((id) => knowledge.reagents.has(id));
}
