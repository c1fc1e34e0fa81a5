import { conditionalConstant } from "../chemistry/speciation.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Task } from "../methods/types.ts";

/** log10 K' from which a titration of hundredths of a mole per litre is quantitative: 99.9 % at 1e-2 mol/L. */
const ENOUGH_LOG10_K = 8;
/** pH values at which the strength of a complex is looked at. */
const LOOKED_AT = [4, 5, 6, 7, 8, 9, 10, 11, 12];

/**
 * What stands in the way of the analytes that this technique does not reach, and what to do instead: one sentence each, with the
 * conditional constant where one can be calculated. Analytes with a way round on record say that what the laboratory has does not serve it.
 */
export function notByThisTechnique(task: Task, knowledge: Knowledge): string[] {
  return task.analytes.flatMap(({ component, shown }) => {
    const instead = knowledge.ionFacts.find((f) => f.ion === component && f.kind === "not-by-this-technique");
    const ways = [...knowledge.detours.values()].filter((d) => d.analyte === component);
    const metal = knowledge.components.get(component)?.kind === "metal";
    if (metal && !instead) return [];
    const why = metal ? tooWeak(component, shown, task, knowledge) : `${shown}: the titrants bind metal ions only`;
    const way =
      ways.length > 0
        ? `; the ways round on record (${ways.map((w) => w.id.replaceAll("-", " ")).join("; ")}) do not serve here`
        : metal
          ? ""
          : "; no usable data for a way round (a precipitate or complex with a metal in known excess)";
    return [`${why}${way}.${instead ? ` ${sentence(instead.fact)}` : ""}`];
  });
}

const sentence = (text: string): string => `${text.charAt(0).toUpperCase()}${text.slice(1).replace(/[.]?$/, ".")}`;

/** The best conditional constant of EDTA with the metal over the usual pH, against what a titration asks for. */
function tooWeak(metal: ComponentId, shown: string, task: Task, knowledge: Knowledge): string {
  const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: task.temperatureC };
  const log10K = LOOKED_AT.flatMap((pH) => {
    const found = conditionalConstant(knowledge, { metal, ligand: "EDTA", pH, conditions });
    return found && Number.isFinite(found.log10ConditionalK) ? [found.log10ConditionalK] : [];
  });
  if (log10K.length === 0) return `${shown}: no constant with EDTA is on record`;
  const best = Math.max(...log10K);
  return best >= ENOUGH_LOG10_K
    ? `${shown}: no usable end point or reaction is on record, although log K' with EDTA reaches ${best.toFixed(1)}`
    : `${shown}: log K' with EDTA is ${best.toFixed(1)} at best, ${(ENOUGH_LOG10_K - best).toFixed(1)} short of the ${ENOUGH_LOG10_K} that a titration asks for`;
}
