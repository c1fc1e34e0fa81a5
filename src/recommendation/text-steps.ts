import type { Brief, RecommendedMethod, StageDocument } from "./contract.ts";
import { amount, changeWords, excessStep, thereAlready } from "./text-amounts.ts";
import { detourSteps } from "./text-detour.ts";
import { backTitrantOf } from "./text-method.ts";
import { AFTER_FIRST_END_POINT } from "../methods/release-plan.ts";
import { figures, listed, PREPARATION_WORDS, reagentWords } from "./text-words.ts";

/**
 * Agents that go in only when the buffer has set the pH: in acid they would give off hydrogen cyanide, hydrogen sulfide or
 * hydrogen fluoride. All others go in first, while metals that hydrolyse are still dissolved.
 */
const AFTER_THE_BUFFER = new Set(["cyanide", "sulfide", "fluoride"]);
const RELEASE_WORDS = ["fluoride-release", "iodide-release", "thiol-release"] as const;
const FLASK_FIRST = new Set([
  "remove-carbonate",
  "separate",
  "precipitate-and-filter",
  "depolymerise",
  "reduce",
  "air-oxidise",
]);

/** Buffers that do not stand boiling: hexamine splits in acid, ammonia escapes. */
const SPLITS_HOT = "hexamine";
const ESCAPES_HOT = "ammonia";
/** pH of two titrations of one vessel that count as the same. */
const SAME_PH = 0.1;

/** The steps of a method at the bench, in order: one sentence each. */
export function stepsOf(method: RecommendedMethod, brief: Brief): readonly string[] {
  return method.stages.flatMap((stage, index) => stageSteps(stage, index, method, brief));
}

function stageSteps(stage: StageDocument, index: number, method: RecommendedMethod, brief: Brief): readonly string[] {
  if (stage.vessel.release !== null) return releaseSteps(stage, index, method, brief);
  return plainSteps(stage, index, method, brief);
}

/** A release is the same titration twice: up to the first end point without the agent, then with it. */
function releaseSteps(stage: StageDocument, index: number, method: RecommendedMethod, brief: Brief): readonly string[] {
  const late = stage.auxiliary.filter((a) => a.purpose.startsWith(AFTER_FIRST_END_POINT));
  const words = RELEASE_WORDS.map((w) => stage.preparation.indexOf(w)).find((at) => at >= 0);
  // Without a word of its own the release follows the first pause.
  const pauses = [stage.preparation.indexOf("cool"), stage.preparation.indexOf("wait")].filter((at) => at >= 0);
  const split = words ?? (pauses.length > 0 ? Math.min(...pauses) : 0);
  const before: StageDocument = {
    ...stage,
    mode: "back",
    determines: [],
    titreML: null,
    auxiliary: stage.auxiliary.filter((a) => !late.includes(a)),
    preparation: stage.preparation.slice(0, words ?? split + 1),
  };
  const back = backTitrantOf(stage, method) ?? method.titrant;
  const titre = stage.titreML === null ? "" : `: about ${figures(stage.titreML)} mL more`;
  return [
    ...plainSteps(before, index, method, brief),
    ...late.map(
      (a) => `Add ${amount(stage, a.id, a.molPerL)}, which sets free the titrant of ${listed(stage.determines)}.`,
    ),
    ...stage.preparation.slice(split + 1).map((step) => PREPARATION_WORDS[step]),
    ...pHCheck(stage, stage.preparation.slice(split + 1), [SPLITS_HOT, ESCAPES_HOT]),
    `Titrate on with ${figures(back.molPerL)} mol/L ${back.id} to the same shade${titre}. This volume alone gives ${listed(stage.determines)}.`,
  ];
}

