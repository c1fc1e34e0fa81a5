import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { blockerOf } from "../methods/blocking.ts";
import type { EvaluatedMethod } from "../methods/methods.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import { supersaturations } from "../methods/saturation.ts";
import { vesselSample } from "../methods/solution.ts";
import { atCommonEquivalence, turns } from "../methods/threats.ts";
import { companyOf } from "../methods/way-round.ts";
import { countedIn, type Task } from "../methods/types.ts";
import type { Finding } from "./contract.ts";
import { OXIDANTS } from "./component-facts.ts";
import { shownIon } from "./spelling.ts";

/** A bias below this part of the requirement is not worth a finding. */
const REPORTED_PART_OF_REQUIREMENT = 0.1;
/** log10 alpha of the analyte from one ligand of the sample, from which its binding is reported. */
const REPORTED_LOG10_ALPHA = 0.3;

/** Supersaturation, log10, that solubility products are sure of. */
const REPORTED_SATURATION = 0.2;
/** Part of the titrant put in at first that a metal has to take before it is told. */
const REPORTED_PART_OF_TITRANT = 0.05;
/** A metal that stands in the result with more of itself than this is told as titrated, not as taking titrant. */
const COUNTED_SHARE = 0.5;

const percentText = (fraction: number): string => {
  const p = 100 * fraction;
  return `${Math.abs(p) >= 10 ? p.toFixed(0) : Math.abs(p) >= 0.1 ? p.toPrecision(2) : p.toFixed(2)} %`;
};

/**
 * What each component would do if nothing were done: judged under the simplest direct titration of the analyte and under the
 * first-ranked method without its masking; one row for each thing it does.
 * @param simplest direct titrations of the analyte with its usual dyes, best first; may be empty
 */
export function findingsOf(
  task: Task,
  first: EvaluatedMethod | null,
  simplest: readonly DevelopedStage[],
  knowledge: Knowledge,
): Finding[] {
  const rows = new Map<string, Finding>();
  const put = (component: ComponentId, as: Finding["as"], statement: string, facts: Finding["facts"]): void => {
    const shown = shownIon(task, component, knowledge);
    const key = `${shown} ${as}`;
    if (!rows.has(key)) rows.set(key, { component: shown, as, statement: `${shown} ${statement}`, facts });
  };
  const stages = [...(first?.stages ?? []), ...simplest];
  for (const stage of stages) {
    titration(task, stage, put, knowledge);
    deposits(task, stage, put, knowledge);
    company(task, stage, put);
    consumption(task, stage, put);
  }
  for (const analyte of task.analytes) slowness(analyte.component, first, put, knowledge);
  for (const row of task.matrix)
    if (knowledge.components.get(row.component)?.kind === "metal") slowness(row.component, first, put, knowledge);
  for (const row of task.matrix)
    if (OXIDANTS.has(row.component))
      put(row.component, "oxidises-indicator", "oxidises metallochromic dyes: reduce it before the dye goes in", {});
  return [...rows.values()];
}

type Put = (component: ComponentId, as: Finding["as"], statement: string, facts: Finding["facts"]) => void;

