/** A hazard sentence that always shows when its condition holds. Numbers and hours are data; the words are in the catalogue. */
export const CAUTION_IDS = [
  'storm', 'strongThermals', 'windAloft', 'landingGradient', 'windRising', 'windTurning', 'front', 'foehn', 'lowCloud',
  'rainNear', 'wet', 'localWind', 'lineDrift', 'noVote', 'thinAir', 'lightWind', 'disagree', 'oldForecast',
  'singleSource', 'noRunTime', 'cold', 'lowSun', 'lastLight', 'lowQualityGust', 'demo',
] as const;

export type CautionId = (typeof CAUTION_IDS)[number];

export interface Caution {
  readonly id: CautionId;
  /** The number behind it in `unit`, null where the caution has none. */
  readonly value: number | null;
  readonly unit: string | null;
  /** First and last hour it holds for, ISO 8601 UTC; null for the whole day. */
  readonly from: string | null;
  readonly to: string | null;
  /** What it is about where that is not plain: a source, a reference point. Only names this project owns. */
  readonly subject: string | null;
}
