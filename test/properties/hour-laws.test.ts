// Laws of a judged hour, through the whole of judgeHours: on random sites, wings, sheets and hours, awkward ones included.
import fc from 'fast-check';
import { expect } from 'vitest';
import { angleBetweenDeg } from '../../lib/angles.ts';
import { judgeHours, type AssessedHour, type AssessedMargin, type HoursInput } from '../../lib/brief/judge-hours.ts';
import { CONDITION_FIELDS, type Conditions } from '../../lib/forecast/conditions.ts';
import { checkHour } from '../../lib/forecast/ranges.ts';
import type { MarginId, Verdict } from '../../lib/margin/ids.ts';
import { alone, viewsOf } from '../../lib/margin/judge-member.ts';
import { setUp } from '../../lib/margin/setup.ts';
import { LIMIT_NAMES, type LimitName } from '../../lib/margin/sheet.ts';
import { mirrored, turned } from './support/turn.ts';
import { requestOf, requests } from './support/requests.ts';
import { spoilers, spoilt } from './support/spoil.ts';
import { from, law, tellSeed } from './support/law.ts';

tellSeed();

/** How far a verdict lets someone go: beyond and unknown both keep them on the ground. */
const FREEDOM: Readonly<Record<Verdict, number>> = { beyond: 0, unknown: 0, close: 1, within: 2 };

/** With one end only: which end of a strip is used is chosen by its winds and limits, and another end is another tow. */
function oneEnded(request: HoursInput): HoursInput {
  return request.site.kind === 'strip' ? { ...request, site: { ...request.site, usableBothWays: false } } : request;
}

function marginsById(hour: AssessedHour): Map<MarginId, AssessedMargin> {
  return new Map(hour.margins.map((margin) => [margin.id, margin]));
}

/** No margin and no hour of the second judgement is freer than of the first. */
function expectNoLooser(before: readonly AssessedHour[], after: readonly AssessedHour[]): void {
  const loosened = before.flatMap((hour, i) => {
    const now = after[i]!;
    const margins = marginsById(now);
    const freer = hour.margins.filter(({ id, status }) => FREEDOM[margins.get(id)?.status ?? 'within'] > FREEDOM[status]);
    const told = freer.map(({ id, status }) => `${hour.validAt} ${id} was ${status}, is ${margins.get(id)?.status}`);
    return FREEDOM[now.verdict] > FREEDOM[hour.verdict] ? [...told, `${hour.validAt} was ${hour.verdict}, is ${now.verdict}`] : told;
  });
  expect(loosened).toEqual([]);
}

/** The same margins with the same statuses and spares. */
function expectSame(before: readonly AssessedHour[], after: readonly AssessedHour[]): void {
  const changed = before.flatMap((hour, i) => {
    const margins = marginsById(after[i]!);
    if (margins.size !== hour.margins.length) return [`${hour.validAt} has ${margins.size} margins, had ${hour.margins.length}`];
    return hour.margins.flatMap(({ id, spare, status, unit }) => {
      const now = margins.get(id);
      const within = unit === 'm' ? 1e-3 : 1e-6;
      const near = now !== undefined && (now.spare === spare || Math.abs((now.spare ?? NaN) - (spare ?? NaN)) < within);
      // On the very edge of a status the last digit decides.
      const onEdge = spare !== null && Math.abs(spare) < within;
      return near && (onEdge || now.status === status) ? [] : [`${hour.validAt} ${id} was ${status} ${spare}, is ${now?.status} ${now?.spare}`];
    });
  });
  expect(changed).toEqual([]);
}

law('turning the site and all its winds together changes nothing', [requests, fc.integer({ min: 1, max: 359 })], (seed, byDeg) => {
  const request = requestOf(seed);
  expectSame(judgeHours(request).hours, judgeHours(turned(request, byDeg)).hours);
});

law('a site and its winds seen in a mirror along the axis are judged alike: left and right are one to the trade', [requests], (seed) => {
  const request = requestOf(seed);
  expectSame(judgeHours(request).hours, judgeHours(mirrored(request)).hours);
});

law('every working adds up to its spare, over every margin of every hour', [requests], (seed) => {
  const wrong = judgeHours(requestOf(seed)).hours.flatMap((hour) => hour.margins.filter(({ unit, spare, working }) => {
    const own = working.filter((term) => term.unit === unit);
    if (spare === null) return working.length > 0;
    return own.length === 0 || Math.abs(own.reduce((sum, { value }) => sum + value, 0) - spare) >= 1e-6;
  }));
  expect(wrong).toEqual([]);
});

law('spare, limit and demand of a margin fit together, and a margin without a spare says why or is beyond', [requests], (seed) => {
  for (const { margins, verdict, causes } of judgeHours(requestOf(seed)).hours) {
    const odd = margins.filter(({ spare, limit, demand, status, missing, id }) => {
      if (spare === null) return status !== 'beyond' && !(status === 'unknown' && (missing.length > 0 || id === 'daylight'));
      return limit === null || demand === null || Math.abs(Math.abs(limit - demand) - Math.abs(spare)) >= 1e-6;
    });
    expect(odd).toEqual([]);
    expect(causes.length > 0).toBe(verdict !== 'within');
  }
});

