import { DataError } from "../errors.ts";
import type { PrintedValue } from "./equilibria-rows.ts";
import type { SingleValue } from "./equilibria-schema.ts";
import type { ConstantRecord, EnthalpyRecord, Provenance } from "./knowledge.ts";
import { mediumOfFootnote } from "./media.ts";
import { assumedUncertainty, printedUncertainty } from "./uncertainty.ts";

/** A value of the compilation `source`, as printed (see `printedSchema`), with its standard uncertainty and background. */
export function printedRecord(printed: PrintedValue, source: string): ConstantRecord {
  const [record, value, temperatureC, ionicStrengthMolPerL, error, footnote, parentheses] = printed;
  const doubtful = parentheses === 1;
  const uncertainty = printedUncertainty(value, error, doubtful);
  const medium = mediumOfFootnote(footnote);
  return {
    log10K: Number(value),
    ionicStrengthMolPerL,
    temperatureC,
    ...(medium === undefined ? {} : { medium }),
    uncertainty: uncertainty.value,
    uncertaintyStated: uncertainty.stated,
    doubtful,
    provenance: printedProvenance(source, record, doubtful),
  };
}

/** An enthalpy of the compilation `source`, kJ/mol. */
export function printedEnthalpy(printed: PrintedValue, source: string): EnthalpyRecord {
  const [record, value, temperatureC, ionicStrengthMolPerL, , , parentheses] = printed;
  const doubtful = parentheses === 1;
  return {
    kJPerMol: Number(value),
    ionicStrengthMolPerL,
    temperatureC,
    doubtful,
    provenance: printedProvenance(source, record, doubtful),
  };
}

/** A value from elsewhere; `sources` holds the ids listed. Throws DataError (file, path) for a source that is not. */
export function singleRecord(
  single: SingleValue,
  sources: ReadonlySet<string>,
  file: string,
  path: string,
): ConstantRecord {
  if (!sources.has(single.source)) throw new DataError(file, path, `unknown source "${single.source}"`);
  const assumed = assumedUncertainty(single.basis, single.confidence);
  return {
    log10K: single.value,
    ionicStrengthMolPerL: single.ionicStrengthMolPerL,
    temperatureC: single.temperatureC,
    ...(single.medium === undefined ? {} : { medium: single.medium }),
    uncertainty: single.uncertainty ?? assumed.value,
    uncertaintyStated: single.uncertainty !== undefined,
    doubtful: false,
    provenance: {
      source: single.source,
      ...(single.record === undefined ? {} : { record: single.record }),
      ...(single.where === undefined ? {} : { where: single.where }),
      basis: single.basis,
      confidence: single.confidence,
    },
  };
}

function printedProvenance(source: string, record: string, doubtful: boolean): Provenance {
  return { source, record, basis: "read", confidence: doubtful ? "low" : "high" };
}
