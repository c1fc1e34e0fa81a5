import type { IonMap, MappedMethod, MapStatus, MethodMap } from "./contract.ts";
import { SINGLE_MODES } from "./contract.ts";
import { MAP_LEVEL_MMOL_PER_L, MAP_PORTION, MAP_REQUIREMENT_PERCENT } from "./method-map.ts";

/** One sign and one word for each standing of a mode; the sign reads in print and without colour. */
export const STATUS_WORDS: Readonly<Record<MapStatus, readonly [sign: string, word: string]>> = {
  open: ["+", "open"],
  "open-with-reservations": ["(+)", "open, with reservations"],
  closed: ["-", "closed"],
  unknown: ["?", "not known"],
};

/** The question every ion of the map is put to, in one sentence. */
export const MAP_QUESTION = `${MAP_LEVEL_MMOL_PER_L} mmol/L of the ion alone, its counter-ion inert, ${MAP_PORTION.volumeML} mL made up to ${MAP_PORTION.titrationVolumeML} mL, ${MAP_REQUIREMENT_PERCENT} % expanded uncertainty wanted, every end point and heating allowed (invented)`;

/** The map as lines of text: one ion a line where there are several, everything about it where there is one. */
export function methodMapText(map: MethodMap): string {
  const only = map.ions.length === 1 ? map.ions[0] : undefined;
  return only ? ionText(only) : tableText(map);
}

function tableText(map: MethodMap): string {
  const open = map.ions.filter((i) => i.status.startsWith("open")).length;
  const cells = (ion: IonMap): string[] => [
    ion.ion,
    ...ion.modes.map((mode) => STATUS_WORDS[mode.status][0]),
    ion.modes.flatMap((mode) => mode.methods.slice(0, 1)).map(shortText)[0] ?? shortReason(ion),
  ];
  const rows = [["ion", ...SINGLE_MODES, "best, or why not"], ...map.ions.map(cells)];
  const widths = rows[0]!.map((_, column) => Math.max(...rows.map((row) => row[column]?.length ?? 0)));
  return [
    `Asked of each ion: ${MAP_QUESTION}.`,
    `Open for ${open} of ${map.ions.length} ions. ${Object.values(STATUS_WORDS)
      .map(([sign, word]) => `${sign} ${word}`)
      .join(", ")}.`,
    ...map.failed.map((f) => `Not worked out: ${f.ion}: ${f.message}`),
    "",
    ...rows.map((row) =>
      row.map((cell, column) => (column === row.length - 1 ? cell : cell.padEnd(widths[column]!))).join("  "),
    ),
    "",
  ].join("\n");
}

const shortText = (method: MappedMethod): string =>
  `${method.titrant.id}${method.backTitrant ? `, back with ${method.backTitrant.id}` : ""}, pH ${method.pH}, ${
    method.indicator ?? method.electrode ?? method.detection
  }: ${method.relativeExpandedUncertaintyPercent.toPrecision(2)} %`;

const shortReason = (ion: IonMap): string => ion.modes.flatMap((mode) => mode.reasons)[0]?.statement ?? "";

function ionText(ion: IonMap): string {
  const lines = [`${ion.ion}, ${ion.name}: ${STATUS_WORDS[ion.status][1]}`, `Asked: ${MAP_QUESTION}.`];
  for (const mode of ion.modes) {
    const [sign, word] = STATUS_WORDS[mode.status];
    lines.push("", `${sign} ${mode.mode}: ${word} (${mode.tried} titrations worked out, ${mode.judged} judged)`);
    for (const method of mode.methods)
      lines.push(
        `  ${method.summary}`,
        `    bias ${method.biasPercent.toFixed(2)} %, expanded uncertainty ${method.relativeExpandedUncertaintyPercent.toPrecision(2)} %${
          method.log10ConditionalK === null ? "" : `, log K' ${method.log10ConditionalK.toFixed(1)}`
        }`,
        ...method.reservations.map((r) => `    Reservation: ${r}`),
        ...method.cautions.map((c) => `    Caution: ${c}`),
      );
    if (mode.nearest !== null) lines.push(`  Nearest: ${mode.nearest}`);
    for (const reason of mode.reasons) lines.push(`  ${reason.statement}${reason.rule ? ` [${reason.rule}]` : ""}`);
  }
  return `${lines.join("\n")}\n`;
}
