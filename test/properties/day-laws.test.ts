// Laws of a judged day, through the whole of judgeDay: sources that come, go, break and grow old, over random days.
import fc from 'fast-check';
import { expect } from 'vitest';
import type { DayInput } from '../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../lib/brief/day.ts';
import { hourDetail } from '../../worker/web/hour-detail.ts';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import { CONDITION_FIELDS, type Conditions, type Forecast } from '../../lib/forecast/conditions.ts';
import type { Verdict } from '../../lib/margin/ids.ts';
import { isOpen, moreSevere, worstVerdict } from '../../lib/margin/verdict.ts';
import { epochOf, HOUR_MS, isoUtc } from '../../lib/time.ts';
import { answerOf, dayOf, type Answer } from './support/random-days.ts';
import { requests } from './support/requests.ts';
import { law, tellSeed } from './support/law.ts';

tellSeed();

const FREEDOM: Readonly<Record<Verdict, number>> = { beyond: 0, unknown: 0, close: 1, within: 2 };

function statusesOf(day: JudgedDay): Map<string, Verdict> {
  return new Map(day.hours.flatMap((hour) => [[`${hour.validAt} verdict`, hour.verdict] as const, ...hour.margins.map(({ id, status }) => [`${hour.validAt} ${id}`, status] as const)]));
}

/** What a second judgement lets pass that the first did not. */
function loosened(before: JudgedDay, after: JudgedDay): string[] {
  const now = statusesOf(after);
  return [...statusesOf(before)].flatMap(([what, was]) => {
    const is = now.get(what) ?? 'within';
    return FREEDOM[is] > FREEDOM[was] ? [`${what} was ${was}, is ${is}`] : [];
  });
}

function withAnswers(input: DayInput, answers: readonly Answer[]): DayInput {
  return { ...input, answers };
}

/** With one end only: at a strip the first source sets the end that all judge. */
function oneEnded({ input }: { readonly input: DayInput }): { readonly input: DayInput } {
  return { input: input.site.kind === 'strip' ? { ...input, site: { ...input.site, usableBothWays: false } } : input };
}

function forecastsOf(input: DayInput): Forecast[] {
  return input.answers.flatMap(({ outcome }) => (outcome.ok ? [outcome.value] : []));
}

/** Whether one of these lends its mixed-layer depth to others: who lends it is the first that declares it. */
const lends = (forecast: Forecast) => forecast.declares.includes('mixedLayerM');

law('one more source never turns beyond into anything else, nor close into within', [requests], (seed) => {
  const { input, judged, extra } = dayOf(seed);
  // A depth that nobody gave before is no vote: what it changes is the thermal of the others.
  const asked = forecastsOf(input).some(lends) ? extra : { ...extra, declares: extra.declares.filter((field) => field !== 'mixedLayerM') };
  const before = statusesOf(judged);
  const after = statusesOf(judgeDay(withAnswers(input, [...input.answers, answerOf(asked)])));
  const turned = [...before].filter(([what, was]) => (was === 'beyond' || was === 'close') && moreSevere(after.get(what) ?? 'within', was) < 0);
  expect(turned.map(([what, was]) => `${what} was ${was}, is ${after.get(what)}`)).toEqual([]);
});

law('a declared field that goes missing never loosens a margin, an hour or the day, whoever else has a vote', [requests, fc.constantFrom(...CONDITION_FIELDS), fc.nat(3), fc.nat(12)], (seed, field, source, which) => {
  const { input } = oneEnded(dayOf(seed));
  // A gust that contradicts its mean is unknown; with the mean gone nothing contradicts it any more.
  fc.pre(!forecastsOf(input).some(({ members }) => members.flat().some(({ wind10m, gustMps }) => (gustMps ?? Infinity) < (wind10m?.speedMps ?? 0) - 1)));
  const spoilt = source % input.answers.length;
  const without = (hour: Conditions, i: number): Conditions => {
    if (which < 12 && i !== which) return hour;
    const rows = hour.nearGround?.map(({ heightAglM }) => ({ heightAglM, speedMps: null, fromDeg: null })) ?? null;
    return { ...hour, [field]: field === 'nearGround' ? rows : null };
  };
  const answers = input.answers.map((answer, i): Answer => {
    if (i !== spoilt || !answer.outcome.ok) return answer;
    const { value } = answer.outcome;
    return { ...answer, outcome: { ok: true, value: { ...value, members: value.members.map((hours) => hours.map(without)) } } };
  });
  expect(loosened(judgeDay(input), judgeDay(withAnswers(input, answers)))).toEqual([]);
});

law('the order of the sources changes no verdict, where the order decides nothing else', [requests, fc.nat()], (seed, turn) => {
  const { input } = oneEnded(dayOf(seed));
  // The first that gives a depth lends it.
  const alone = input.answers.map((answer): Answer => (answer.outcome.ok ? { ...answer, outcome: { ok: true, value: { ...answer.outcome.value, declares: answer.outcome.value.declares.filter((field) => field !== 'mixedLayerM') } } } : answer));
  const shift = turn % alone.length;
  const before = judgeDay({ ...input, answers: alone });
  const after = judgeDay({ ...input, answers: [...alone.slice(shift), ...alone.slice(0, shift)].reverse() });
  expect(Object.fromEntries(statusesOf(after))).toEqual(Object.fromEntries(statusesOf(before)));
  expect(after.windows).toEqual(before.windows);
});

