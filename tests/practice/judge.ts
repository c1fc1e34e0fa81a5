import type { Recommendation, RecommendedMethod, StageDocument } from "../../src/recommendation/contract.ts";
import type { AcceptedMethod, AcceptedStage, PracticeCase, WrongMethod } from "./cases.ts";

/** What published practice says of one answer. */
export interface Judgement {
  readonly first: boolean; // the first-ranked method is accepted, or an honest "not-fit" is
  readonly three: boolean; // one of the first three is
  readonly forbidden: string | null; // why the first-ranked method must not stand first
  readonly verdict: boolean;
  readonly notFlagged: readonly string[];
  readonly falseAlarms: readonly string[];
  /** In what each accepted answer differs from the first-ranked method. */
  readonly differences: readonly string[];
}

/** Compares one answer with what the case accepts, forbids and expects to be flagged. */
export function judge(document: Recommendation, testCase: PracticeCase): Judgement {
  const { methods, findings, verdict } = document;
  const first = methods[0];
  const declines = verdict === "not-fit" && testCase.verdicts.includes("not-fit");
  const firstFits = declines || (first === undefined ? testCase.accepts.length === 0 : isAccepted(first, testCase));
  const flagged = (flag: PracticeCase["flags"][number]): boolean =>
    findings.some((finding) => sameIon(finding.component, flag.component) && finding.as === flag.as);
  const named = (flag: PracticeCase["flags"][number]): string => `${flag.component} ${flag.as}`;
  return {
    first: firstFits,
    three: firstFits || methods.slice(0, 3).some((method) => isAccepted(method, testCase)),
    forbidden:
      first === undefined || declines ? null : (breach(first, testCase) ?? wrongBy(first, testCase)?.why ?? null),
    verdict: testCase.verdicts.includes(verdict),
    notFlagged: testCase.flags.filter((flag) => !flagged(flag)).map(named),
    falseAlarms: testCase.notFlags.filter(flagged).map(named),
    differences:
      first === undefined
        ? ["no method"]
        : [...new Set(testCase.accepts.map((wanted) => difference(first, wanted) ?? "nothing"))],
  };
}

/** True when the method keeps the brief and fits one accepted alternative. */
export function isAccepted(method: RecommendedMethod, testCase: PracticeCase): boolean {
  return breach(method, testCase) === null && testCase.accepts.some((wanted) => difference(method, wanted) === null);
}

/** In what a method differs from an accepted one; null when it fits. Discarded readings do not count as titrations. */
export function difference(method: RecommendedMethod, wanted: AcceptedMethod): string | null {
  if (!wanted.modes.includes(method.mode)) return "mode";
  const stagesNameTitrants = wanted.stages.some((stage) => stage.titrants.length > 0);
  if (!stagesNameTitrants && !wanted.titrants.includes(method.titrant.id)) return "titrant";
  if (wanted.backTitrants.length > 0 && !wanted.backTitrants.includes(method.backTitrant?.id ?? ""))
    return "back titrant";
  const open = method.stages.filter((stage) => stage.determines.length > 0);
  if (open.length !== wanted.stages.length) return "number of stages";
  let earliest = 0; // in a successive titration the order counts
  const positions = open.map((stage, position) => ({ stage, position }));
  for (const stage of wanted.stages) {
    const differences = positions.map((entry) => stageDifference(method, entry.stage, stage));
    const hit = positions.findIndex(
      (entry, i) => differences[i] === null && (method.mode !== "successive" || entry.position >= earliest),
    );
    const found = positions[hit];
    if (found === undefined) return differences.find((why) => why !== null && why !== "determines") ?? "determines";
    positions.splice(hit, 1);
    earliest = found.position + 1;
  }
  return null;
}

function stageDifference(method: RecommendedMethod, stage: StageDocument, wanted: AcceptedStage): string | null {
  const { target } = stage.pH;
  if (!sameIons(stage.determines, wanted.determines)) return "determines";
  if (!allowed(wanted.titrants, (stage.titrant ?? method.titrant).id)) return "titrant";
  if (target < wanted.pH[0] - PH_ROUNDING || target > wanted.pH[1] + PH_ROUNDING) return "pH";
  if (wanted.detections.length > 0) {
    if (!wanted.detections.includes(stage.detection)) return "detection";
  } else if (wanted.indicators.length === 0 && stage.detection !== "electrode") return "detection";
  if (!allowed(wanted.indicators, stage.indicator?.id ?? "")) return "indicator";
  if (!allowed(wanted.buffers, stage.buffer.id)) return "buffer";
  for (const [ion, agents] of Object.entries(wanted.masking)) if (!handles(stage, ion, agents)) return `masking ${ion}`;
  for (const step of wanted.preparation) if (!doesStep(stage, step)) return `preparation ${step}`;
  for (const group of wanted.anyOf)
    if (!group.some((agent) => everythingIn(stage).includes(agent))) return `auxiliary ${group.join("/")}`;
  return null;
}