/** A gust that contradicts its mean is unknown; with the mean gone nothing contradicts it any more. */
function contradicts({ wind10m, gustMps }: Conditions): boolean {
  return (gustMps ?? Infinity) < (wind10m?.speedMps ?? 0) - 1;
}

law('taking a declared field out of the hours never loosens a verdict', [requests, fc.constantFrom(...CONDITION_FIELDS), fc.constantFrom('one hour', 'every hour'), fc.nat(2)], (seed, field, where, which) => {
  const request = oneEnded(requestOf(seed));
  fc.pre(!request.hours.some(contradicts));
  // Near-ground winds lose their values, not their heights: an hour without the rows is read as unknown up to the next
  // level only, and which level that is depends on the rows.
  const without = (hour: Conditions): Conditions => ({
    ...hour, [field]: null,
    ...(field === 'nearGround' && hour.nearGround ? { nearGround: hour.nearGround.map(({ heightAglM }) => ({ heightAglM, speedMps: null, fromDeg: null })) } : {}),
  });
  const hours = request.hours.map((hour, i) => (where === 'every hour' || i === which % request.hours.length ? without(hour) : hour));
  expectNoLooser(judgeHours(request).hours, judgeHours({ ...request, hours }).hours);
});

law('spoiling any one number of an hour never loosens a verdict', [requests, fc.nat(2), fc.nat(), spoilers], (seed, hourAt, which, by) => {
  const request = oneEnded(requestOf(seed));
  fc.pre(!request.hours.some(contradicts));
  const i = hourAt % request.hours.length;
  const bad = spoilt(request.hours[i]!, which, by);
  fc.pre(bad !== null);
  // A number that is merely large or small is one: what must not loosen is what no gate lets through.
  fc.pre(typeof by !== 'number' || !isReading(bad.field, by));
  const hours = request.hours.map((hour, k) => (k === i ? bad.hour : hour));
  expectNoLooser(judgeHours(request).hours, judgeHours({ ...request, hours }).hours);
});

/** Whether the number could be a reading of that field: 9999 m of visibility can. */
function isReading(field: string, value: number): boolean {
  return field === 'visibilityM' && value >= 0 && value <= 300_000;
}

/** The margins that a limit of the sheet is the limit of. */
const HELD_BY: Readonly<Record<LimitName, readonly MarginId[]>> = {
  maxMeanMps: ['meanWind', 'stripWind'], maxGustMps: ['gust', 'stripGust'], maxGustSpreadMps: ['gustSpread'], maxCrossMps: ['crosswind', 'stripCross'],
  maxTailMps: ['tailwind', 'stripTail'], maxOffAxisDeg: ['offAxis'], minForwardMps: ['forwardLaunch'], minForwardAloftMps: ['forwardAloft', 'forwardAtRelease'],
  maxUpperMps: ['upperWind'], maxBackMps: ['overTheBack'], minArrivalM: ['arrival'], minLandingReserveMps: ['landingGradient'], maxRunMps: ['run'],
  slopeBufferDeg: ['slope'], minSlopeDeg: ['slope'], maxThermalMps: ['thermal'], minCloudBaseM: ['cloudBase'], maxCapeJkg: ['storm'], maxRainMm: ['rain'],
  maxRainChancePct: ['rainChance'], minVisibilityM: ['visibility'], maxPressureStepHpa: ['pressureStep'], minLiftMps: ['ridgeLift'], minAgreement: ['agreement'],
  maxClimbShearMps: ['climbShear'], minReleaseM: ['towHeight'],
};

function withLimit(request: HoursInput, name: LimitName, value: number): HoursInput {
  return { ...request, sheet: { ...request.sheet, limits: { ...request.sheet.limits, [name]: value } } };
}

law('scaling one limit moves only the margin that is held to it, by the difference and in the right direction', [requests, fc.constantFrom(...LIMIT_NAMES), from(0.5, 2)], (seed, name, factor) => {
  const request = oneEnded(requestOf(seed));
  const limit = request.sheet.limits[name];
  fc.pre(limit !== undefined);
  const before = judgeHours(withLimit(request, name, limit)).hours;
  const after = judgeHours(withLimit(request, name, limit * factor)).hours;
  const wanted = limit * (factor - 1) * (name.startsWith('min') ? -1 : 1);
  const wrong = before.flatMap((hour, i) => {
    const margins = marginsById(after[i]!);
    return hour.margins.filter(({ id, spare, status, demand }) => {
      const now = margins.get(id)!;
      if (!HELD_BY[name].includes(id)) return now.spare !== spare || now.status !== status || now.demand !== demand;
      return spare !== null && now.spare !== null && id !== 'slope' && Math.abs(now.spare - spare - wanted) >= 1e-6;
    });
  });
  expect(wrong).toEqual([]);
});

