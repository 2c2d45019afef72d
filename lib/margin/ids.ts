/** Margin ids, in the order in which the trade would ask: wind, speed, glide, ground, air, sky, law, agreement. */
export const MARGIN_IDS = [
  'meanWind', 'gust', 'gustSpread', 'crosswind', 'tailwind', 'offAxis', 'forwardLaunch', 'forwardAloft', 'upperWind',
  'overTheBack', 'arrival', 'landingGradient', 'run', 'slope', 'thermal', 'cloudBase', 'storm', 'rain', 'rainChance',
  'visibility', 'daylight', 'pressureStep', 'sector', 'ridgeLift', 'agreement', 'stripWind', 'stripGust', 'stripCross',
  'stripTail', 'climbShear', 'towHeight', 'forwardAtRelease',
] as const;

export type MarginId = (typeof MARGIN_IDS)[number];

/** The four verdicts, from most to least permissive; `unknown` is said "cannot say". */
export type Verdict = 'within' | 'close' | 'unknown' | 'beyond';

export type MarginUnit = 'm/s' | 'm' | '°' | 'min' | 'J/kg' | 'mm' | '%' | 'hPa' | 'share' | 'h';

/** One line of a working. Terms in the margin's own unit carry their sign and add up to the spare; terms in other units are inputs. */
export interface Term {
  readonly term: string;
  readonly value: number;
  readonly unit: string;
  readonly origin: string;
}

/** A margin of one hour as one member of one source sees it. */
export interface Margin {
  readonly id: MarginId;
  /** What is left, in `unit`; null when unknown, or when there is no solution (then the status is beyond). */
  readonly spare: number | null;
  readonly limit: number | null;
  readonly demand: number | null;
  readonly unit: MarginUnit;
  readonly status: Verdict;
  /** Fields that were declared and missing, or out of range: why the status is unknown. */
  readonly missing: readonly string[];
  /** True when the source does not declare what this margin needs, and so has no vote on it. */
  readonly noVote: boolean;
}
