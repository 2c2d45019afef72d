/** Which hour of a day is shown in full. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';

/** The hour asked for, else the one that limits the day, else the first. */
export function chosenHour(day: JudgedDay, asked: string | null): JudgedHour | null {
  const at = (validAt: string | undefined) => day.hours.find((hour) => hour.validAt === validAt);
  return at(asked ?? undefined) ?? at(day.cause?.validAt) ?? day.hours[0] ?? null;
}