const PH_ROUNDING = 1e-9;

/** Why a method breaks the brief or safety, whatever its chemistry; null when it does not. */
export function breach(method: RecommendedMethod, testCase: PracticeCase): string | null {
  const laboratory = (testCase.brief.laboratory ?? {}) as {
    readonly avoid?: readonly string[];
    readonly available?: readonly string[] | null;
    readonly heating?: boolean;
    readonly detection?: readonly string[];
  };
  for (const stage of method.stages) {
    const back = (stage.backTitrant ?? method.backTitrant)?.id;
    const agents = [...stage.masking.map((step) => step.agent), ...stage.auxiliary.map((added) => added.id)];
    const used = [(stage.titrant ?? method.titrant).id, back, stage.indicator?.id, stage.buffer.id, ...agents].filter(
      (id) => id !== undefined,
    );
    const avoided = used.find((id) => laboratory.avoid?.includes(id));
    if (avoided !== undefined) return `uses ${avoided}, to be avoided`;
    const missing = laboratory.available ? used.find((id) => !laboratory.available?.includes(id)) : undefined;
    if (missing !== undefined) return `uses ${missing}, not available`;
    if (laboratory.heating === false && stage.preparation.some((step) => HEATS.has(step)))
      return "heats where nothing may be heated";
    if (!(laboratory.detection ?? ["visual"]).includes(stage.detection))
      return `detection ${stage.detection} not offered`;
    if (stage.pH.target < 9 && agents.some((agent) => agent === "cyanide" || agent === "sulfide"))
      return "cyanide or sulfide below pH 9";
  }
  return null;
}

const HEATS: ReadonlySet<string> = new Set(["warm", "heat", "boil"]);

/** The first pattern of the case that forbids the method to stand first. */
export function wrongBy(method: RecommendedMethod, testCase: PracticeCase): WrongMethod | undefined {
  return testCase.rejects.find((pattern) => method.stages.some((stage) => matches(method, stage, pattern)));
}

function matches(method: RecommendedMethod, stage: StageDocument, pattern: WrongMethod): boolean {
  const ofOneTitration = pattern.indicators.length > 0 || pattern.unmasked.length > 0 || pattern.pH !== undefined;
  const mode = method.mode === "portions" && ofOneTitration ? stage.mode : method.mode;
  if (!allowed(pattern.modes, mode)) return false;
  if (!allowed(pattern.titrants, (stage.titrant ?? method.titrant).id)) return false;
  if (!allowed(pattern.backTitrants, method.backTitrant?.id ?? "")) return false;
  if (!allowed(pattern.indicators, stage.indicator?.id ?? "")) return false;
  if (pattern.pH !== undefined && (stage.pH.target < pattern.pH[0] || stage.pH.target > pattern.pH[1])) return false;
  const dealtWith = separates(stage) || pattern.unmasked.every((ion) => maskedBy(stage, ion).length > 0);
  if (pattern.unmasked.length > 0 && dealtWith) return false;
  return !pattern.without.some((step) => doesStep(stage, step));
}

/** An empty list allows everything. */
const allowed = (list: readonly string[], value: string): boolean => list.length === 0 || list.includes(value);

function handles(stage: StageDocument, ion: string, agents: readonly string[]): boolean {
  const used = maskedBy(stage, ion);
  if ([...used, ...stage.auxiliary.map((added) => added.id)].some((agent) => agents.includes(agent))) return true;
  if (agents.includes("separate") && separates(stage)) return true;
  return used.length === 0 && agents.includes("none");
}

const maskedBy = (stage: StageDocument, ion: string): readonly string[] =>
  stage.masking.filter((step) => step.masks.some((masked) => sameIon(masked, ion))).map((step) => step.agent);

/** Removal by extraction or exchange, and by filtering, are one kind of step under two names. */
const REMOVES: ReadonlySet<string> = new Set(["separate", "precipitate-and-filter"]);
const separates = (stage: StageDocument): boolean => stage.preparation.some((step) => REMOVES.has(step));
const doesStep = (stage: StageDocument, step: string): boolean =>
  stage.preparation.some((done) => done === step) || (REMOVES.has(step) && separates(stage));

const everythingIn = (stage: StageDocument): readonly string[] => [
  ...stage.masking.map((step) => step.agent),
  ...stage.auxiliary.map((added) => added.id),
  ...stage.preparation,
];

/** One spelling for each ion: the caret is dropped, but for VO2^+ (pervanadyl), which VO2+ (vanadyl) is not. */
const oneSpelling = (ion: string): string => {
  const bare = ion.replace(/\s/g, "");
  return bare === "VO2^+" ? bare : bare.replaceAll("^", "");
};
const sameIon = (a: string, b: string): boolean => oneSpelling(a) === oneSpelling(b);
const sameIons = (a: readonly string[], b: readonly string[]): boolean =>
  a.length === b.length && a.every((ion) => b.some((other) => sameIon(ion, other)));
