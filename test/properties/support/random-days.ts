// Random days for judgeDay: the sites, wings and sheets of the second opinion's generator where the December sun stands over
// the horizon for some hours only, so that a day is quickly judged; one to three sources of mixed gifts, awkward hours among
// them, and sometimes an ensemble.
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import { CONDITION_FIELDS, type ConditionField, type Conditions, type Forecast } from '../../../lib/forecast/conditions.ts';
import { epochOf, hourlyInstants } from '../../../lib/time.ts';
import { dice, tricks, type Dice } from '../../support/second-opinion/random-hours.ts';
import { conditions, thresholds, type Sky } from '../../support/typical-days.ts';
import { requestOf } from './requests.ts';

const DATE = '2027-12-20';
const HERE = { latDeg: 64.9, lonDeg: 25.2, timeZone: 'Europe/Helsinki' };
const FROM_MS = epochOf(`${DATE}T06:00:00Z`);
const TO_MS = epochOf(`${DATE}T15:00:00Z`);

const SURFACE: readonly ConditionField[] = ['wind10m', 'gustMps', 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa', 'precipitationMm', 'weatherCode', 'shortwaveWm2'];
const ALL = CONDITION_FIELDS;

/** What a source declares: everything, everything but some, the surface, or a depth to lend. */
function gifts(random: Dice): readonly ConditionField[] {
  return random.pick([
    ALL, ALL, ALL.filter((field) => field !== 'sensibleHeatWm2'), ALL.filter((field) => field !== 'mixedLayerM'),
    ALL.filter((field) => field !== 'levels'), ALL.filter(() => random.chance(0.8)), SURFACE, [...SURFACE, 'nearGround'] as const, ['mixedLayerM'] as const,
  ]);
}

function skyOf(random: Dice, axisDeg: number): Sky {
  const mild = random.chance(0.7);
  const speedMps = random.within(0, mild ? 4 : 12);
  const fromDeg = (axisDeg + random.within(-1, 1) * (mild ? 25 : 180) + 720) % 360;
  const temperatureC = random.within(-8, 12);
  const turn = random.within(-60, 60);
  return {
    wind: [speedMps, fromDeg], gustMps: speedMps + random.within(0, mild ? 2 : 6),
    aloft: [[1500, speedMps + random.within(0, 5), (fromDeg + turn + 360) % 360], [3500, speedMps + random.within(0, 12), (fromDeg + 2 * turn + 360) % 360]],
    temperatureC, dewPointC: temperatureC - random.within(0.2, 12), air: [[3200, temperatureC - random.within(8, 22), random.within(10, 90)]],
    shortwaveWm2: random.pick([0, 20, 120, 400]), mixedLayerM: random.pick([0, 150, 700, 1800]), capeJkg: random.pick([0, 0, 100, 600]),
    rainMm: random.pick([0, 0, 0, 0.1, 0.6]), rainChancePct: random.pick([0, 10, 35]), weatherCode: random.pick([0, 0, 2, 3, 61, 95]),
    visibilityM: random.pick([30_000, 8000, 2000]), seaLevelHpa: random.within(1000, 1030), pressureStep: [1015, 1015 + random.within(-4, 4)],
  };
}

function hoursOf(random: Dice, given: { readonly groundM: number; readonly axisDeg: number; readonly declares: readonly ConditionField[] }): Conditions[] {
  const { groundM, axisDeg, declares } = given;
  const sky = skyOf(random, axisDeg);
  return hourlyInstants(FROM_MS, TO_MS).map((atMs) => {
    const [speedMps, fromDeg] = sky.wind;
    const own = { ...sky, wind: [speedMps * random.within(0.8, 1.2), fromDeg] as const, gustMps: sky.gustMps * random.within(1.2, 1.5), temperatureC: sky.temperatureC + random.within(0, 2) };
    const hour: Conditions = { ...conditions(atMs, groundM, own), sensibleHeatWm2: random.pick([-20, 0, 60]), nearGround: [80, 180].map((heightAglM) => ({ heightAglM, speedMps: own.wind[0] * 1.2, fromDeg })) };
    const told = random.chance(0.1) ? tricked(hour, random) : hour;
    const kept = Object.entries(told).filter(([key]) => key === 'validAt' || key === 'gridElevationM' || (declares as readonly string[]).includes(key));
    return Object.fromEntries(kept) as unknown as Conditions;
  });
}

function tricked(hour: Conditions, random: Dice): Conditions {
  const loose = structuredClone(hour) as Parameters<(typeof tricks)[number]['play']>[0];
  random.pick(tricks).play(loose, random, {});
  return loose as Conditions;
}

function forecastOf(random: Dice, given: { readonly source: string; readonly groundM: number; readonly axisDeg: number; readonly members: number; readonly declares: readonly ConditionField[] }): Forecast {
  const { source, members, declares } = given;
  return {
    source, kind: members > 1 ? 'ensemble' : 'deterministic', runAt: `${DATE}T00:00:00Z`, fetchedAt: `${DATE}T04:00:00Z`, declares,
    members: Array.from({ length: members }, () => hoursOf(random, given)), gridDistanceM: 800, demo: false, trustedWithoutRunTime: false,
  };
}

export type Answer = DayInput['answers'][number];

export function answerOf(value: Forecast): Answer {
  return { source: value.source, kind: value.kind, outcome: { ok: true, value } };
}

interface RandomDay {
  readonly input: DayInput;
  readonly judged: JudgedDay;
  /** One more source that might have been asked too. */
  readonly extra: Forecast;
}

/** Laws draw the same seeds: a day is made and judged once for all of them. */
const kept = new Map<number, RandomDay>();
const MOST_KEPT = 2000;

export function dayOf(seed: number): RandomDay {
  const known = kept.get(seed);
  if (known !== undefined) return known;
  if (kept.size >= MOST_KEPT) kept.clear();
  const made = makeDay(seed);
  kept.set(seed, made);
  return made;
}

function makeDay(seed: number): RandomDay {
  const random = dice(seed);
  const { site: anySite, wing, sheet } = requestOf(seed);
  const site = { ...anySite, ...HERE };
  const axisDeg = site.kind === 'launch' ? site.facingDeg : site.headingDeg;
  const groundM = Math.max(-300, site.elevationM - random.pick([0, 20, 80, 140, 300]));
  const next = (i: number, members = 1): Forecast => {
    const declares = members > 1 ? (['wind10m', 'gustMps', 'precipitationMm'] as const) : gifts(random);
    return forecastOf(random, { source: `source ${i}`, groundM, axisDeg, members, declares });
  };
  const forecasts = Array.from({ length: random.whole(1, 3) }, (_, i) => next(i));
  if (random.chance(0.2)) forecasts.push(next(3, 5));
  const input: DayInput = {
    site, wing, wingKey: 'own', wingName: 'own', sheet, localDate: DATE, issuedAt: `${DATE}T05:00:00Z`, validUntil: `${DATE}T22:00:00Z`,
    answers: forecasts.map(answerOf), demo: false, thresholds, storedGroundM: {},
  };
  return { input, judged: judgeDay(input), extra: next(4) };
}
