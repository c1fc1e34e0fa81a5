import { readFileSync } from "node:fs";
import { z } from "zod";
import { PREPARATION_STEPS } from "../../src/recommendation/contract.ts";
import type { AcceptedMethod, PracticeCase } from "./cases.ts";

const waySchema = z.strictObject({
  modes: z.array(z.enum(["direct", "back", "displacement"])).min(1),
  titrant: z.string(),
  backTitrant: z.string().optional(),
  pH: z.tuple([z.number(), z.number()]),
  indicators: z.array(z.string()).min(1),
  buffers: z.array(z.string()),
  preparation: z.array(z.enum(PREPARATION_STEPS)).default([]),
  source: z.strictObject({ cite: z.string().min(1), basis: z.enum(["read", "partly read", "memory"]) }),
});

const rowSchema = z.strictObject({
  ion: z.string(),
  anion: z.string(), // of the plain solution
  ways: z.array(waySchema).min(1),
  interferents: z.array(z.string()),
});

export type IonPractice = z.output<typeof rowSchema>;
export type UsualWay = z.output<typeof waySchema>;

/** How each ion is titrated by itself, as handbooks and methods give it. Throws when the file does not keep its schema. */
export function ionPractice(): readonly IonPractice[] {
  const file = new URL("ion-practice.json", import.meta.url);
  return z.array(rowSchema).parse(JSON.parse(readFileSync(file, "utf8")));
}

/** The plain brief: the ion alone at 8 mmol/L beside a harmless anion, 25 mL made up to 100 mL, 1 % (invented). */
export function plainBrief(row: IonPractice): PracticeCase["brief"] {
  return {
    title: `${row.ion} alone, invented`,
    analytes: [{ ion: row.ion, concentration: { value: 8, unit: "mmol/L" } }],
    matrix: [{ component: row.anion, concentration: { value: 24, unit: "mmol/L" } }],
    portion: { volumeML: 25, titrationVolumeML: 100 },
    requirement: { relativeExpandedUncertaintyPercent: 1 },
  };
}

/** A usual way as an accepted method. A chelate that lends the dye its metal may be called direct or displacement. */
export function acceptedWay(ion: string, way: UsualWay): AcceptedMethod {
  return {
    modes: [...way.modes],
    titrants: [way.titrant],
    backTitrants: way.backTitrant === undefined ? [] : [way.backTitrant],
    stages: [
      {
        determines: [ion],
        titrants: [],
        pH: way.pH,
        indicators: way.indicators,
        detections: [],
        buffers: [],
        masking: {},
        preparation: way.preparation,
        anyOf: [],
      },
    ],
  };
}