function plainSteps(stage: StageDocument, index: number, method: RecommendedMethod, brief: Brief): readonly string[] {
  const titrant = stage.titrant ?? method.titrant;
  const backTitrant = backTitrantOf(stage, method);
  const earlier = index > 0 && method.mode === "successive" ? method.stages[index - 1]! : null;
  const agents = agentsOf(stage, earlier);
  const early = agents.filter((agent) => !AFTER_THE_BUFFER.has(agent.id));
  const late = agents.filter((agent) => AFTER_THE_BUFFER.has(agent.id));
  const before = stage.preparation.filter((step) => FLASK_FIRST.has(step));
  const after = stage.preparation.filter((step) => !FLASK_FIRST.has(step));
  const titrantFirst = after.includes("excess-titrant-first");
  const steps = after
    .filter((step) => step !== "excess-titrant-first" && !isAddition(step, stage))
    .map((step) => PREPARATION_WORDS[step]);
  const { detour } = stage.vessel;
  if (detour)
    return detourSteps(stage, {
      opening: opening(index, method, brief, stage),
      agents: agents.map((agent) => `Add ${agent.words}.`),
      preparation: (step) => preparationStep(step, stage),
      buffer: bufferStep(stage),
      checked: (done) => pHCheck(stage, done, [ESCAPES_HOT]),
      excess: ({ molPerL, purpose }) => excessStep(stage, method, brief, molPerL, purpose),
      endPoint: endPoint(stage, backTitrant ?? titrant, earlier),
    });
  const titrantSteps = addTitrant(stage, method, brief);
  const lateSteps = late.map((agent) => `Now that the pH is set, add ${agent.words}.`);
  // Where the buffer does not stand the heat it goes in after cooling, and what needs its pH after it.
  const cooled = stage.buffer.id === SPLITS_HOT && isHeated(after) ? steps.indexOf(PREPARATION_WORDS.cool) + 1 : 0;
  const middle =
    cooled > 0
      ? [
          `Bring near pH ${figures(Math.floor(stage.pH.target))} with dilute ammonia or alkali; the hexamine waits until the solution is cool.`,
          ...(titrantFirst ? [] : titrantSteps),
          ...steps.slice(0, cooled),
          bufferStep(stage),
          ...lateSteps,
          ...steps.slice(cooled),
        ]
      : [
          bufferStep(stage, earlier),
          ...lateSteps,
          ...(titrantFirst ? [] : titrantSteps),
          ...steps,
          ...pHCheck(stage, after, [ESCAPES_HOT]),
        ];
  return [
    opening(index, method, brief, stage),
    ...before.map((step) => preparationStep(step, stage)),
    ...early.map((agent) => `Add ${agent.words}.`),
    ...(titrantFirst ? titrantSteps : []),
    ...middle,
    ...endPoint(stage, backTitrant ?? titrant, earlier),
  ];
}

/** Agents as they are poured, without those that an earlier titration left in the same vessel. */
function agentsOf(stage: StageDocument, before: StageDocument | null): readonly { id: string; words: string }[] {
  return [
    ...bottles(stage)
      .filter(({ agent, molPerL }) => !thereAlready(before, agent, molPerL))
      .map(({ agent, molPerL, masks }) => ({
        id: agent,
        words: `${amount(stage, agent, molPerL)}, which masks ${listed(masks)}`,
      })),
    ...stage.auxiliary
      .filter(({ id, molPerL }) => !thereAlready(before, id, molPerL))
      .map((added) => ({ id: added.id, words: `${amount(stage, added.id, added.molPerL)} (${added.purpose})` })),
  ];
}

/** Sets the pH; in a vessel that an earlier titration has buffered alike there is only the pH to look at. */
function bufferStep(stage: StageDocument, earlier: StageDocument | null = null): string {
  const { pH, buffer } = stage;
  const range = `it must stay between pH ${figures(pH.low)} and ${figures(pH.high)}`;
  return earlier !== null && earlier.buffer.id === buffer.id && Math.abs(earlier.pH.target - pH.target) <= SAME_PH
    ? `Check that the pH is still ${figures(pH.target)}, and add ${reagentWords(buffer.id)} where it is not; ${range}.`
    : `Bring to pH ${figures(pH.target)} with ${amount(stage, buffer.id, buffer.molPerL)} as buffer; ${range}.`;
}

const isHeated = (steps: readonly string[]): boolean =>
  steps.includes("cool") && (steps.includes("boil") || steps.includes("heat"));

/** A buffer that suffers from heat is looked at again when the solution is cool. */
const pHCheck = (stage: StageDocument, done: readonly string[], buffers: readonly string[]): readonly string[] =>
  buffers.includes(stage.buffer.id) && isHeated(done)
    ? [`Check the pH again, and bring it back to ${figures(stage.pH.target)} where it has moved.`]
    : [];

function opening(index: number, method: RecommendedMethod, brief: Brief, stage: StageDocument): string {
  const { volumeML, titrationVolumeML } = brief.portion;
  // Where titrant in excess goes in, or the sample is not diluted, there is nothing to make up to.
  const room =
    titrationVolumeML <= volumeML
      ? ""
      : stage.vessel.excessTitrantMolPerL > 0 && !stage.vessel.detour?.filtered
        ? `, and water so that the flask holds about ${figures(titrationVolumeML)} mL when the titration starts`
        : ` and make up to about ${figures(titrationVolumeML)} mL`;
  const take = `${figures(volumeML)} mL of the sample${room}`;
  if (index === 0) return `Take ${take}.`;
  return method.mode === "difference" || method.mode === "portions"
    ? `Take another portion: ${take}.`
    : "Go on with the same solution; the volume is counted from the last end point.";
}

