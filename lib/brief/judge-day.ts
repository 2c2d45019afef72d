import type { Forecast } from '../forecast/conditions.ts';
import { isInterpolated } from '../forecast/steps.ts';
import { adviceMps, flightTimeS } from '../margin/advice.ts';
import { ensembleHour } from '../margin/agreement.ts';
import type { HourView } from '../margin/hour-view.ts';
import type { Margin, MarginId, Verdict } from '../margin/ids.ts';
import { judgedRules, measure } from '../margin/judge-member.ts';
import type { Rule } from '../margin/rule.ts';
import { setUp, type Setup } from '../margin/setup.ts';
import { combine, tightness, type Vote } from '../margin/sources.ts';
import { lineDriftM } from '../margin/strip-rules.ts';
import { causesOf, moreSevere, worstVerdict } from '../margin/verdict.ts';
import { windowsOf, type WindowHour } from '../margin/window.ts';
import { hourlyInstants, isoUtc } from '../time.ts';
import { airspeedColumn } from './airspeed.ts';
import { cautionsOf } from './caution-rules.ts';
import type { CombinedMargin, JudgedDay, JudgedHour } from './day.ts';
import type { DayInput } from './day-input.ts';
import { pollSources, speaks, type Poll } from './voters.ts';

/**
 * Judges one site's day for one wing and one sheet: every source whose frame is trusted votes on every hour of the legal
 * day. A pure function of its input, so that a stored brief can be computed again.
 */
export function judgeDay(input: DayInput): JudgedDay {
  const setup = setUp(input);
  const day = setup.legalDayOf(input.localDate);
  const judgedMs = 'none' in day ? [] : hourlyInstants(day.fromMs, day.toMs);
  const poll = pollSources(input, setup, judgedMs);
  const { rules, notJudged } = judgedRules(setup);
  const hours = judgedMs.map((validAtMs) => judgeHour({ setup, rules, poll, validAtMs }));
  const windows = windowsOf(hours.map(({ hour, windowHour }) => ({ ...windowHour, verdict: hour.verdict })));
  const judged = hours.map(({ hour }) => hour);
  const agreementJudged = judged.some(({ margins }) => margins.some(({ id }) => id === 'agreement'));
  return {
    siteId: input.site.id, siteName: input.site.name, kind: input.site.kind, timeZone: input.site.timeZone, localDate: input.localDate,
    wingKey: input.wingKey, wingName: input.wingName, sheetId: input.sheet.id, sheetName: input.sheet.name, sheetVersion: input.sheet.version,
    issuedAt: input.issuedAt, validUntil: input.validUntil, demo: poll.demo,
    legalDay: 'none' in day ? { none: day.none } : { from: isoUtc(day.fromMs), to: isoUtc(day.toMs) },
    verdict: worstVerdict(judged.map(({ verdict }) => verdict)),
    cause: causeOf(judged),
    windows: windows.map(({ fromMs, toMs, lastLaunchMs, verdict }) => ({
      from: isoUtc(fromMs), to: isoUtc(toMs), lastLaunch: lastLaunchMs === null ? null : isoUtc(lastLaunchMs), verdict,
    })),
    hours: judged,
    sources: poll.votes,
    cautions: cautionsOf({ input, setup, poll, hours: judged, windows, legalDay: day }),
    notJudged: agreementJudged ? notJudged : [...notJudged, { id: 'agreement', why: whyNoAgreement(input, poll) }],
    localRules: input.site.localRules,
  };
}

function whyNoAgreement({ sheet }: DayInput, poll: Poll): string {
  if (sheet.limits.minAgreement === undefined) return 'the sheet has no minAgreement';
  return poll.ensembles.length === 0 ? 'no ensemble has a vote' : 'the ensemble gives nothing that is judged here';
}

interface HourInput {
  readonly setup: Setup;
  readonly rules: readonly Rule[];
  readonly poll: Poll;
  readonly validAtMs: number;
}

