/** A document is never changed once written. */
export type Immutable<T> = T extends readonly (infer U)[]
  ? T extends readonly [unknown, ...unknown[]]
    ? { readonly [K in keyof T]: Immutable<T[K]> }
    : readonly Immutable<U>[]
  : T extends object
    ? { readonly [K in keyof T]: Immutable<T[K]> }
    : T;
