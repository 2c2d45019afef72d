// Sun: rise and set, twilight, position, the light on a slope; days on which it does not rise or set.
import { describe, expect, test } from 'vitest';
import { directSun, incidenceDeg, legalDay } from '../../lib/sky/sun.ts';
import { MINUTE_MS } from '../../lib/time.ts';
import { holds } from './holds.ts';
import { sunPosition } from './tables/sun-position.ts';
import { sunDay, sunTimes } from './tables/sun-times.ts';
import { USNO_SITES } from './tables/usno-data.ts';

holds(sunTimes);
holds(sunPosition);

// US Naval Observatory, same days as the tables: "Object continuously above/below the Horizon/Twilight Limit".
describe('where the Naval Observatory finds no event, there is none', () => {
  const flags = USNO_SITES.flatMap((site) => site.days.flatMap(([date, , always]) => always.split(', ').filter((flag) => flag !== '').map((flag) => ({ site, date, flag }))));

  test.each(flags)('$site.name, $date: $flag', ({ site, date, flag }) => {
    const rule = flag.startsWith('sun') ? 'sunrise-sunset' : 'civil-twilight';
    expect(sunDay(site, rule, date)).toEqual({ none: flag.endsWith('all day') ? 'polar day' : 'polar night' });
  });

  test('are 12', () => {
    expect(flags).toHaveLength(12);
  });
});

describe('the legal day', () => {
  const melbourne = { latDeg: -37.814, lonDeg: 144.96332, timeZone: 'Australia/Melbourne' };

  // 20 March 2026 in Melbourne begins on the 19th at Greenwich; USNO's day is Greenwich's, so its sunrise is of the 21st.
  test('of a local date is that date, not Greenwich\'s', () => {
    const day = sunDay(melbourne, 'sunrise-sunset', '2026-03-21');
    expect('none' in day ? NaN : Math.abs(day.fromMs - Date.parse('2026-03-20T20:24Z'))).toBeLessThan(35_000);
    expect('none' in day ? NaN : Math.abs(day.toMs - Date.parse('2026-03-21T08:31Z'))).toBeLessThan(2 * MINUTE_MS);
  });

  test('starts and ends as many minutes from the sun as the rule says', () => {
    const bare = sunDay(melbourne, 'sunrise-sunset', '2026-03-21');
    const wide = legalDay({ ...melbourne, daylight: { rule: 'sunrise-sunset', beforeMin: 30, afterMin: 20 } }, '2026-03-21');
    if ('none' in bare || 'none' in wide) throw new Error('the sun rises in Melbourne');
    expect([bare.fromMs - wide.fromMs, wide.toMs - bare.toMs]).toEqual([30 * MINUTE_MS, 20 * MINUTE_MS]);
  });
});

describe('sun on a slope', () => {
  const noon = { altitudeDeg: 50, azimuthDeg: 180 };

  test('is square on where the slope leans as far as the sun is from overhead', () => {
    expect(incidenceDeg(noon, { facingDeg: 180, slopeDeg: 40 })).toBeCloseTo(0, 5);
  });

  test('on level ground is off square by what the sun lacks of overhead', () => {
    expect(incidenceDeg(noon, { facingDeg: 77, slopeDeg: 0 })).toBeCloseTo(40, 9);
  });

  test('is none when the sun is down', () => {
    expect(incidenceDeg({ altitudeDeg: -1, azimuthDeg: 90 }, { facingDeg: 90, slopeDeg: 30 })).toBeNull();
  });

  // Equinox, 45° N: the sun is up from six to six and stands due east and west on the horizon (geometry).
  test('at the equinox a south face has it from rise to set, a steep north face not at all', () => {
    const place = { latDeg: 45, lonDeg: 0, timeZone: 'Etc/UTC' };
    const day = sunDay(place, 'sunrise-sunset', '2026-03-20');
    const lit = directSun(place, { facingDeg: 180, slopeDeg: 30 }, '2026-03-20');
    if ('none' in day || lit === null) throw new Error('the sun shines at the equinox');
    expect(Math.abs(lit.firstMs - day.fromMs)).toBeLessThan(10 * MINUTE_MS);
    expect(Math.abs(lit.lastMs - day.toMs)).toBeLessThan(10 * MINUTE_MS);
    expect(directSun(place, { facingDeg: 0, slopeDeg: 60 }, '2026-12-21')).toBeNull();
  });
});
