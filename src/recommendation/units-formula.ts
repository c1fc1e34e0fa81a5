/**
 * Reads a chemical formula into atoms per formula unit, by element symbol: "CaCO3", "Fe2O3", "Al2(SO4)3", "CuSO4·5H2O" (also with "." or "*").
 * `elements` holds the known symbols. Null when the text is no formula: unknown symbol, unbalanced bracket, count of zero, nothing.
 */
export function readFormula(text: string, elements: ReadonlyMap<string, number>): ReadonlyMap<string, number> | null {
  const total = new Map<string, number>();
  for (const part of text.replace(/\s/g, "").split(/[·.*]/)) {
    const [, times = "", rest = ""] = /^(\d*)(.*)$/.exec(part) ?? [];
    const atoms = readPart(rest, elements);
    if (atoms === null || atoms.size === 0) return null;
    add(total, atoms, times === "" ? 1 : Number(times));
  }
  return [...total.values()].every((count) => count > 0) ? total : null;
}

/** Molar mass of a formula, g/mol, by atomic weights in g/mol. */
export function formulaMassGPerMol(
  formula: ReadonlyMap<string, number>,
  atomicWeights: ReadonlyMap<string, number>,
): number {
  return [...formula].reduce((sum, [element, count]) => sum + count * (atomicWeights.get(element) ?? Number.NaN), 0);
}

function readPart(text: string, elements: ReadonlyMap<string, number>): Map<string, number> | null {
  const stack: Map<string, number>[] = [new Map<string, number>()];
  const token = /([A-Z][a-z]?)(\d*)|([([])|([)\]])(\d*)/y;
  while (token.lastIndex < text.length) {
    const match = token.exec(text);
    if (match === null) return null;
    const [, symbol, count, open, , times] = match;
    const top = stack.at(-1);
    if (top === undefined) return null;
    if (symbol !== undefined) {
      if (!elements.has(symbol)) return null;
      add(top, new Map([[symbol, 1]]), count === "" ? 1 : Number(count));
    } else if (open !== undefined) stack.push(new Map<string, number>());
    else {
      const closed = stack.pop();
      const outer = stack.at(-1);
      if (closed === undefined || outer === undefined) return null;
      add(outer, closed, times === "" ? 1 : Number(times));
    }
  }
  return stack.length === 1 ? (stack[0] ?? null) : null;
}

function add(target: Map<string, number>, atoms: ReadonlyMap<string, number>, times: number): void {
  for (const [element, count] of atoms) target.set(element, (target.get(element) ?? 0) + times * count);
}