law('a stronger gust alone raises no spare, but that of forward speed where it comes from behind', [requests, from(0, 8)], (seed, moreMps) => {
  const request = oneEnded(requestOf(seed));
  const hours = request.hours.map((hour) => (typeof hour.gustMps === 'number' ? { ...hour, gustMps: hour.gustMps + moreMps } : hour));
  const after = judgeHours({ ...request, hours }).hours;
  const views = viewsOf(setUp(request), request.hours.map(checkHour), alone(request.declares));
  judgeHours(request).hours.forEach((hour, i) => {
    const now = marginsById(after[i]!);
    const fromBehind = views[i]!.winds.some(({ uMps, vMps, calm }) => !calm && headOf(request, uMps, vMps) < 0);
    for (const { id, spare } of hour.margins) {
      const other = now.get(id)?.spare;
      if (spare === null || other === null || other === undefined || (fromBehind && id === 'forwardLaunch')) continue;
      expect(other, id).toBeLessThanOrEqual(spare + 1e-9);
    }
  });
});

function headOf({ site }: HoursInput, uMps: number, vMps: number): number {
  const axis = ((site.kind === 'launch' ? site.facingDeg : site.headingDeg) * Math.PI) / 180;
  return -uMps * Math.sin(axis) - vMps * Math.cos(axis);
}

/** Margins that a wind from straight ahead can only cost. */
const PAID_BY_HEADWIND = ['meanWind', 'gust', 'forwardLaunch', 'forwardAloft', 'upperWind', 'landingGradient', 'arrival'] as const;

law('more headwind, everywhere and straight onto the launch, never leaves more', [requests, from(0.3, 15), from(0, 6)], (seed, headMps, moreMps) => {
  const request = requestOf(seed);
  const { site } = request;
  fc.pre(site.kind === 'launch' && angleBetweenDeg(site.facingDeg, site.trackDeg) < 89);
  const fromDeg = site.facingDeg;
  const at = (speedMps: number) => request.hours.map((hour): Conditions => ({
    ...hour, wind10m: { speedMps, fromDeg }, gustMps: speedMps + 2,
    nearGround: hour.nearGround?.map((row) => ({ ...row, speedMps: speedMps + row.heightAglM / 300, fromDeg })) ?? null,
    levels: hour.levels?.map((row, i) => ({ ...row, speedMps: speedMps + 1 + i / 2, fromDeg })) ?? null,
  }));
  const after = judgeHours({ ...request, hours: at(headMps + moreMps) }).hours;
  const raised = judgeHours({ ...request, hours: at(headMps) }).hours.flatMap((hour, i) => {
    const margins = marginsById(after[i]!);
    return hour.margins.filter(({ id, spare }) => (PAID_BY_HEADWIND as readonly MarginId[]).includes(id) && spare !== null && (margins.get(id)!.spare ?? -Infinity) > spare + 1e-6);
  });
  expect(raised).toEqual([]);
});

law('air that sinks more lowers arrival and touches nothing else', [requests, from(0, 2)], (seed, more) => {
  const request = requestOf(seed);
  const { parameters } = request.sheet;
  const sheet = { ...request.sheet, parameters: { ...parameters, sinkMps: parameters.sinkMps + more } };
  const after = judgeHours({ ...request, sheet }).hours;
  judgeHours(request).hours.forEach((hour, i) => {
    const now = marginsById(after[i]!);
    for (const { id, spare, status } of hour.margins) {
      const other = now.get(id)!;
      if (id !== 'arrival') expect([other.spare, other.status]).toEqual([spare, status]);
      else if (spare !== null && other.spare !== null) expect(other.spare).toBeLessThanOrEqual(spare + 1e-6);
      else expect(FREEDOM[other.status]).toBeLessThanOrEqual(FREEDOM[status]);
    }
  });
});

law('no estimate of the wind has a gust below its mean, and a terrain gains only on what blows onto the face', [requests], (seed) => {
  const request = requestOf(seed);
  for (const view of viewsOf(setUp(request), request.hours.map(checkHour), alone(request.declares))) {
    for (const { name, meanMps, gustMps, speedUp, raw, uMps, vMps } of view.winds) {
      if (Number.isNaN(meanMps) || Number.isNaN(gustMps)) continue;
      expect(gustMps).toBeGreaterThanOrEqual(meanMps);
      expect(meanMps).toBeGreaterThanOrEqual(raw.speedMps - 1e-9);
      expect(meanMps).toBeLessThanOrEqual(raw.speedMps * (1 + speedUp) + 1e-9);
      if (name !== 'ground' || headOf(request, uMps, vMps) < -1e-9) expect(speedUp).toBe(0);
    }
  }
});

law('the order in which the hours are given says nothing about them or their windows', [requests], (seed) => {
  const request = requestOf(seed);
  const given = judgeHours(request);
  const reversed = judgeHours({ ...request, hours: [...request.hours].reverse() });
  expect([...reversed.hours].reverse()).toEqual(given.hours);
  expect(reversed.windows).toEqual(given.windows);
});
