import { listed } from "./text-words.ts";

interface Said {
  readonly rule: string;
  readonly statement: string;
  readonly facts: Readonly<Record<string, unknown>>;
}

/**
 * Words of rules, those of one rule that differ only in the component they name put into one: "That triethanolamine holds Fe3+ and
 * Al3+ is reported practice". A statement that begins with its component stays alone: its verb would not fit two.
 */
export function mergedStatements<T extends Said>(said: readonly T[]): (T & { readonly statement: string })[] {
  const merged = new Map<string, { first: T; template: string | null; components: string[] }>();
  for (const one of said) {
    const { component } = one.facts;
    const inside = typeof component === "string" && one.statement.indexOf(component) > 0;
    const template = inside ? one.statement.replaceAll(component, "{}") : null;
    const key = `${one.rule} ${template ?? one.statement}`;
    const known = merged.get(key);
    if (!known) merged.set(key, { first: one, template, components: inside ? [component] : [] });
    else if (inside && !known.components.includes(component)) known.components.push(component);
  }
  return [...merged.values()].map(({ first, template, components }) =>
    template === null ? first : { ...first, statement: template.replaceAll("{}", listed(components)) },
  );
}
