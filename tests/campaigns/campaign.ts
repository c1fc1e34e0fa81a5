/** One campaign: prints nothing itself, returns figures and whether its bounds hold. */
export interface Campaign {
  readonly name: string;
  readonly about: string;
  readonly run: (seed: number) => { readonly figures: Readonly<Record<string, unknown>>; readonly holds: boolean };
}
