import { readFileSync } from "node:fs";
import ejs from "ejs";
import { AppError } from "../../errors.ts";
import { Markup, escapeHtml } from "./markup.ts";

const VIEWS = new URL("../../../views/", import.meta.url);
const compiled = new Map<string, ejs.TemplateFunction>();
const wrappers = new WeakMap<object, object>();

/** Escapes what a view prints; anything but a string or our own markup is a fault of the view (EJS would print "NaN" or nothing). */
export function printable(value: unknown): string {
  if (value instanceof Markup) return value.html;
  if (typeof value === "string") return escapeHtml(value);
  throw new AppError("view", `a view prints ${value === undefined ? "a missing name" : `a ${typeof value}`}`);
}

/** Wraps a view model so that reading a name it does not have throws, at any depth. */
export function strictModel<T>(model: T): T {
  if (typeof model !== "object" || model === null || model instanceof Markup) return model;
  const known = wrappers.get(model);
  if (known) return known as T;
  const wrapper = new Proxy(model, {
    get(target, name): unknown {
      if (typeof name === "symbol") return Reflect.get(target, name);
      if (!(name in target)) throw new AppError("view", `the view model has no "${name}"`);
      const value: unknown = Reflect.get(target, name);
      return typeof value === "function" ? value.bind(wrapper) : strictModel(value);
    },
  });
  wrappers.set(model, wrapper);
  return wrapper;
}

/**
 * Renders views/NAME.ejs with the model as `it.view`, in strict mode (no `with`).
 * Throws AppError("view") for a missing name and for anything printed that is not text.
 */
export function renderView(name: string, view: object): string {
  let template = compiled.get(name);
  if (!template) {
    const file = new URL(`${name}.ejs`, VIEWS);
    template = ejs.compile(readFileSync(file, "utf8"), {
      filename: file.pathname,
      root: VIEWS.pathname,
      strict: true,
      localsName: "it",
      cache: true,
      escape: printable,
    });
    compiled.set(name, template);
  }
  return template({ view: strictModel(view) });
}