law('a source that failed changes no verdict, is named and said', [requests, fc.constantFrom('unreachable', 'not-json', 'withheld', 'run-missing')], (seed, kind) => {
  const { input, judged } = dayOf(seed);
  const failed = judgeDay(withAnswers(input, [{ source: 'silent', kind: 'deterministic', outcome: { ok: false, error: { kind } } }, ...input.answers]));
  expect(Object.fromEntries(statusesOf(failed))).toEqual(Object.fromEntries(statusesOf(judged)));
  expect(failed.sources.find(({ source }) => source === 'silent')).toMatchObject({ state: 'no vote', why: expect.any(String) });
  expect(failed.cautions).toContainEqual(expect.objectContaining({ id: 'noVote', subject: 'silent' }));
});

law('a run that grows older than eighteen hours, or that is not ours, costs its source the vote: of nobody left comes cannot say', [requests, fc.constantFrom('old', 'future', 'elsewhere', 'another ground', 'no run time')], (seed, how) => {
  const { input } = dayOf(seed);
  const spoil = (value: Forecast): Forecast => {
    const issuedMs = epochOf(input.issuedAt);
    switch (how) {
      case 'old': return { ...value, runAt: isoUtc(issuedMs - 18 * HOUR_MS - 60_000) };
      case 'future': return { ...value, runAt: isoUtc(issuedMs + HOUR_MS + 60_000) };
      case 'elsewhere': return { ...value, gridDistanceM: 20_001 };
      case 'another ground': return { ...value, members: value.members.map((hours) => hours.map((hour, i) => ({ ...hour, gridElevationM: hour.gridElevationM + i }))) };
      case 'no run time': return { ...value, runAt: null };
    }
  };
  const day = judgeDay(withAnswers(input, forecastsOf(input).map(spoil).map(answerOf)));
  expect(day.sources.every(({ state }) => state === 'no vote')).toBe(true);
  expect(day.hours.map(({ verdict }) => verdict)).toEqual(day.hours.map(() => 'unknown'));
  expect(day.windows).toEqual([]);
});

law('hours, windows and day hang together: the worst margin is the hour, the worst hour the day, the cause one of both', [requests], (seed) => {
  const day = dayOf(seed).judged;
  for (const { verdict, margins, causes } of day.hours) {
    expect(verdict).toBe(worstVerdict(margins.map(({ status }) => status)));
    expect(causes.every((id) => margins.some((margin) => margin.id === id && margin.status !== 'within'))).toBe(true);
  }
  expect(day.verdict).toBe(worstVerdict(day.hours.map(({ verdict }) => verdict)));
  const caused = day.hours.find(({ validAt }) => validAt === day.cause?.validAt)?.margins.find(({ id }) => id === day.cause?.id);
  expect(caused?.status ?? 'within').toBe(day.verdict);
  for (const { from, to, lastLaunch, verdict } of day.windows) {
    const inside = day.hours.filter(({ validAt }) => validAt >= from && validAt <= to);
    expect(inside.length).toBeGreaterThan(1);
    expect(inside.every((hour) => isOpen(hour.verdict))).toBe(true);
    expect(verdict).toBe(worstVerdict(inside.map((hour) => hour.verdict)));
    if (lastLaunch !== null) expect(lastLaunch >= from && lastLaunch <= to).toBe(true);
  }
});

law('the column of airspeed adds up to the trim airspeed it stands for', [requests], (seed) => {
  for (const { airspeed } of dayOf(seed).judged.hours) {
    if (airspeed === null || airspeed.spareMps === null) continue;
    const { trimMps, headMps, crabMps, gustMps, reserveMps, spareMps } = airspeed;
    expect(headMps + crabMps + gustMps + reserveMps + spareMps).toBeCloseTo(trimMps, 9);
    expect(crabMps).toBeGreaterThanOrEqual(-1e-9);
  }
});

law('an hour explained is the hour judged: each number of a source has a working that adds up to it', [requests, fc.nat()], (seed, which) => {
  const { input, judged: day } = dayOf(seed);
  fc.pre(day.hours.length > 0);
  const hour = day.hours[which % day.hours.length]!;
  const { workings } = hourDetail(input)(hour);
  const numbers = hour.margins.filter(({ source, id, spare }) => source !== null && id !== 'agreement' && spare !== null);
  expect(workings.map(({ id }) => id)).toEqual(numbers.map(({ id }) => id));
  for (const { id, spare, unit } of numbers) {
    const terms = workings.find((each) => each.id === id)!.terms.filter((term) => term.unit === unit);
    expect(Math.abs(terms.reduce((sum, { value }) => sum + value, 0) - spare!)).toBeLessThan(1e-6 * Math.max(1, Math.abs(spare!)));
  }
});
