import type { DevelopedStage } from "../methods/develop.ts";
import type { BufferChoice, BufferLook } from "../methods/optimise-buffer.ts";
import type { MaskChoice } from "../methods/optimise-masks.ts";
import { nearerEdge, type PHChoice, type PHLook } from "../methods/optimise-ph.ts";
import type { StageChoices } from "../methods/optimise.ts";
import type { WorkingRange } from "../methods/working-range.ts";
import type { ConditionDocument } from "./contract.ts";
import { figures, listed, reagentWords } from "./text-words.ts";

/** Conditions of one titration with the numbers behind each, as the document holds them; none where nothing was chosen. */
export function conditionsDocument(
  stage: DevelopedStage,
  range: WorkingRange | null,
  choices: StageChoices | null,
  ion: (id: string) => string,
): readonly ConditionDocument[] {
  if (choices === null || choices.pH === null || range === null) return [];
  const { pH, buffer, masks } = choices;
  return [
    {
      of: "pH",
      id: null,
      value: pH.chosen.pH,
      planned: pH.start.pH,
      statement: pHStatement(pH, range, stage, amountsMoved(choices)),
    },
    ...(buffer === null
      ? []
      : [
          {
            of: "buffer" as const,
            id: buffer.id,
            value: stage.plan.buffer.molPerL,
            planned: buffer.start.molPerL,
            statement: bufferStatement(buffer, stage),
          },
        ]),
    ...masks.map((mask) => ({
      of: "masking" as const,
      id: mask.agent,
      value: mask.chosenMolPerL,
      planned: mask.startMolPerL,
      statement: maskStatement(mask, stage, ion),
    })),
  ];
}

const expanded = (look: PHLook): string => `${figures(100 * look.expanded, 2)} %`;
const at = (look: PHLook, chosen: PHLook, range: WorkingRange): string =>
  `${expanded(look)} ${nearerEdge(look.pH, chosen.pH, range) ? "nearer the edge at" : "at"} pH ${figures(look.pH)}`;

/** Whether buffer or masks stand at other amounts than those with which the pH was chosen. */
const amountsMoved = ({ buffer, masks }: StageChoices): boolean =>
  (buffer !== null && buffer.chosen.molPerL !== buffer.start.molPerL) ||
  masks.some((mask) => mask.chosenMolPerL !== mask.startMolPerL);

function pHStatement(
  { chosen, start, why, next }: PHChoice,
  range: WorkingRange,
  stage: DevelopedStage,
  amountsMovedSince: boolean,
): string {
  const works =
    range.low === range.high ? "works at this pH only" : `works from ${figures(range.low)} to ${figures(range.high)}`;
  const others = [start, ...(next === null || next.pH === start.pH ? [] : [next])].filter((l) => l.pH !== chosen.pH);
  const beside = others.length === 0 ? "" : `, ${listed(others.map((look) => at(look, chosen, range)))}`;
  const reason = {
    published: `the pH in use for ${seen(stage)}, and no other is better by a real amount`,
    "as-planned":
      next === null ? "dye, buffer and masks leave no other to look at" : "no other is better by a real amount",
    "another-hangs-on-it": "kept, for the other titration hangs on this one",
    "nothing-else-serves": "at others more interferes or precipitates",
    "least-uncertainty":
      chosen.expanded <= start.expanded ? "the least expanded uncertainty clear of the edges" : "clear of the edges",
    milder: `as good with ${figures(stage.plan.buffer.molPerL)} mol/L of ${reagentWords(stage.plan.buffer.id)}`,
  }[why];
  return `pH ${figures(chosen.pH)}: ${works}; ${reason} (${amountsMovedSince ? "with the amounts first planned " : ""}${expanded(chosen)} here${beside}).`;
}

const seen = ({ plan }: DevelopedStage): string =>
  plan.indicator === null ? "this titration" : reagentWords(plan.indicator.id);

const moves = ({ pHDrop }: BufferLook): string =>
  Math.abs(pHDrop) < 0.005
    ? "the pH stays within 0.01"
    : `the pH ${pHDrop > 0 ? "falls" : "rises"} by ${Math.abs(pHDrop).toFixed(2)}`;

function bufferStatement({ id, chosen, less }: BufferChoice, { plan }: DevelopedStage): string {
  const without = less === null ? "" : `; with ${figures(less.molPerL)} mol/L ${moves(less)}`;
  const words = `${reagentWords(id)} ${figures(plan.buffer.molPerL)} mol/L: ${moves(chosen)} until the end point${without}`;
  return `${words}.`;
}

function maskStatement(mask: MaskChoice, { plan }: DevelopedStage, ion: (id: string) => string): string {
  const { agent, chosenMolPerL, startMolPerL, log10Margin, why } = mask;
  const masked = listed([...new Set(plan.masking.filter((m) => m.agent === agent).flatMap((m) => m.masks))].map(ion));
  const head = `${reagentWords(agent)} ${figures(chosenMolPerL)} mol/L`;
  const usual = chosenMolPerL < startMolPerL ? ` (usual: ${figures(startMolPerL)})` : "";
  if (mask.ion !== null && mask.ofRecord !== null)
    return `${head}${usual}: ${ion(mask.ion)} is at ${figures(mask.ofRecord, 2)} of the level that the usual amount is reported to hold.`;
  if (why === "record") return `${head}: the usual amount for ${masked}.`;
  const margin =
    mask.ion === null || log10Margin === null
      ? ""
      : Math.abs(log10Margin) < 0.05
        ? `: holds ${ion(mask.ion)} just so far that it counts for nothing`
        : log10Margin > 0
          ? `: holds ${ion(mask.ion)} with ${log10Margin.toFixed(1)} in log alpha to spare`
          : `: lacks ${(-log10Margin).toFixed(1)} in log alpha for ${ion(mask.ion)} to count for nothing`;
  const limit = {
    margin: "",
    "level-on-record": "",
    needed: "; a fifth over what is bound",
    "least-usual": "; less is in no recipe",
    "as-planned": "",
  }[why];
  return `${head}${usual}${margin}${limit}.`;
}
