/** What a campaign found, and whether its bounds hold. */
export interface CampaignReport {
  readonly figures: Readonly<Record<string, unknown>>;
  readonly holds: boolean;
}

/** One campaign: prints nothing itself, returns figures and whether its bounds hold. */
export interface Campaign {
  readonly name: string;
  readonly about: string;
  readonly run: (seed: number) => CampaignReport | Promise<CampaignReport>;
}
