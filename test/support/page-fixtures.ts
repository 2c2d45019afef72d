// Services of the pages made of plain data: every state a page can be in, none of it from a database.
import type { Hono } from 'hono/tiny';
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import type { AssessedHour } from '../../lib/brief/judge-hours.ts';
import { chosenHour } from '../../worker/web/chosen-hour.ts';
import { pages } from '../../worker/routes/pages.ts';
import { whatIf } from '../../worker/routes/what-if.ts';
import type { HourDetail, PageServices, WhatIfServices } from '../../worker/web/page-services.ts';
import { columnOf, dayOf, fullHour, voteOf } from './days.ts';

/** In the morning of the day that test/support/days.ts speaks of. */
export const MORNING = new Date('2027-05-14T04:00:00Z');

const SPARES = [3.1, 2.8, 2.9, 2.4, 1.7, 0.9, 0.3, -0.4, -1.3, -2.2, -1.9, -0.8, 0.2, 1.1, 2, 2.7];

function withSpares(day: JudgedDay, spares: readonly number[] = SPARES): JudgedDay {
  return { ...day, hours: day.hours.map((hour, index) => (hour.verdict === 'unknown' ? hour : { ...hour, airspeed: columnOf(spares[index % spares.length] ?? 1) })) };
}

function mixed(): JudgedDay {
  const day = withSpares(dayOf('wwwwwwcbbbbbcwuu', {
    demo: true, localRules: 'Ask at the hut before you launch.',
    cautions: [
      { id: 'strongThermals', value: 2.1, unit: 'm/s', from: '2027-05-14T11:00:00Z', to: '2027-05-14T14:00:00Z', subject: null },
      { id: 'singleSource', value: null, unit: null, from: null, to: null, subject: 'demo' },
      { id: 'demo', value: null, unit: null, from: null, to: null, subject: null },
    ],
    notJudged: [{ id: 'crosswind', why: 'the sheet has no maxCrossMps' }, { id: 'pressureStep', why: 'the site has no reference points' }],
  }));
  const hours = day.hours.map((hour, index) => index === 9 ? { ...fullHour(hour.validAt, 'beyond'), airspeed: columnOf(-2.2), causes: ['forwardLaunch', 'gust'] as const } : hour);
  return { ...day, hours, cause: { id: 'forwardLaunch', validAt: hours[9]?.validAt ?? '' } };
}

const STRIP: Partial<JudgedDay> = { demo: true, siteId: 'tern-meadow', siteName: 'Tern Meadow', kind: 'strip', sheetId: 'solo-tow', sheetName: 'Solo tow' };

export const DAYS: Readonly<Record<string, JudgedDay>> = {
  'kestrel-edge': mixed(),
  'marrowfell': withSpares(dayOf('bbbbbbbbbbbbbbbb', { demo: true, siteId: 'marrowfell', siteName: 'Marrowfell Ridge', sheetName: 'Ridge soaring' })),
  'quillmoor': dayOf('uuuuuuuuuuuuuuuu', {
    demo: true, siteId: 'quillmoor', siteName: 'Quillmoor',
    sources: [voteOf({ state: 'no vote', why: 'its data is withheld', runAt: null, fetchedAt: null, runAgeHours: null, gridElevationM: null })],
  }),
  'sallow-bank': withSpares(dayOf('wwwwwwwwwwwwwwww', { demo: true, siteId: 'sallow-bank', siteName: 'Sallow Bank' }), [3.4, 2.9, 2.2]),
  'tern-meadow': withSpares(dayOf('cccccwwwwwwwcccc', STRIP), [1.2, 0.8, 0.4, 1.9]),
};

