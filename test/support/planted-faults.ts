// Judges broken on purpose: in the verdict, in units, in ages. Each is the real judge but for one thing.
import type { DayInput } from '../../lib/brief/day-input.ts';
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import type { Judge } from '../../lib/brief/self-test/self-test.ts';
import type { Conditions, Forecast } from '../../lib/forecast/conditions.ts';
import type { Verdict } from '../../lib/margin/ids.ts';

const inForecasts = (change: (forecast: Forecast, input: DayInput) => Forecast): Judge => (input) => judgeDay({
  ...input, answers: input.answers.map((answer) => (answer.outcome.ok ? { ...answer, outcome: { ok: true, value: change(answer.outcome.value, input) } } : answer)),
});

const inHours = (change: (hour: Conditions) => Conditions): Judge => inForecasts((forecast) => ({ ...forecast, members: forecast.members.map((hours) => hours.map(change)) }));

const inVerdicts = (change: (verdict: Verdict, hour: JudgedHour) => Verdict): Judge => (input) => {
  const day = judgeDay(input);
  const hours = day.hours.map((hour) => ({ ...hour, verdict: change(hour.verdict, hour) }));
  return { ...day, hours };
};

const inMargins = (change: (status: Verdict) => Verdict): Judge => (input) => {
  const day = judgeDay(input);
  const order: readonly Verdict[] = ['beyond', 'unknown', 'close', 'within'];
  const worst = (verdicts: readonly Verdict[]): Verdict => order.find((verdict) => verdicts.includes(verdict)) ?? 'within';
  const hours = day.hours.map((hour) => {
    const margins = hour.margins.map((margin) => ({ ...margin, status: change(margin.status) }));
    return { ...hour, margins, verdict: worst(margins.map(({ status }) => status)) };
  });
  return { ...day, hours, verdict: worst(hours.map(({ verdict }) => verdict)) };
};

const KMH = 3.6;
const speeds = (factor: number) => (hour: Conditions): Conditions => ({
  ...hour,
  ...(hour.wind10m ? { wind10m: { ...hour.wind10m, speedMps: hour.wind10m.speedMps === null ? null : hour.wind10m.speedMps * factor } } : {}),
  ...(typeof hour.gustMps === 'number' ? { gustMps: hour.gustMps * factor } : {}),
});

const runAt = (change: (runAtMs: number, input: DayInput) => number): Judge => inForecasts((forecast, input) => (
  forecast.runAt === null ? forecast : { ...forecast, runAt: new Date(change(Date.parse(forecast.runAt), input)).toISOString().replace('.000', '') }
));

export const PLANTED: Readonly<Record<string, Judge>> = {
  // Verdict.
  'everything is within': inMargins(() => 'within'),
  'unknown reads as within': inMargins((status) => (status === 'unknown' ? 'within' : status)),
  'unknown reads as close': inMargins((status) => (status === 'unknown' ? 'close' : status)),
  'beyond reads as close': inMargins((status) => (status === 'beyond' ? 'close' : status)),
  'close reads as within': inMargins((status) => (status === 'close' ? 'within' : status)),
  'unknown outweighs beyond': inVerdicts((verdict, hour) => (hour.margins.some(({ status }) => status === 'unknown') ? 'unknown' : verdict)),
  'an hour takes the best of its margins': inVerdicts((verdict, hour) => (hour.margins.some(({ status }) => status === 'within') ? 'within' : verdict)),
  'the day forgets its worst hour': (input) => ({ ...judgeDay(input), verdict: 'within' }),
  'windows run through closed hours': (input) => {
    const day = judgeDay(input);
    const [first, last] = [day.hours[0], day.hours.at(-1)];
    return first === undefined || last === undefined ? day : { ...day, windows: [{ from: first.validAt, to: last.validAt, lastLaunch: null, verdict: 'within' }] };
  },
  'only the first source counts': (input) => judgeDay({ ...input, answers: input.answers.slice(0, 1) }),
  'only the last source counts': (input) => judgeDay({ ...input, answers: input.answers.slice(-1) }),
  'a missing gust is taken for the mean wind': inHours((hour) => (typeof hour.gustMps === 'number' ? hour : { ...hour, gustMps: hour.wind10m?.speedMps ?? null })),
  'nobody asked reads as a quiet day': (input) => (input.answers.length === 0 ? judgedAsWithin(input) : judgeDay(input)),
  'a limit is left out': (input) => { const { maxCapeJkg: _, ...limits } = input.sheet.limits; return judgeDay({ ...input, sheet: { ...input.sheet, limits } }); },
  // Units.
  'km/h are read as m/s': inHours(speeds(KMH)),
  'm/s are read as km/h': inHours(speeds(1 / KMH)),
  'knots are read as m/s': inHours(speeds(1 / 0.514444)),
  'kelvin are taken for degrees': inHours((hour) => ({ ...hour, ...(typeof hour.temperature2mC === 'number' ? { temperature2mC: hour.temperature2mC + 273.15 } : {}) })),
  'directions say where the wind goes': inHours((hour) => ({
    ...hour, ...(hour.levels ? { levels: hour.levels.map((level) => ({ ...level, fromDeg: level.fromDeg === null ? null : (level.fromDeg + 180) % 360 })) } : {}),
  })),
  'feet are read as metres': inHours((hour) => ({ ...hour, ...(hour.levels ? { levels: hour.levels.map((level) => ({ ...level, altitudeM: level.altitudeM === null ? null : level.altitudeM * 0.3048 })) } : {}) })),
  'kilometres of visibility are read as metres': inHours((hour) => ({ ...hour, ...(typeof hour.visibilityM === 'number' ? { visibilityM: hour.visibilityM / 1000 } : {}) })),
  // Ages, time and place.
  'the age is that of the fetch': runAt((_, input) => Date.parse(input.issuedAt)),
  'six more hours of age are let through': runAt((at) => at + 6 * 3_600_000),
  'a minute more of age is let through': runAt((at) => at + 60_000),
  'a minute of age too much is counted': runAt((at) => at - 60_000),
  'runs of the future are let through': runAt((at, input) => Math.min(at, Date.parse(input.issuedAt))),
  'a run without a time is let through': inForecasts((forecast) => ({ ...forecast, trustedWithoutRunTime: true })),
  'hours are shifted by one': inHours((hour) => ({ ...hour, validAt: new Date(Date.parse(hour.validAt) + 3_600_000).toISOString().replace('.000', '') })),
  'the distance of the grid point is not looked at': inForecasts((forecast) => ({ ...forecast, gridDistanceM: 0 })),
  'a feed that is stuck is let through': inForecasts((forecast) => ({ ...forecast, members: forecast.members.map((hours) => hours.map((hour, i) => (typeof hour.gustMps === 'number' ? { ...hour, gustMps: hour.gustMps + (i % 2) / 1000 } : hour))) })),
  'it throws': () => { throw new TypeError('a fault of ours'); },
};

function judgedAsWithin(input: DayInput): JudgedDay {
  const day = judgeDay(input);
  return { ...day, verdict: 'within', hours: day.hours.map((hour) => ({ ...hour, verdict: 'within', margins: hour.margins.map((margin) => ({ ...margin, status: 'within' })) })) };
}
