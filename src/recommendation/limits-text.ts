import type { MethodLimits } from "./contract.ts";
import { LIMIT_END_WORDS } from "./limit-words.ts";
import { bullet, section, wrap } from "./text-layout.ts";
import { figures, listed } from "./text-words.ts";

const level = (molPerL: number): string => (molPerL === 0 ? "none" : `${figures(molPerL)} mol/L`);

/** Tolerance limits as lines of text: what is there, what is borne with and without the masking, and what ends it. */
export function limitsText({ method, limits, without }: MethodLimits): string {
  const rows = limits.map((l) => {
    const borne =
      l.limitMolPerL === 0
        ? "not even a trace is borne"
        : `${l.endsBy === "none" ? "over " : ""}${level(l.limitMolPerL)} is borne`;
    const masking = l.withMasking ? "" : " without its masking";
    const end = l.limitMolPerL === 0 ? "the requirement is missed anyway" : LIMIT_END_WORDS[l.endsBy];
    return bullet(`${l.component}: ${level(l.presentMolPerL)} is there, ${borne}${masking}; ${end}`);
  });
  return [
    ...wrap(`Tolerance limits, as total in the sample: ${method.summary}`, ""),
    "",
    ...section("Levels", rows),
    ...(without.length === 0
      ? []
      : ["", ...wrap(`No limit of their own: ${listed(without)} (charge only, or separated first).`, "")]),
    "",
  ].join("\n");
}