function judgeHour({ setup, rules, poll, validAtMs }: HourInput): { readonly hour: JudgedHour; readonly windowHour: Omit<WindowHour, 'verdict'> } {
  const voters = poll.deterministic.flatMap((voter) => {
    const view = voter.members[0]?.get(validAtMs);
    return view === undefined ? [] : [{ source: voter.source, view, speaks: speaks(voter), interpolated: isInterpolated(voter.forecast, isoUtc(validAtMs)) }];
  });
  const ballots = voters.map(({ source, view }) => ({ source, margins: rules.map((rule) => measure(rule, view)) }));
  const margins = rules.flatMap((rule, i): CombinedMargin[] => {
    if (ballots.length === 0) return [withoutVote(rule, setup)];
    const votes = ballots.flatMap(({ source, margins: own }): Vote[] => (own[i] === null || own[i] === undefined ? [] : [{ source, margin: own[i] }]));
    const combined = combine(votes);
    return combined === null ? [] : [shown(combined.margin, combined.source)];
  });
  const ensemble = ensembleOf({ setup, rules, poll, validAtMs });
  const all = ensemble.agreement === null ? margins : [...margins, ensemble.agreement];
  const speaking = voters.filter((voter) => voter.speaks).map(({ view }) => view);
  const flightS = speaking.map(flightTimeS).filter(Number.isFinite);
  const lead = speaking[0];
  const speed = lead === undefined ? NaN : adviceMps(lead);
  return {
    hour: {
      validAt: isoUtc(validAtMs),
      verdict: worstVerdict(all.map(({ status }) => status)),
      causes: causesOf(all),
      margins: all,
      bySource: voters.flatMap(({ source, speaks: judges }, i) => (judges ? [{ source, verdict: ownVerdict(ballots[i]?.margins ?? []) }] : [])),
      airspeed: airspeedColumn(speaking),
      speedToFlyMps: Number.isFinite(speed) ? speed : null,
      wind: windOf(voters.filter((voter) => voter.speaks)),
      ensemble: ensemble.shown,
      heading: setup.site.kind === 'strip' && lead !== undefined ? headingOf(lead) : null,
    },
    windowHour: { validAtMs, flightS: flightS.length === 0 ? NaN : Math.max(...flightS) },
  };
}

/** What one source would say alone: the margins it has a vote on. */
function ownVerdict(margins: readonly (Margin | null)[]): Verdict {
  return worstVerdict(margins.flatMap((margin) => (margin === null || margin.noVote ? [] : [margin.status])));
}

function shown(margin: Margin, source: string | null): CombinedMargin {
  const { noVote: _, ...rest } = margin;
  return { ...rest, source };
}

function withoutVote(rule: Rule, setup: Setup): CombinedMargin {
  const held = rule.limit(setup);
  return { id: rule.id, spare: null, limit: typeof held === 'number' && Number.isFinite(held) ? held : null, demand: null, unit: rule.unit, status: 'unknown', missing: [], source: null };
}

function ensembleOf({ setup, rules, poll, validAtMs }: HourInput): { readonly agreement: CombinedMargin | null; readonly shown: JudgedHour['ensemble'] } {
  const results = poll.ensembles.map((voter) => {
    const members = voter.members.flatMap((views) => views.get(validAtMs) ?? []);
    return { voter, source: voter.source, ...ensembleHour(rules, members, setup.sheet.limits.minAgreement) };
  });
  const combined = combine(results.flatMap(({ source, agreement }) => (agreement === null ? [] : [{ source, margin: agreement }])));
  const first = results[0];
  return {
    agreement: combined === null ? null : shown(combined.margin, combined.source),
    shown: first === undefined || first.about.length === 0 ? null : { about: first.about, spreads: first.spreads, ...between(first.voter.forecast, isoUtc(validAtMs)) },
  };
}

function between(forecast: Forecast, validAt: string): { readonly between?: { readonly stepHours: number } } {
  return forecast.stepHours !== undefined && isInterpolated(forecast, validAt) ? { between: { stepHours: forecast.stepHours } } : {};
}

function windOf(voters: readonly { readonly source: string; readonly view: HourView; readonly interpolated: boolean }[]): JudgedHour['wind'] {
  const bySource = voters.flatMap(({ source, view, interpolated }) => {
    const [strongest] = [...view.winds].sort((a, b) => b.meanMps - a.meanMps);
    if (strongest === undefined || Number.isNaN(strongest.meanMps)) return [];
    return [{ source, meanMps: strongest.meanMps, gustMps: Number.isNaN(strongest.gustMps) ? null : strongest.gustMps, fromDeg: Number.isNaN(strongest.fromDeg) ? null : strongest.fromDeg, ...(interpolated ? { interpolated } : {}) }];
  });
  if (bySource.length === 0) return null;
  const means = bySource.map(({ meanMps }) => meanMps);
  return { leastMps: Math.min(...means), mostMps: Math.max(...means), bySource };
}

function headingOf(view: HourView): NonNullable<JudgedHour['heading']> {
  const { releaseM } = view.tow.end;
  const drift = Number.isNaN(releaseM) ? NaN : lineDriftM(view);
  return { headingDeg: view.headingDeg, reason: view.tow.reason, releaseM: Number.isNaN(releaseM) ? null : releaseM, lineDriftM: Number.isNaN(drift) ? null : drift };
}

/** The most restrictive margin of the day: of the worst hours the tightest one, the earliest among equals. */
function causeOf(hours: readonly JudgedHour[]): { readonly id: MarginId; readonly validAt: string } | null {
  let worst: { readonly margin: CombinedMargin; readonly validAt: string } | null = null;
  for (const { margins, validAt } of hours) {
    for (const margin of margins) {
      if (margin.status === 'within') continue;
      const severity = worst === null ? 1 : moreSevere(margin.status, worst.margin.status);
      if (worst === null || severity > 0 || (severity === 0 && tightness(margin) < tightness(worst.margin))) worst = { margin, validAt };
    }
  }
  return worst === null ? null : { id: worst.margin.id, validAt: worst.validAt };
}