/** A separation says what it has to take away. */
function preparationStep(step: StageDocument["preparation"][number], stage: StageDocument): string {
  const { removed } = stage.vessel;
  if (removed.length === 0 || (step !== "separate" && step !== "precipitate-and-filter"))
    return PREPARATION_WORDS[step];
  return step === "separate" ? separationWords(stage) : `Let ${listed(removed)} precipitate, and filter it off.`;
}

/** The steps of a separation, by name where one is on record. */
function separationWords({ vessel, determines }: StageDocument): string {
  const known = vessel.separation.map(({ takes, ions, kind, step }) =>
    takes === "analyte"
      ? `Take ${listed(determines)} out of the solution, away from ${listed(ions)} (${kind}): ${step}`
      : `Take ${listed(ions)} out (${kind}): ${step}`,
  );
  const unknown =
    vessel.separationUnknown.length > 0
      ? [`Separate ${listed(vessel.separationUnknown)}: no step for it is on record here`]
      : [];
  return `${[...known, ...unknown].join(". ")}.`;
}

function addTitrant(stage: StageDocument, method: RecommendedMethod, brief: Brief): readonly string[] {
  const titrant = (stage.titrant ?? method.titrant).id;
  return stage.added.map((added) =>
    added.id === titrant && stage.vessel.excessTitrantMolPerL > 0
      ? excessStep(stage, method, brief, added.molPerL, added.purpose)
      : `Add ${amount(stage, added.id, added.molPerL)}: ${added.purpose}.`,
  );
}

const isAddition = (step: string, stage: StageDocument): boolean =>
  stage.added.some((added) => step === `add-${added.id}`);

function endPoint(
  stage: StageDocument,
  last: { readonly id: string; readonly molPerL: number },
  earlier: StageDocument | null,
): readonly string[] {
  const titre = stage.titreML === null ? "" : `; about ${figures(stage.titreML)} mL`;
  const withWhat = `Titrate${stage.mode === "back" ? " back" : ""} with ${figures(last.molPerL)} mol/L ${last.id}`;
  const gives =
    stage.determines.length > 0
      ? `${titre}. This gives ${stage.determines.length > 1 ? "the sum of " : ""}${listed(stage.determines)}.`
      : `${titre}. Discard this reading.`;
  if (stage.detection === "electrode") {
    const { electrode } = stage.endPoint;
    const step = electrode ? ` (about ${figures(electrode.jumpMV)} mV from 99 to 101 % of the volume)` : "";
    return [
      `Put in the ${(electrode?.name ?? "electrode").replace(/ with a little .*/, "")} and a reference electrode.`,
      `${withWhat}, in equal small portions near the end and waiting for the reading each time; the end is where the potential changes fastest${step}${gives}`,
    ];
  }
  if (stage.detection === "photometric") {
    const { wavelengthNm } = stage.endPoint;
    const where = wavelengthNm
      ? `${wavelengthNm.join(" to ")} nm`
      : "the wavelength at which bound and free form differ most";
    return [
      ...(stage.indicator
        ? [`Add ${reagentWords(stage.indicator.id)} (about ${figures(stage.indicator.molPerL)} mol/L).`]
        : []),
      `${withWhat}, reading the absorbance at ${where} and correcting it for dilution; the end is where its two straight branches meet${gives}`,
    ];
  }
  if (stage.indicator === null) return [`${withWhat}${gives}`];
  const dye = reagentWords(stage.indicator.id);
  return [
    earlier?.indicator?.id === stage.indicator.id
      ? `The ${dye} is there already; add a little where the colour is weak.`
      : `Add ${dye}, enough for a clear colour (about ${figures(stage.indicator.molPerL)} mol/L).`,
    `${withWhat} until the colour has changed ${changeWords(stage.indicator.colourChange)}${gives}`,
  ];
}

interface Bottle {
  readonly agent: string;
  readonly molPerL: number;
  readonly masks: readonly string[];
}

/** Masks as they are poured: one addition an agent, whatever it masks. What the alkali throws down needs no bottle; the pH step says it. */
function bottles(stage: StageDocument): readonly Bottle[] {
  const poured = new Map<string, Bottle>();
  for (const { agent, molPerL, masks } of stage.masking) {
    if (agent === "hydroxide") continue;
    const before = poured.get(agent);
    poured.set(agent, {
      agent,
      molPerL: Math.max(molPerL, before?.molPerL ?? 0),
      masks: [...(before?.masks ?? []), ...masks],
    });
  }
  return [...poured.values()];
}
