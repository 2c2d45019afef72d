/** The front of an invented day: when it passes, how far the air ahead and behind it has changed, and its rain. */
import { HOUR_MS } from '../../time.ts';
import { dateSwing, ease } from './date-share.ts';
import type { InventedRegion } from './scenario.ts';
import type { SunDay } from './sun-day.ts';

export interface Passage {
  /** 0 well before the front to 1 as it arrives: wind freshens, cloud thickens, pressure falls. */
  readonly ahead: (atMs: number) => number;
  /** 0 until it passes, 1 from half an hour later, easing back to 0 through the evening. */
  readonly behind: (atMs: number) => number;
  /** Largest rain of the two hours that touch the instant, mm. */
  readonly rainMm: (atMs: number) => number;
  /** Whether rain falls in either of those hours. */
  readonly isWet: (atMs: number) => boolean;
}

const NONE: Passage = { ahead: () => 0, behind: () => 0, rainMm: () => 0, isWet: () => false };

/** Rain of the first, second, … hour after the passage, as shares of the front's rain. */
const RAIN_BY_HOUR = [1, 0.8, 0.4, 0.25];
/** The passage wanders by this share of the day from date to date. */
const WANDER = 0.03;

export function passage(region: InventedRegion, day: SunDay, shiftHours: number): Passage {
  const { front } = region;
  if (front === null) return NONE;
  const share = front.dayShare + WANDER * dateSwing(day.date, `${region.id} front`);
  const passMs = day.riseMs + share * (day.setMs - day.riseMs) + shiftHours * HOUR_MS;
  const clearedMs = Math.max(day.toMs, passMs + 4 * HOUR_MS);
  const rainFrom = (hourMs: number): number => {
    const hour = Math.ceil((hourMs - passMs) / HOUR_MS);
    // The hour that ends at hourMs: rain once any of it lies behind the front.
    return hourMs > passMs ? front.rainMm * (RAIN_BY_HOUR[hour - 1] ?? 0) : 0;
  };
  const rainMm = (atMs: number): number => Math.max(rainFrom(atMs), rainFrom(atMs + HOUR_MS));
  return {
    ahead: (atMs) => ease(atMs, passMs - 5 * HOUR_MS, passMs) * (1 - ease(atMs, passMs, passMs + HOUR_MS)),
    behind: (atMs) => ease(atMs, passMs, passMs + HOUR_MS / 2) * (1 - ease(atMs, passMs + 2 * HOUR_MS, clearedMs)),
    rainMm,
    isWet: (atMs) => rainMm(atMs) > 0,
  };
}
