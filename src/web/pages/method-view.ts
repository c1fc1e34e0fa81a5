import type { Recommendation, RecommendedMethod, StageDocument } from "../../recommendation/contract.ts";
import { colourMarkup } from "../format/colour-words.ts";
import type { Names } from "../format/names.ts";
import { amount, fixed, percent, significant } from "../format/numbers.ts";
import {
  END_POINT_BASIS_WORDS,
  MASKING_BASIS_WORDS,
  MODE_WORDS,
  PREPARATION_WORDS,
  VIA_WORDS,
  wordsOf,
} from "../format/words.ts";
import { Markup, joinMarkup } from "../render/markup.ts";

/** One line of the bench conditions: what, how much, and in the margin where it comes from. */
export interface BenchRow {
  readonly label: string;
  readonly lines: readonly Markup[];
  readonly notes: readonly Markup[];
}

export interface StageView {
  readonly heading: Markup;
  readonly rows: readonly BenchRow[];
}

const text = (value: string): Markup => joinMarkup([value]);
const list = (items: readonly Markup[]): Markup => joinMarkup(items, ", ");

/** The bench conditions of each titration of a method, in order. */
export function stageViews(
  method: RecommendedMethod,
  brief: Recommendation["brief"],
  names: Names,
): readonly StageView[] {
  return method.stages.map((stage, i) => ({
    heading: joinMarkup([
      method.stages.length > 1 ? `Titration ${i + 1}: ` : "",
      stage.determines.length === 0 ? "first reading, discarded" : list(stage.determines.map((d) => names.name(d))),
      `, ${wordsOf(MODE_WORDS, stage.mode)}`,
    ]),
    rows: benchRows(method, stage, brief, names),
  }));
}

function benchRows(
  method: RecommendedMethod,
  stage: StageDocument,
  brief: Recommendation["brief"],
  names: Names,
): readonly BenchRow[] {
  const titrant = stage.titrant ?? method.titrant;
  const back = stage.mode === "direct" ? null : (stage.backTitrant ?? method.backTitrant);
  const rows: BenchRow[] = [];
  const add = (label: string, lines: readonly Markup[], notes: readonly Markup[] = []): void => {
    if (lines.length > 0) rows.push({ label, lines, notes });
  };
  const reagent = (r: { id: string; molPerL: number }): Markup =>
    joinMarkup([names.link(r.id), `, ${amount(r.molPerL)}`]);

  add("Portion", [
    text(
      `${significant(brief.portion.volumeML, 4)} mL, made up to ${significant(brief.portion.titrationVolumeML, 4)} mL`,
    ),
  ]);
  const constants = stage.conditional.map((c) =>
    joinMarkup([names.set("log K'"), " of ", names.name(c.metal), ` ${fixed(c.log10ConditionalK, 2)}`]),
  );
  add(
    "Titrant",
    [reagent(titrant)],
    constants.length === 0
      ? []
      : [
          joinMarkup([
            ...constants.slice(0, 4).flatMap((c, i) => (i === 0 ? [c] : ["; ", c])),
            new Markup(' <a href="#constants-used">constants</a>'),
          ]),
        ],
  );
  if (back) add("Back titrant", [reagent(back)]);
  add(
    "pH",
    [text(fixed(stage.pH.target, 1))],
    [text(rangeWords(method.meetsRequirement, stage.pH)), ...dropNotes(stage.pH.drop)],
  );
  add(
    "Buffer",
    [reagent(stage.buffer)],
    stage.ionicStrength.molPerL === null
      ? []
      : [
          text(
            `ionic strength ${amount(stage.ionicStrength.molPerL, 2)}${stage.ionicStrength.outOfModelRange ? ", beyond the range of the model" : ""}`,
          ),
        ],
  );
  if (stage.indicator) {
    const [before, after] = stage.indicator.colourChange;
    add(
      "Indicator",
      [joinMarkup([names.link(stage.indicator.id), `, ${amount(stage.indicator.molPerL, 2)}`])],
      [text(`${stage.indicator.class} dye`)],
    );
    add(
      "Colour change",
      [joinMarkup(["from ", colourMarkup(before, names.set), " to ", colourMarkup(after, names.set)])],
      stage.endPoint.indicatorMetal === null
        ? []
        : [joinMarkup([names.name(stage.endPoint.indicatorMetal), " holds the dye until then"])],
    );
  }
  if (stage.detection !== "visual") add("Read with", [text(readWith(stage))], readingNotes(stage));
  add(
    "Masking",
    stage.masking.map((m) =>
      joinMarkup([
        names.link(m.agent),
        `, ${amount(m.molPerL, 2)}, for `,
        list(m.masks.map((c) => names.name(c))),
        ` ${wordsOf(VIA_WORDS, m.via)}`,
      ]),
    ),
    maskingNotes(stage, names),
  );
  const purposes = (entries: StageDocument["auxiliary"]): Markup[] =>
    entries.map((a) => joinMarkup([names.link(a.id), `, ${amount(a.molPerL, 2)}: `, names.set(a.purpose)]));
  add("Also present", purposes(stage.auxiliary));
  add("Added", purposes(stage.added));
  add(
    "Steps, in order",
    stage.preparation.map((p) => text(wordsOf(PREPARATION_WORDS, p))),
  );
  const { removed, separation, carried } = stage.vessel; // chelates and excess titrant stand among what is added
  if (removed.length > 0)
    add(
      "Removed before",
      [list(removed.map((c) => names.name(c)))],
      separation.map((s) =>
        names.set(
          `${s.takes === "analyte" ? "the analyte is taken out" : `${s.ions.join(", ")} taken out`} by ${s.kind}: ${s.step} (${s.source}; ${s.basis})`,
        ),
      ),
    );
  if (carried)
    add("Left from before", [
      joinMarkup([
        list(carried.metals.map((c) => names.name(c))),
        `, with ${amount(carried.titrantMolPerL)} of titrant`,
      ]),
    ]);
  add(
    "Conditions chosen",
    stage.conditions.map((c) => names.set(c.statement)),
  );
  if (stage.titreML !== null)
    add(
      "Expected titre",
      [text(`${fixed(stage.titreML, 2)} mL`)],
      [text(`burette ${significant(brief.laboratory.buretteML, 3)} mL`)],
    );
  add("End point lies at", endPointLines(stage), [text(wordsOf(END_POINT_BASIS_WORDS, stage.endPoint.basis))]);
  return rows;
}

