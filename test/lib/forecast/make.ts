// Forecasts to take apart: a plain day of weather that every check accepts.
import type { Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import { HOUR_MS, hourlyInstants, isoUtc } from '../../../lib/time.ts';

export const dayStartMs = Date.parse('2027-05-14T00:00:00Z');
export const now = '2027-05-14T03:00:00Z';
export const judgedInstants = hourlyInstants(dayStartMs + 4 * HOUR_MS, dayStartMs + 19 * HOUR_MS).map(isoUtc);
export const place = { lonDeg: 11.4456, latDeg: 47.2611, elevationM: 1320 };

export function hour(atMs: number, changes: Partial<Conditions> = {}): Conditions {
  const phase = Math.sin(((atMs % (24 * HOUR_MS)) / HOUR_MS / 24) * 2 * Math.PI);
  return {
    validAt: isoUtc(atMs),
    gridElevationM: 1180,
    wind10m: { speedMps: 2.5 - 1.5 * phase, fromDeg: 250 },
    gustMps: 4 - 2 * phase,
    temperature2mC: 12 - 6 * phase,
    ...changes,
  };
}

/** 26 hours: the day and one hour on each side. */
export function hours(changes: Partial<Conditions> = {}): Conditions[] {
  return hourlyInstants(dayStartMs - HOUR_MS, dayStartMs + 24 * HOUR_MS).map((at) => hour(at, changes));
}

export function forecast(changes: Partial<Forecast> = {}): Forecast {
  return {
    source: 'test',
    kind: 'deterministic',
    runAt: '2027-05-13T18:00:00Z',
    fetchedAt: '2027-05-14T02:30:00Z',
    declares: ['wind10m', 'gustMps', 'temperature2mC'],
    members: [hours()],
    gridDistanceM: 1200,
    demo: false,
    trustedWithoutRunTime: false,
    ...changes,
  };
}
