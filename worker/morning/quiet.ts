import { instantOfLocal, localDate, localDateTime, shiftDate } from '../../lib/time.ts';

/** Hours of a subscriber's day in which a channel is not used. */
export interface QuietHours {
  readonly timeZone: string;
  /** Minutes after local midnight; both or neither. They may run over midnight. */
  readonly quietFrom: number | null;
  readonly quietTo: number | null;
}

/** When the quiet that holds at an instant ends; null when none holds. */
export function quietUntilMs({ timeZone, quietFrom, quietTo }: QuietHours, atMs: number): number | null {
  if (quietFrom === null || quietTo === null || quietFrom === quietTo) return null;
  const { hour, minute } = localDateTime(atMs, timeZone);
  const now = hour * 60 + minute;
  const isOvernight = quietFrom > quietTo;
  const isQuiet = isOvernight ? now >= quietFrom || now < quietTo : now >= quietFrom && now < quietTo;
  if (!isQuiet) return null;
  const today = localDate(atMs, timeZone);
  const endsOn = isOvernight && now >= quietFrom ? shiftDate(today, 1) : today;
  const endsAtMs = instantOfLocal(endsOn, { hour: Math.floor(quietTo / 60), minute: quietTo % 60 }, timeZone);
  // Where the clocks go back, an end that has been may still lie ahead on the wall.
  return endsAtMs > atMs ? endsAtMs : null;
}