/** What stands beside the masks: on what they rest, how firmly they hold, and how they are added. */
function maskingNotes(stage: StageDocument, names: Names): readonly Markup[] {
  const bases = [...new Set(stage.masking.map((m) => wordsOf(MASKING_BASIS_WORDS, m.basis)))].map(text);
  const held = stage.masking.flatMap((m) =>
    m.chemistry.masked
      .filter((c) => c.titratedFraction !== null)
      .map((c) =>
        joinMarkup([
          names.name(c.ion),
          c.log10Alpha === null ? ": " : `: log α ${fixed(c.log10Alpha, 1)}, `,
          `${percent(100 * Math.max(0, c.titratedFraction ?? 0))} titrated`,
        ]),
      ),
  );
  const orders = [...new Set(stage.masking.flatMap((m) => m.practice.flatMap((p) => p.order ?? [])))].map((order) =>
    joinMarkup(["Order: ", names.set(order)]),
  );
  return [...bases, ...held, ...orders];
}

/** Where the requirement holds, in words. */
function rangeWords(meets: boolean, { low, high }: StageDocument["pH"]): string {
  if (!meets) return "the requirement is kept at no pH";
  if (fixed(low, 1) === fixed(high, 1)) return "works at this pH only";
  return `works from ${fixed(low, 1)} to ${fixed(high, 1)}`;
}

/** A shift of the pH that a meter shows. */
const SEEN_PH = 0.02;

/** That the pH of the plan is the one at the end point, where protons set free bring it there. */
const dropNotes = (drop: number | null): readonly Markup[] =>
  drop === null || Math.abs(drop) < SEEN_PH
    ? []
    : [text(`the pH at the end point; ${drop > 0 ? "higher" : "lower"} by ${fixed(Math.abs(drop), 2)} at the start`)];

/** The instrument that finds the end, in words. */
function readWith(stage: StageDocument): string {
  const { electrode, wavelengthNm } = stage.endPoint;
  if (stage.detection === "electrode") return electrode?.name ?? "an electrode";
  return `a photometer${wavelengthNm ? `, ${wavelengthNm.join(" to ")} nm` : "; no wavelength is on record"}${stage.indicator ? "" : ", the colour of the complex itself"}`;
}

function readingNotes(stage: StageDocument): readonly Markup[] {
  const { electrode } = stage.endPoint;
  if (electrode === null) return [];
  return [
    text(
      `${fixed(electrode.jumpMV, 0)} mV from 99 to 101 % of the volume, read to ${significant(electrode.readingMV, 2)} mV`,
    ),
    text(`slope ${fixed(electrode.slopeMVPerDecade, 0)} mV a decade`),
  ];
}

function endPointLines(stage: StageDocument): readonly Markup[] {
  const { pM, pMEquivalence, bandPM, sharpnessPercent } = stage.endPoint;
  if (pM === null) return [];
  const equivalence = pMEquivalence === null ? "" : `; equivalence at ${fixed(pMEquivalence, 2)}`;
  const sharpness = sharpnessPercent === null ? "" : `, which is ±${percent(sharpnessPercent)} of the titre`;
  return [text(`pM ${fixed(pM, 2)} ± ${fixed(bandPM, 2)}${sharpness}${equivalence}`)];
}
