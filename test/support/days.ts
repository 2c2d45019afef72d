// Builders of judged days for tests of words and pages: every field plain, every number made up but plausible.
import type { AirspeedColumn, CombinedMargin, JudgedDay, JudgedHour, JudgedWindow, SourceVote } from '../../lib/brief/day.ts';
import { isoUtc } from '../../lib/time.ts';
import { MARGIN_IDS, type MarginId, type MarginUnit, type Verdict } from '../../lib/margin/ids.ts';

const DEMO_SOURCE = 'demo';

export const UNIT_OF: Readonly<Record<MarginId, MarginUnit>> = {
  meanWind: 'm/s', gust: 'm/s', gustSpread: 'm/s', crosswind: 'm/s', tailwind: 'm/s', offAxis: '°', forwardLaunch: 'm/s',
  forwardAloft: 'm/s', upperWind: 'm/s', overTheBack: 'm/s', arrival: 'm', landingGradient: 'm/s', run: 'm/s', slope: '°',
  thermal: 'm/s', cloudBase: 'm', storm: 'J/kg', rain: 'mm', rainChance: '%', visibility: 'm', daylight: 'min',
  pressureStep: 'hPa', sector: 'm/s', ridgeLift: 'm/s', agreement: 'share', stripWind: 'm/s', stripGust: 'm/s',
  stripCross: 'm/s', stripTail: 'm/s', climbShear: 'm/s', towHeight: 'm', forwardAtRelease: 'm/s',
};

export function marginOf(id: MarginId, given: Partial<CombinedMargin> = {}): CombinedMargin {
  return { id, spare: 1, limit: 2.5, demand: 3.5, unit: UNIT_OF[id], status: 'within', missing: [], source: DEMO_SOURCE, ...given };
}

/** A forward margin with its column: what is left at trim once head wind, crab and gust are paid. */
export function columnOf(spareMps: number, reserveMps = 2.5): AirspeedColumn {
  const trimMps = 10.8;
  const crabMps = 0.3;
  const paid = trimMps - crabMps - reserveMps - spareMps;
  return { trimMps, headMps: paid * 0.7, crabMps, gustMps: paid * 0.3, reserveMps, spareMps };
}

function hourOf(validAt: string, verdict: Verdict, given: Partial<JudgedHour> = {}): JudgedHour {
  const spare = { within: 2.4, close: 0.3, beyond: -1.3, unknown: null }[verdict];
  const forward = marginOf('forwardLaunch', {
    spare, demand: spare === null ? null : 2.5 + spare, status: verdict, missing: verdict === 'unknown' ? ['gustMps'] : [],
  });
  return {
    validAt, verdict, causes: verdict === 'within' ? [] : ['forwardLaunch'],
    margins: [forward, marginOf('meanWind', { limit: 5.36, demand: 2.1, spare: 3.26 }), marginOf('arrival', { limit: 60, demand: 184, spare: 124 })],
    bySource: [{ source: DEMO_SOURCE, verdict }],
    airspeed: spare === null ? null : columnOf(spare), speedToFlyMps: 11.2, wind: null, ensemble: null, heading: null, ...given,
  };
}

export function voteOf(given: Partial<SourceVote> = {}): SourceVote {
  return {
    source: DEMO_SOURCE, state: 'voted', why: null, runAt: '2027-05-14T00:00:00Z', fetchedAt: '2027-05-14T03:10:00Z', runAgeHours: 3.2,
    kind: 'deterministic', members: 1, declares: ['wind10m', 'gustMps'], gridElevationM: 640, ...given,
  };
}

/** Runs of within and close as windows, the way a day is judged: two instants at least, the worst inside. */
function windowsOf(hours: readonly JudgedHour[], flightMin = 12): JudgedWindow[] {
  const windows: JudgedWindow[] = [];
  let run: JudgedHour[] = [];
  const close = () => {
    const [first, last] = [run[0], run.at(-1)];
    if (first !== undefined && last !== undefined && run.length > 1) {
      windows.push({
        from: first.validAt, to: last.validAt, lastLaunch: isoUtc(Date.parse(last.validAt) - flightMin * 60_000),
        verdict: run.some(({ verdict }) => verdict === 'close') ? 'close' : 'within',
      });
    }
    run = [];
  };
  for (const hour of hours) {
    if (hour.verdict === 'within' || hour.verdict === 'close') run.push(hour);
    else close();
  }
  close();
  return windows;
}

const SHORT: Readonly<Record<string, Verdict>> = { w: 'within', c: 'close', b: 'beyond', u: 'unknown' };

/** A day at Vienna from one letter an hour, `bwwcbb`, the first at `firstHourUtc`. */
export function dayOf(letters: string, given: Partial<JudgedDay> = {}, firstHourUtc = 4): JudgedDay {
  const hours = Array.from(letters).map((letter, index) => hourOf(isoUtc(Date.UTC(2027, 4, 14, firstHourUtc + index)), SHORT[letter] ?? 'unknown'));
  const verdict = (['beyond', 'unknown', 'close', 'within'] as const).find((each) => hours.some((hour) => hour.verdict === each)) ?? 'unknown';
  const causing = hours.find((hour) => hour.verdict === verdict);
  return {
    siteId: 'kestrel-edge', siteName: 'Kestrel Edge', kind: 'launch', timeZone: 'Europe/Vienna', localDate: '2027-05-14', wingKey: 'EN B',
    wingName: 'EN B', sheetId: 'descent-new', sheetName: 'Descent, new pilot', sheetVersion: 1, issuedAt: '2027-05-14T03:12:00Z',
    validUntil: '2027-05-14T22:00:00Z', demo: false,
    legalDay: { from: '2027-05-14T03:20:00Z', to: '2027-05-14T18:40:00Z' }, verdict,
    cause: causing === undefined ? null : { id: 'forwardLaunch', validAt: causing.validAt },
    windows: windowsOf(hours), hours, sources: [voteOf()], cautions: [], notJudged: [], localRules: null, ...given,
  };
}

/** An hour in which all 32 margins stand, every one with the same status. */
export function fullHour(validAt: string, verdict: Verdict): JudgedHour {
  const spare = { within: 1.2, close: 0.1, beyond: -0.7, unknown: null }[verdict];
  return hourOf(validAt, verdict, {
    margins: MARGIN_IDS.map((id) => marginOf(id, {
      status: verdict, spare, limit: 2.5, demand: spare === null ? null : 2.5 + spare, missing: verdict === 'unknown' ? ['gustMps', 'levels'] : [],
    })),
  });
}
