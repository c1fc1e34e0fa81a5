/** The root of every fault that a caller can act on: a stable code, details for machines, and the cause where there is one. */
export class AppError extends Error {
  readonly code: string;
  readonly details: Readonly<Record<string, unknown>>;
  constructor(code: string, message: string, details: Readonly<Record<string, unknown>> = {}, cause?: unknown) {
    super(message, cause === undefined ? undefined : { cause });
    this.name = new.target.name;
    this.code = code;
    this.details = details;
  }
}

/** A data file that does not keep its schema: says the file and the JSON path. */
export class DataError extends AppError {
  constructor(file: string, path: string, message: string, cause?: unknown) {
    super("data", `${file} ${path}: ${message}`, { file, path }, cause);
  }
}

/** A rule that does not keep its schema, or whose own examples disagree with it: says the rule and the JSON path. */
export class RuleError extends AppError {
  constructor(rule: string, path: string, message: string, cause?: unknown) {
    super("rule", `${rule} ${path}: ${message}`, { rule, path }, cause);
  }
}

/** One fault of an input, at its place: a JSON path, what was expected there and what was found. */
export interface Fault {
  readonly path: string;
  readonly expected: string;
  readonly found: string;
}

/** An input that cannot be used: one fault per error, each at its field. */
export class InputError extends AppError {
  readonly faults: readonly Fault[];
  constructor(faults: readonly Fault[]) {
    super("input", faults.map((f) => `${f.path}: expected ${f.expected}, found ${f.found}`).join("\n"), { faults });
    this.faults = faults;
  }
}
