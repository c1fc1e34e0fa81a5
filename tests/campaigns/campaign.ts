/** What a campaign is asked to do. */
export interface CampaignOptions {
  readonly seed: number;
  /** Positions of the work list to do: `count` from `from` on; the list holds the acceptance briefs, then the generated ones. */
  readonly from: number;
  readonly count: number | null; // null: to the end
  readonly generated: number; // how many generated briefs the list holds
  /** Part `part` of `parts` of the list, so that several processes share the work; the first part is 1. */
  readonly share: { readonly part: number; readonly parts: number };
  readonly practice: string | null; // file of acceptance cases; null: the copy of the tests
  readonly out: string | null; // file for one JSON line a brief; briefs that stand in it already are not done again
  readonly draws: number; // perturbation: draws of all constants
  readonly print: (line: string) => void; // progress
}

/** What a campaign does when nothing is asked for. */
export const DEFAULTS: CampaignOptions = {
  seed: 20261201,
  from: 0,
  count: null,
  generated: 500,
  share: { part: 1, parts: 1 },
  practice: null,
  out: null,
  draws: 200,
  print: () => undefined,
};

/** What a campaign found, and whether its bounds hold. */
export interface CampaignReport {
  readonly figures: Readonly<Record<string, unknown>>;
  readonly holds: boolean;
  readonly lines?: readonly string[]; // a table to print before the figures
}

/** One campaign: prints progress only, returns figures and whether its bounds hold. */
export interface Campaign {
  readonly name: string;
  readonly about: string;
  readonly run: (options: CampaignOptions) => CampaignReport | Promise<CampaignReport>;
}
