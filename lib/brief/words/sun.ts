/** Sun on the launch face, from the sun's place and the slope alone. */
import type { JudgedDay } from '../day.ts';
import { clockTime, hourName } from './clock.ts';

/** "Direct sun on the launch 7:10 to 17:40; at 13 h it stands 41° off square. Ground around it is not known." */
export function sunSentence(
  sun: { readonly first: string | null; readonly last: string | null; readonly incidenceDeg: number | null }, hour: string, day: Pick<JudgedDay, 'timeZone'>,
): string {
  if (sun.first === null || sun.last === null) return 'No direct sun on the launch all day.';
  const now = sun.incidenceDeg === null ? 'none' : `${Math.round(sun.incidenceDeg)}° off square`;
  return `Direct sun on the launch ${clockTime(sun.first, day.timeZone)} to ${clockTime(sun.last, day.timeZone)}; at ${hourName(hour, day.timeZone)} ${now}. Shade from the ground around is not known.`;
}