function titration(task: Task, stage: DevelopedStage, put: Put, knowledge: Knowledge): void {
  const { bare } = stage;
  const { plan } = bare.model;
  const allowed = (REPORTED_PART_OF_REQUIREMENT * task.requirementPercent) / 100;
  const dye = plan.indicator ? (knowledge.indicators.get(plan.indicator.id)?.name ?? plan.indicator.id) : null;
  const present = bare.presentMol / bare.model.volumeL;
  const atEquivalence =
    bare.status === "failed" || bare.blockedBy.length > 0 ? atCommonEquivalence(bare.model, bare.presentMol) : null;
  const where = `at pH ${plan.pH} with ${plan.titrant.id}${dye ? ` and ${dye}` : ""}`;
  for (const { component, inVesselMolPerL } of vesselSample(task, plan)) {
    const isAnalyte = plan.determines.includes(component);
    if (bare.model.metals.includes(component) && !isAnalyte) {
      const share = Math.min(
        1,
        Math.max(
          0,
          atEquivalence
            ? atEquivalence.boundToTitrant(component) / Math.max(atEquivalence.total(component), Number.MIN_VALUE)
            : (bare.titrated.get(component) ?? 0),
        ),
      );
      // What is counted with the surplus of a way round takes from the result.
      const { detour } = plan;
      const weight = detour
        ? detour.analytePerMetal * (bare.model.solution.way?.record.kind === "surplus" ? -1 : 1)
        : 1;
      const bias = (weight * share * inVesselMolPerL) / present;
      if (Math.abs(bias) > allowed)
        put(
          component,
          "titrates-with-analyte",
          `is titrated to ${percentText(share)} ${where}: ${percentText(bias)} of the result`,
          {
            titratedFraction: share,
            biasPercent: 100 * bias,
            pH: plan.pH,
          },
        );
    }
    const blocks =
      bare.blockedBy.includes(component) || stage.threats.some((t) => t.component === component && t.blocks);
    if (blocks && dye && !isAnalyte) {
      const indicator = knowledge.indicators.get(plan.indicator!.id);
      const row = indicator ? blockerOf(indicator, component, plan.pH) : null;
      put(
        component,
        "blocks-indicator",
        `spoils ${dye} at pH ${plan.pH}: ${row ? plainDetail(row.detail) : "the dye stays bound past equivalence"}`,
        {
          presentMolPerL: inVesselMolPerL,
          pH: plan.pH,
          indicator: plan.indicator!.id,
        },
      );
    }
  }
  bindings(task, stage, put, knowledge);
}

/** What a record says of a blocker, without the remarks on where it is from. */
const plainDetail = (detail: string): string =>
  detail
    .replace(/; (measured with|acid limit|published for) .*$/, "")
    .replace(/ \((memory|inference)\)/g, "")
    .replace(/remedy: as ([a-z-]+)/, (_, dye: string) => `remedy: as with ${dye.replaceAll("-", " ")}`);

/** Ligands of the sample that hold the analyte before the titrant comes. */
function bindings(task: Task, stage: DevelopedStage, put: Put, knowledge: Knowledge): void {
  const { model } = stage.bare;
  const metal = countedIn(model.plan)[0];
  if (metal === undefined) return;
  const start = model.at(0);
  if (!start.ok) return;
  for (const { component } of task.matrix) {
    if (knowledge.components.get(component)?.kind !== "ligand") continue;
    if (turns(model.plan, component, knowledge))
      put(
        component,
        "complexes-analyte",
        `makes of ${metal} another ion, and holds that: it has to be destroyed first`,
        {},
      );
    const held = model.system.species.reduce((sum, s, row) => {
      const takes = (s.components[metal] ?? 0) > 0 && (s.components[component] ?? 0) > 0;
      return takes ? sum + start.result.speciesMolPerL[row]! : sum;
    }, 0);
    const log10Alpha = Math.log10(1 + held / start.free(metal));
    if (log10Alpha >= REPORTED_LOG10_ALPHA)
      put(
        component,
        "complexes-analyte",
        `binds ${shownIon(task, metal, knowledge)}: log alpha ${log10Alpha.toFixed(1)} at pH ${model.plan.pH} before the titrant`,
        {
          log10Alpha,
          pH: model.plan.pH,
        },
      );
  }
}

