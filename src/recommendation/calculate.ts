import { z } from "zod";
import type {
  CurveAnswer,
  CurveRequest,
  EquilibriumAnswer,
  EquilibriumRequest,
} from "../chemistry/calculators/types.ts";
import type { Knowledge } from "../constants/knowledge.ts";
import { type Fault, InputError } from "../errors.ts";
import { calculateCurve } from "../chemistry/calculators/curve.ts";
import { calculateEquilibrium } from "../chemistry/calculators/equilibrium.ts";
import { readComponent } from "./brief.ts";
import { describeFound, jsonPath, shapeFaults } from "./contract-faults.ts";

const amount = z.number().min(0).max(60);
const amounts = z
  .record(z.string().min(1).max(100), amount)
  .refine((of) => !("H+" in of), "no H+ here: how acid the solution is, pH or log10H says");
const constants = z
  .array(
    z.strictObject({
      components: z.record(z.string().min(1).max(100), z.int().min(-20).max(20)),
      log10Beta: z.number().min(-200).max(200),
    }),
  )
  .max(500);
const acidity = { pH: z.number().min(-2).max(16).optional(), log10H: z.number().min(-20).max(2).optional() };
const conditions = {
  temperatureC: z.number().min(0).max(100).optional(),
  ionicStrengthMolPerL: z.union([z.literal("auto"), z.number().min(0).max(20)]).optional(),
  free: amounts.optional(),
  solids: z.boolean().optional(),
  constants: constants.optional(),
};

/** A question to the equilibrium calculator, as the contract writes it. */
export const equilibriumRequestSchema = z.strictObject({
  ...acidity,
  ...conditions,
  titrant: z.string().min(1).max(100).optional(),
  totals: amounts,
});

/** A question to the curve calculator, as the contract writes it; volumes in mL. */
export const curveRequestSchema = z.strictObject({
  ...acidity,
  ...conditions,
  sample: z.strictObject({ volumeML: z.number().min(0.001).max(10_000), totals: amounts }),
  titrant: z.strictObject({ id: z.string().min(1).max(100), molPerL: z.number().min(1e-9).max(10) }),
  follow: z.string().min(1).max(100),
  volumesML: z.array(z.number().min(0).max(100_000)).min(1).max(2000),
});

/**
 * Answers a question to the equilibrium calculator given as JSON: solves the solution at fixed acidity.
 * Without constants of its own the question is answered from the knowledge base, and its names are read as in a brief.
 * Throws InputError with one fault per error.
 */
export function answerEquilibrium(json: unknown, knowledge: Knowledge): EquilibriumAnswer {
  const shaped = parse(equilibriumRequestSchema, json);
  if (shaped.constants !== undefined) return calculateEquilibrium(shaped, knowledge);
  const names = new Names(knowledge);
  const request: EquilibriumRequest = {
    ...shaped,
    totals: names.amounts(shaped.totals, ["totals"]),
    free: shaped.free && names.amounts(shaped.free, ["free"]),
    titrant: shaped.titrant && names.one(shaped.titrant, ["titrant"]),
  };
  names.throwFaults();
  return calculateEquilibrium(request, knowledge);
}

/**
 * Answers a question to the curve calculator given as JSON: pM of the followed ion at each volume.
 * Names as in `answerEquilibrium`. Throws InputError with one fault per error.
 */
export function answerCurve(json: unknown, knowledge: Knowledge): CurveAnswer {
  const shaped = parse(curveRequestSchema, json);
  const names = new Names(knowledge);
  const own = shaped.constants !== undefined;
  const request: CurveRequest = own
    ? shaped
    : {
        ...shaped,
        sample: { ...shaped.sample, totals: names.amounts(shaped.sample.totals, ["sample", "totals"]) },
        free: shaped.free && names.amounts(shaped.free, ["free"]),
        titrant: { ...shaped.titrant, id: names.one(shaped.titrant.id, ["titrant", "id"]) },
        follow: names.one(shaped.follow, ["follow"]),
      };
  if (!((request.sample.totals[request.follow] ?? 0) > 0))
    names.faults.push({
      path: "$.follow",
      expected: `one of the components in the sample: ${Object.keys(request.sample.totals).join(", ")}`,
      found: describeFound(shaped.follow),
    });
  names.throwFaults();
  return calculateCurve(request, knowledge);
}

function parse<T extends { readonly pH?: number | undefined; readonly log10H?: number | undefined }>(
  schema: z.ZodType<T>,
  json: unknown,
): T {
  const faults = [...shapeFaults(schema, json)];
  const shaped = schema.safeParse(json);
  if (!shaped.success) throw new InputError(faults);
  const { pH, log10H } = shaped.data;
  if ((pH === undefined) === (log10H === undefined))
    throw new InputError([
      { path: "$.pH", expected: 'one of "pH" and "log10H"', found: pH === undefined ? "neither" : "both" },
    ]);
  return shaped.data;
}

/** Reads the component names of a question, gathering faults. */
class Names {
  readonly faults: Fault[] = [];
  readonly #knowledge: Knowledge;
  constructor(knowledge: Knowledge) {
    this.#knowledge = knowledge;
  }

  one(text: string, path: readonly PropertyKey[]): string {
    return readComponent(text, path, this.#knowledge, this.faults)?.component.id ?? text;
  }

  amounts(written: Readonly<Record<string, number>>, path: readonly PropertyKey[]): Record<string, number> {
    const read: Record<string, number> = {};
    for (const [text, molPerL] of Object.entries(written)) {
      const found = readComponent(text, [...path, text], this.#knowledge, this.faults);
      if (found === null) continue;
      const { id } = found.component;
      if (id === "H+")
        this.faults.push({
          path: jsonPath([...path, text]),
          expected: "no H+ or OH- here: how acid the solution is, pH or log10H says",
          found: describeFound(text),
        });
      if (read[id] !== undefined)
        this.faults.push({ path: jsonPath([...path, text]), expected: "each component once", found: `${id} again` });
      read[id] = molPerL * found.form.componentsPerFormula;
    }
    return read;
  }

  throwFaults(): void {
    if (this.faults.length > 0) throw new InputError(this.faults);
  }
}
export type { CurveAnswer, CurveRequest, EquilibriumAnswer, EquilibriumRequest };
