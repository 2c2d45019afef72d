/** The day cut into slots: the hours between two instants on the hour, from the first that was judged anywhere to the last. */
import { epochOf, HOUR_MS, isoUtc, localDate, localDateTime } from '../time.ts';
import type { JudgedDays } from './request.ts';

export interface Slot {
  /** ISO 8601 UTC. */
  readonly from: string;
  readonly to: string;
  /** Minutes of the local clock; the end of a slot that reaches midnight is 1440. */
  readonly startMin: number;
  readonly endMin: number;
}

/** More do not fit into the bits of a number, nor into a day. */
const MOST_SLOTS = 30;

export function slotsOf(days: JudgedDays, timeZone: string): Slot[] {
  const instants = [...days.values()].flatMap(({ hours }) => hours.map(({ validAt }) => epochOf(validAt))).filter(Number.isFinite).sort((a, b) => a - b);
  const [first, last] = [instants[0], instants.at(-1)];
  if (first === undefined || last === undefined) return [];
  const slots: Slot[] = [];
  for (let at = first; at < last && slots.length < MOST_SLOTS; at += HOUR_MS) {
    const startMin = minuteOfDay(at, timeZone);
    const isNextDay = localDate(at + HOUR_MS, timeZone) !== localDate(at, timeZone);
    slots.push({ from: isoUtc(at), to: isoUtc(at + HOUR_MS), startMin, endMin: isNextDay ? 24 * 60 : minuteOfDay(at + HOUR_MS, timeZone) });
  }
  return slots;
}

function minuteOfDay(atMs: number, timeZone: string): number {
  const { hour, minute } = localDateTime(atMs, timeZone);
  return hour * 60 + minute;
}