function detailFor(kind: JudgedDay['kind']): HourDetail {
  return {
    workings: [{
      id: 'forwardLaunch', terms: [
        { term: 'trim airspeed at launch', value: 10.8312, unit: 'm/s', origin: 'EN B, 38 km/h at the density of 1240 m' },
        { term: 'headwind', value: -6.1312, unit: 'm/s', origin: '10 m wind 5.0 m/s from 249°' },
        { term: 'limit of the sheet', value: -2.5, unit: 'm/s', origin: 'minForwardMps of descent-new' },
      ],
    }],
    given: { wind: 4.2, from: 251, gust: 6.4, rain: 0, cape: 40, trim: 10.56, glide: 9, sink: 1.1 },
    sun: kind === 'strip' ? null : { first: '2027-05-14T05:10:00Z', last: '2027-05-14T15:40:00Z', incidenceDeg: 41 },
    glide: kind === 'strip' ? null : {
      launchM: 1240, landingM: 620, distanceM: 2600, arrivalM: 184, askedM: 60,
      stillAir: [{ alongM: 0, altitudeM: 1240 }, { alongM: 2600, altitudeM: 950 }],
      inWind: [{ alongM: 0, altitudeM: 1240 }, { alongM: 800, altitudeM: 1110 }, { alongM: 1700, altitudeM: 930 }, { alongM: 2600, altitudeM: 804 }],
    },
    ladder: {
      trimMps: 10.8, launchM: 1240, landingM: 620,
      rungs: [[650, 1.2, 0.4], [900, 2.2, -0.4], [1250, 4.2, 1.4], [1500, 5.4, 2.4], [1950, -1.2, 3.4], [3000, 12.2, 3]].map(([altitudeM = 0, headMps = 0, crossMps = 0]) => ({ altitudeM, headMps, crossMps })),
    },
    tow: kind === 'launch' ? null : {
      headingDeg: 250, lineLengthM: 800, releaseM: 302, driftM: 34, lineClearM: 30, headMps: 3.1, crossMps: 1.4, gustMps: 5,
      climb: Array.from({ length: 30 }, (_, step) => ({ alongM: step * 17, heightM: 302 * Math.sin((step / 29) * (Math.PI / 2)) })),
    },
  };
}

function assessed(hour: JudgedHour): AssessedHour {
  return { validAt: hour.validAt, verdict: hour.verdict, causes: hour.causes, margins: hour.margins.map((margin) => ({ ...margin, working: [] })), advice: { speedToFlyMps: hour.speedToFlyMps } };
}

export function fixtureServices(days: Readonly<Record<string, JudgedDay>> = DAYS, now: Date = MORNING): PageServices & WhatIfServices {
  return {
    now: () => now,
    board: () => Promise.resolve(Object.values(days).map((day) => ({ siteId: day.siteId, siteName: day.siteName, kind: day.kind, timeZone: day.timeZone, days: [day] }))),
    whatIf({ siteId, hour, problems }) {
      const day = days[siteId];
      const chosen = day === undefined ? null : chosenHour(day, hour);
      if (day === undefined || chosen === null) return Promise.resolve({ kind: 'no-site' });
      const answer = problems.length > 0 ? { kind: 'problems' as const, problems } : { kind: 'judged' as const, hour: assessed(chosen), source: 'demo' };
      return Promise.resolve({ kind: 'answer', day, hour: chosen.validAt, given: detailFor(day.kind).given ?? {}, answer });
    },
    day({ siteId }) {
      const day = days[siteId];
      if (day === undefined) return Promise.resolve({ kind: 'no-site' });
      const named = (ids: readonly string[]) => ids.map((id) => ({ id, name: id }));
      return Promise.resolve({ kind: 'day', day, detail: () => detailFor(day.kind), choices: { wings: named(['EN A', 'EN B', 'tandem']), sheets: named([day.sheetId, 'first-hops']) } });
    },
  };
}

/** The pages that are read and the one that judges anew, as one app. */
export function fixturePages(services: PageServices & WhatIfServices): Hono {
  const app = pages(services);
  app.get('/sites/:id/what-if', (c) => whatIf(services, c));
  return app;
}
