import type { StageDocument } from "./contract.ts";
import { amount } from "./text-amounts.ts";
import { figures, listed, reagentWords } from "./text-words.ts";

/** What the order of an ordinary titration gives to that of a way round. */
export interface CommonSteps {
  readonly opening: string;
  readonly agents: readonly string[];
  readonly preparation: (step: StageDocument["preparation"][number]) => string;
  readonly buffer: string;
  /** What is looked at again after these steps. */
  readonly checked: (done: readonly string[]) => readonly string[];
  readonly excess: (added: { readonly molPerL: number; readonly purpose: string }) => string;
  readonly endPoint: readonly string[];
}

/** Steps that prepare the sample before the reagent goes in. */
const BEFORE_THE_REAGENT = new Set(["separate", "remove-carbonate", "depolymerise", "reduce", "air-oxidise"]);
/** Steps whose words the way round says itself. */
const SAID = new Set(["precipitate-and-filter", "tetracyanonickelate-exchange", "excess-titrant-first"]);

/** The steps of a way round at the bench: precipitation, what is filtered, the metal's titration, and what the titre stands for. */
export function detourSteps(stage: StageDocument, common: CommonSteps): readonly string[] {
  const detour = stage.vessel.detour!;
  const analyte = listed(stage.determines);
  const before = stage.preparation.filter((step) => BEFORE_THE_REAGENT.has(step));
  const chelates = stage.added.filter((a) => stage.preparation.some((step) => step === `add-${a.id}`));
  const rest = stage.preparation.filter(
    (step) => !BEFORE_THE_REAGENT.has(step) && !SAID.has(step) && !step.startsWith("add-"),
  );
  const precipitates = detour.precipitationPH !== null;
  // In a precipitation the standing and heating belong to it, unless titrant has to dissolve the precipitate.
  const [early, late] =
    precipitates && stage.mode !== "back"
      ? [rest.filter((s) => s !== "alcohol"), rest.filter((s) => s === "alcohol")]
      : [[], rest];
  return [
    common.opening,
    ...before.map(common.preparation),
    ...(precipitates ? precipitation(stage, analyte) : []),
    ...early.map(common.preparation),
    ...common.agents,
    ...(detour.kind === "precipitate" && stage.mode === "back" ? [dissolving(stage, common)] : []),
    common.buffer,
    ...(precipitates ? [] : [addReagent(stage)]),
    ...(detour.kind === "exchange" && precipitates ? [addReagent(stage)] : []),
    ...chelates.map((a) => `Add ${amount(stage, a.id, a.molPerL)}: ${a.purpose}.`),
    ...late.map(common.preparation),
    ...common.checked(late),
    ...common.endPoint,
    result(stage, analyte),
  ];
}

function addReagent(stage: StageDocument): string {
  const { reagent, kind, metal } = stage.vessel.detour!;
  const purpose =
    kind === "exchange"
      ? `the analyte sets ${metal} free`
      : `it binds the analyte; measure it exactly, by itself titrated the same way`;
  return `Add ${amount(stage, reagent.id, reagent.molPerL)}: ${purpose}.`;
}

function precipitation(stage: StageDocument, analyte: string): readonly string[] {
  const { reagent, precipitant, precipitationPH, precipitationWords, kind, filtered } = stage.vessel.detour!;
  const poured = precipitant ?? reagent;
  const further = stage.added.filter((a) => a.molPerL === 0);
  const measured = kind === "surplus" ? ", measured exactly" : "";
  const keep = !filtered
    ? "The precipitate stays in the flask."
    : kind === "surplus"
      ? "Go on with filtrate and washings."
      : "Go on with the precipitate.";
  return [
    `Precipitate ${analyte} at pH ${figures(precipitationPH!)} with ${amount(stage, poured.id, poured.molPerL)}${measured}: ${precipitationWords!}. ${keep}`,
    ...further.map((a) => `Use with it ${reagentWords(a.id)}: ${a.purpose}.`),
  ];
}

function dissolving(stage: StageDocument, common: CommonSteps): string {
  const dissolved = common.excess(stage.added.at(-1)!);
  return `Dissolve the precipitate: ${dissolved.charAt(0).toLowerCase()}${dissolved.slice(1)} Make up to the volume again.`;
}

/** How the titre is turned into the analyte. */
function result(stage: StageDocument, analyte: string): string {
  const { kind, metal, reagent, stoichiometry } = stage.vessel.detour!;
  return kind === "surplus"
    ? `Titrate the same amount of ${reagent.id} alone in the same way: the difference of the two titres is what ${analyte} took (${stoichiometry}).`
    : kind === "conversion"
      ? `The titre counts the titrant set free (${stoichiometry}).`
      : `The ${metal} found stands for ${analyte} (${stoichiometry}).`;
}
