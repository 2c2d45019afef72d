/** Sunrise, sunset and civil twilight, compared by local date: away from Greenwich a UTC day is no day of anybody's. */
import { legalDay, type LegalDay } from '../../../lib/sky/sun.ts';
import { localClock, localDate, shiftDate } from '../../../lib/time.ts';
import { table, type Table } from '../../accuracy/table.ts';
import { USNO_SITES, type UsnoSite } from './usno-data.ts';

type Rule = 'sunrise-sunset' | 'civil-twilight';
type Place = Pick<UsnoSite, 'latDeg' | 'lonDeg' | 'timeZone'>;

export function sunDay(place: Place, rule: Rule, date: string): LegalDay {
  return legalDay({ ...place, daylight: { rule, beforeMin: 0, afterMin: 0 } }, date);
}

interface Event {
  readonly site: Place & { readonly name: string };
  readonly rule: Rule;
  readonly half: 'morning' | 'evening';
  readonly utcDate: string;
  /** HH:MM or HH:MM:SS, UTC. */
  readonly clock: string;
}

function epochMs({ utcDate, clock }: Event): number {
  return Date.parse(`${utcDate}T${clock}Z`);
}

/** The local date that the event belongs to. A sunset after midnight ends the day before. */
function dateOf(event: Event): string {
  const at = epochMs(event);
  const date = localDate(at, event.site.timeZone);
  const isMorning = localClock(at, event.site.timeZone) < '12:00';
  if (event.half === 'evening' && isMorning) return shiftDate(date, -1);
  return event.half === 'morning' && !isMorning ? shiftDate(date, 1) : date;
}

/** Seconds after the UTC midnight of the printed date. */
function oursS(event: Event): number {
  const day = sunDay(event.site, event.rule, dateOf(event));
  if ('none' in day) return NaN;
  return ((event.half === 'morning' ? day.fromMs : day.toMs) - Date.parse(`${event.utcDate}T00:00Z`)) / 1000;
}

const words = {
  'sunrise-sunset': { morning: 'sunrise', evening: 'sunset' },
  'civil-twilight': { morning: 'dawn', evening: 'dusk' },
} as const;
const column = {
  says: (event: Event): string => `${event.site.name}, ${event.utcDate}: ${words[event.rule][event.half]} ${event.clock} UTC, in seconds of that day`,
  expected: (event: Event): number => (epochMs(event) - Date.parse(`${event.utcDate}T00:00Z`)) / 1000,
  ours: oursS,
};

const allUsno: readonly Event[] = USNO_SITES.flatMap((site) => site.days.flatMap(([utcDate, times]) => {
  const [dawn = '', rise = '', set = '', dusk = ''] = times.split(' ');
  return [
    { site, rule: 'civil-twilight', half: 'morning', utcDate, clock: dawn } as const,
    { site, rule: 'sunrise-sunset', half: 'morning', utcDate, clock: rise } as const,
    { site, rule: 'sunrise-sunset', half: 'evening', utcDate, clock: set } as const,
    { site, rule: 'civil-twilight', half: 'evening', utcDate, clock: dusk } as const,
  ].filter(({ clock }) => clock !== '--:--');
}));

const sunTopic = { topic: 'Sunrise and sunset', unit: 's' } as const;
const usno = {
  source: 'US Naval Observatory, 14 places in 2026', standing: 'published', evidence: 'number', rounding: 'to 1 min', tolerance: 35,
  wider: 'half a minute of rounding and 5 s: the ephemeris puts the sun within 0.01°, and 0.01° of height is 2.4 s at the equator, more where the sun rises aslant',
} as const;

const greenwich = { timeZone: 'Etc/UTC', lonDeg: 0 };
const south = { name: '35° S, 0°', latDeg: -35, ...greenwich };
const north = { name: '35° N, 0°', latDeg: 35, ...greenwich };
const sunrise = { rule: 'sunrise-sunset', half: 'morning' } as const;
const sunset = { rule: 'sunrise-sunset', half: 'evening' } as const;
/** Reda & Andreas, NREL/TP-560-34302, appendix on sunrise and sunset; transcribed in the tests of pvlib-python @6382338. */
const nrelEvents: readonly Event[] = [
  { site: south, ...sunrise, utcDate: '1996-07-05', clock: '07:08:15' },
  { site: south, ...sunset, utcDate: '1996-07-05', clock: '17:01:04' },
  { site: south, ...sunrise, utcDate: '2004-12-04', clock: '04:38:57' },
  { site: south, ...sunset, utcDate: '2004-12-04', clock: '19:02:03' },
  { site: north, ...sunrise, utcDate: '1994-01-02', clock: '07:08:12' },
  { site: north, ...sunset, utcDate: '1994-01-02', clock: '16:59:55' },
];

export const sunTimes: readonly Table[] = [
  table({ ...sunTopic, ...usno, count: 100 }, allUsno.filter(({ rule }) => rule === 'sunrise-sunset'), column),
  table(
    {
      ...sunTopic, source: 'NREL/TP-560-34302 (2008), solar position algorithm', standing: 'published', evidence: 'number', rounding: 'to 1 s', tolerance: 6, count: 6,
      wider: 'half a second of rounding and the 5 s of the ephemeris',
    },
    nrelEvents,
    column,
  ),
  table({ topic: 'Civil dawn and dusk', unit: 's', ...usno, count: 100 }, allUsno.filter(({ rule }) => rule === 'civil-twilight'), column),
];
