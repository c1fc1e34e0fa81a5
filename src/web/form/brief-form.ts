/** The brief as typed: every field is text, nothing is converted, so that nothing is lost when it comes back with faults. */
export interface BriefForm {
  readonly title: string;
  readonly analytes: readonly AnalyteRow[];
  readonly matrix: readonly MatrixRow[];
  readonly volumeML: string;
  readonly titrationVolumeML: string;
  readonly requirement: string;
  readonly avoid: readonly string[];
  readonly shelf: "usual" | "listed";
  readonly available: readonly string[];
  readonly detection: readonly string[];
  readonly heating: "yes" | "no";
  readonly buretteML: string;
  readonly temperatureC: string;
}

export interface MatrixRow {
  readonly ion: string;
  readonly value: string;
  readonly unit: string;
  readonly as: string;
}

export interface AnalyteRow extends MatrixRow {
  readonly report: "individual" | "sum";
}

export const FORM_ROWS = { analytes: 6, matrix: 60 } as const;

export const emptyRow: MatrixRow = { ion: "", value: "", unit: "mmol/L", as: "" };
export const emptyAnalyte: AnalyteRow = { ...emptyRow, report: "individual" };

/** A form nobody has typed in yet, with the defaults of the contract in place. */
export function emptyForm(): BriefForm {
  return {
    title: "",
    analytes: [emptyAnalyte],
    matrix: [emptyRow, emptyRow, emptyRow],
    volumeML: "50",
    titrationVolumeML: "100",
    requirement: "1.0",
    avoid: [],
    shelf: "usual",
    available: [],
    detection: ["visual"],
    heating: "yes",
    buretteML: "25",
    temperatureC: "25",
  };
}

type Body = Readonly<Record<string, unknown>>;

/** Reads a posted form body (urlencoded: text or list of text per name); an absent field is empty text. */
export function formFromBody(body: Body): BriefForm {
  const one = (name: string): string => list(name)[0] ?? "";
  const list = (name: string): readonly string[] => {
    const value = body[name];
    if (typeof value === "string") return [value];
    return Array.isArray(value) ? value.filter((v): v is string => typeof v === "string") : [];
  };
  const rows = (prefix: string, limit: number): readonly MatrixRow[] => {
    const [ions, values, units, as] = ["Ion", "Value", "Unit", "As"].map((field) => list(prefix + field));
    const count = Math.min(limit, Math.max(ions?.length ?? 0, values?.length ?? 0));
    return Array.from({ length: count }, (_, i) => ({
      ion: ions?.[i] ?? "",
      value: values?.[i] ?? "",
      unit: units?.[i] ?? "mmol/L",
      as: as?.[i] ?? "",
    }));
  };
  const reports = list("analyteReport");
  const analytes = rows("analyte", FORM_ROWS.analytes).map(
    (row, i): AnalyteRow => ({ ...row, report: reports[i] === "sum" ? "sum" : "individual" }),
  );
  return {
    title: one("title"),
    analytes: analytes.length > 0 ? analytes : [emptyAnalyte],
    matrix: rows("matrix", FORM_ROWS.matrix),
    volumeML: one("volumeML"),
    titrationVolumeML: one("titrationVolumeML"),
    requirement: one("requirement"),
    avoid: list("avoid"),
    shelf: one("shelf") === "listed" ? "listed" : "usual",
    available: list("available"),
    detection: list("detection"),
    heating: one("heating") === "no" ? "no" : "yes",
    buretteML: one("buretteML"),
    temperatureC: one("temperatureC"),
  };
}

/** Applies an edit button ("add-analyte", "add-matrix", "remove-analyte-0", "remove-matrix-2"); null when the action is none. */
export function editForm(form: BriefForm, action: string): BriefForm | null {
  if (action === "add-analyte")
    return { ...form, analytes: [...form.analytes, emptyAnalyte].slice(0, FORM_ROWS.analytes) };
  if (action === "add-matrix")
    return { ...form, matrix: [...form.matrix, emptyRow, emptyRow].slice(0, FORM_ROWS.matrix) };
  const remove = /^remove-(analyte|matrix)-(\d{1,2})$/.exec(action);
  if (!remove) return null;
  const index = Number(remove[2]);
  if (remove[1] === "matrix") return { ...form, matrix: form.matrix.filter((_, i) => i !== index) };
  const analytes = form.analytes.filter((_, i) => i !== index);
  return { ...form, analytes: analytes.length > 0 ? analytes : [emptyAnalyte] };
}

/** A row in which nothing was typed; such rows are passed over. */
export function isBlankRow(row: MatrixRow): boolean {
  return row.ion.trim() === "" && row.value.trim() === "" && row.as.trim() === "";
}