/** Solids of the mixture: the row goes to the partner from the matrix. */
function deposits(task: Task, stage: DevelopedStage, put: Put, knowledge: Knowledge): void {
  const { plan } = stage.bare.model;
  for (const solid of supersaturations(task, plan, knowledge, stage.bare.model.ionicStrengthMolPerL)) {
    if (solid.pace === "no" || solid.saturationIndex < REPORTED_SATURATION) continue;
    const fromSample = vesselSample(task, plan)
      .map((c) => c.component)
      .filter((c) => solid.components.includes(c))
      // That the analyte of a way round precipitates is the way itself.
      .filter((c) => plan.detour === null || !plan.determines.includes(c));
    // Solids of reagents with each other are the plan's business, not the sample's.
    if (fromSample.length === 0) continue;
    const partners = fromSample.filter((c) => !plan.determines.includes(c));
    for (const component of partners.length > 0 ? partners : fromSample)
      put(
        component,
        "precipitates",
        `can deposit ${solid.solid} at pH ${plan.pH}: supersaturated by ${solid.saturationIndex.toFixed(1)} in log10 (${PACE_WORDS[solid.pace]})`,
        { saturationIndex: solid.saturationIndex, pH: plan.pH, solid: solid.solid },
      );
  }
}

/** Metals that take titrant from the excess without standing in the result: they ask for more of it. */
function consumption(task: Task, stage: DevelopedStage, put: Put): void {
  const { bare } = stage;
  const { model } = bare;
  const { plan } = model;
  if (plan.backTitrant === null || plan.excessTitrantMolPerL <= 0) return;
  const start = model.at(0);
  const end = model.at(bare.endPointML / 1000);
  const keeps = (component: ComponentId): boolean =>
    component === plan.backTitrant?.id ||
    (end.ok && end.boundToTitrant(component) / end.dilution > 0.5 * start.boundToTitrant(component));
  for (const { component, inVesselMolPerL } of vesselSample(task, plan)) {
    if (!model.metals.includes(component) || plan.determines.includes(component)) continue;
    const total = start.total(component);
    if (total <= 0 || Math.abs(bare.titrated.get(component) ?? 0) > COUNTED_SHARE) continue;
    const bound = Math.min(1, start.boundToTitrant(component) / total);
    const ofTitrant = (bound * inVesselMolPerL) / plan.excessTitrantMolPerL;
    if (ofTitrant < REPORTED_PART_OF_TITRANT) continue;
    put(
      component,
      "consumes-titrant",
      // A metal that the back titrant also is, or holds as firmly, keeps what it took.
      `takes ${percentText(ofTitrant)} of the ${plan.titrant.id} put in at pH ${plan.pH}${keeps(component) ? "" : `, until ${plan.backTitrant.id} takes it back`}: more of it is needed`,
      { boundFraction: bound, ofTitrantFraction: ofTitrant, pH: plan.pH },
    );
  }
}

/** Components of the matrix that fall with the reagent of a way round and count as analyte. */
function company(task: Task, stage: DevelopedStage, put: Put): void {
  const { bare } = stage;
  const { way } = bare.model.solution;
  if (!way) return;
  for (const { deposit, asAnalyteMolPerL } of companyOf(way)) {
    const { solid, components } = deposit;
    const share = (asAnalyteMolPerL * bare.model.volumeL) / bare.presentMol;
    for (const { component } of task.matrix)
      if ((components[component] ?? 0) > 0)
        put(component, "precipitates", `falls as ${solid} with the reagent: ${percentText(share)} of the result`, {
          biasPercent: 100 * share,
          pH: way.record.precipitation?.pH ?? bare.model.plan.pH,
          solid,
        });
  }
}

const PACE_WORDS = { fast: "at once", minutes: "within minutes", slow: "slowly", no: "not in this time" } as const;

function slowness(ion: ComponentId, first: EvaluatedMethod | null, put: Put, knowledge: Knowledge): void {
  const titrant = first?.stages.find((s) => s.plan.determines.includes(ion))?.plan.titrant.id ?? "EDTA";
  const kinetics = [metalKinetics(knowledge, ion, "EDTA"), metalKinetics(knowledge, ion, titrant)].find(
    (k) => k.class !== "fast",
  );
  if (!kinetics) return;
  const record = kinetics.records[0];
  put(ion, "slow", `reacts slowly with the titrant: ${record?.statement ?? kinetics.class}`, {
    kinetics: kinetics.class,
    ...(record?.waterExchangePerS === undefined ? {} : { waterExchangePerS: record.waterExchangePerS }),
  });
}
