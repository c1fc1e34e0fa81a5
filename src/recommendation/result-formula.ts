import type { Knowledge } from "../constants/knowledge.ts";
import type { EvaluatedMethod } from "../methods/methods.ts";
import type { StagePlan, Task } from "../methods/types.ts";
import { detourRecord } from "../methods/way-round.ts";
import { shownIon } from "./spelling.ts";

const significant = (value: number, digits = 4): string => String(Number(value.toPrecision(digits)));
const listed = (words: readonly string[]): string => words.join(" + ");

/** mL of the standard solution that bring the excess of a back titration. */
export const excessML = (task: Task, plan: StagePlan): number =>
  (plan.excessTitrantMolPerL * (task.portion.titrationVolumeML + (plan.carried?.addedML ?? 0))) / plan.titrant.molPerL;

/** How each result is calculated from the volumes read: one sentence a result, with what one mL stands for where it is one factor. */
export function resultFormulas(task: Task, method: EvaluatedMethod, knowledge: Knowledge): string[] {
  const plans = method.stages.map((s) => s.plan);
  const volume = (i: number): string => (plans.length > 1 ? `V${i + 1}` : "V");
  const terms = plans.map((plan, i) => amountFound(task, plan, volume(i), knowledge));
  const portion = `${significant(task.portion.volumeML)} mL`;
  const same = (a: readonly string[], b: readonly string[]): boolean =>
    a.length === b.length && a.every((ion) => b.includes(ion));
  return method.results.flatMap(({ determines }) => {
    const what = `${listed(determines.map((ion) => shownIon(task, ion, knowledge)))} (mol/L)`;
    const own = plans.findIndex((p) => same(p.determines, determines));
    if (own >= 0) {
      const { words, perML } = terms[own]!;
      const factor = perML === null ? "" : perMLWords(task, determines, perML, plans[own]!, knowledge);
      return [`${what} = ${words} / ${portion}${factor || massWords(task, determines, knowledge)}.`];
    }
    const pair = differenceOf(plans, determines, same);
    if (pair === null) return [];
    const [all, part] = [terms[pair[0]]!.words, terms[pair[1]]!.words];
    return [`${what} = (${all} - ${part}) / ${portion}${massWords(task, determines, knowledge)}.`];
  });
}

interface Term {
  readonly words: string;
  /** mol/L of the sample for one mL read, by the nominal strength; null where more than one volume counts. */
  readonly perML: number | null;
}

/** What one titration finds, as a product or difference of volumes (mL) and strengths. */
function amountFound(task: Task, plan: StagePlan, v: string, knowledge: Knowledge): Term {
  const { titrant, backTitrant: back, detour } = plan;
  const kind = detour === null ? null : detourRecord(detour, knowledge).kind;
  const times = detour === null || detour.analytePerMetal === 1 ? "" : `${significant(detour.analytePerMetal)} × `;
  const single = (id: string, molPerL: number): Term => ({
    words: `${times}${v} × c(${id})`,
    perML: ((detour?.analytePerMetal ?? 1) * molPerL) / task.portion.volumeML,
  });
  const reading = back ?? titrant;
  if (kind === "surplus") {
    // A larger surplus takes more titrant, and leaves less of it to the back titrant.
    const taken = back ? `${v} - blank of the reagent alone` : `blank of the reagent alone - ${v}`;
    return { words: `${times}(${taken}) × c(${reading.id})`, perML: null };
  }
  if (back === null || plan.release !== null || kind === "conversion") return single(reading.id, reading.molPerL);
  const put = `${significant(excessML(task, plan), 3)} mL × c(${titrant.id})`;
  return { words: `${times}(${put} - ${v} × c(${back.id}))`, perML: null };
}

function perMLWords(
  task: Task,
  determines: readonly string[],
  perML: number,
  plan: StagePlan,
  knowledge: Knowledge,
): string {
  const reading = plan.backTitrant ?? plan.titrant;
  const mass = massOf(task, determines, knowledge);
  const inMass = mass === null ? "" : `, or ${significant(1000 * perML * mass)} mg/L`;
  return `; each mL of ${significant(reading.molPerL)} mol/L ${reading.id} is ${significant(1000 * perML)} mmol/L${inMass}`;
}

function massWords(task: Task, determines: readonly string[], knowledge: Knowledge): string {
  const mass = massOf(task, determines, knowledge);
  return mass === null ? "" : `; 1 mmol/L is ${significant(mass)} mg/L`;
}

/** g/mol of the one ion, in the form the brief names, per mole of its component; null for a sum. */
function massOf(task: Task, determines: readonly string[], knowledge: Knowledge): number | null {
  if (determines.length !== 1) return null;
  const shown = shownIon(task, determines[0]!, knowledge);
  const form = knowledge.components.get(determines[0]!)?.forms.find((f) => f.spelling === shown);
  return form ? form.molarMassGPerMol / form.componentsPerFormula : null;
}

/** The two titrations whose difference is the result. */
function differenceOf(
  plans: readonly StagePlan[],
  determines: readonly string[],
  same: (a: readonly string[], b: readonly string[]) => boolean,
): readonly [number, number] | null {
  for (const [i, all] of plans.entries())
    for (const [j, part] of plans.entries())
      if (i !== j && part.determines.every((ion) => all.determines.includes(ion))) {
        const rest = all.determines.filter((ion) => !part.determines.includes(ion));
        if (same(rest, determines)) return [i, j];
      }
  return null;
}
