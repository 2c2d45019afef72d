import type { Forecast } from '../forecast/conditions.ts';
import type { SourceFailure } from '../forecast/failure.ts';
import { checkFrame } from '../forecast/frame.ts';
import { runAgeHours } from '../forecast/ages.ts';
import { checkHour } from '../forecast/ranges.ts';
import { viewsOf, type BorrowMixedLayer } from '../margin/judge-member.ts';
import type { HourView } from '../margin/hour-view.ts';
import type { Setup } from '../margin/setup.ts';
import { epochOf, HOUR_MS, isoUtc } from '../time.ts';
import type { DayInput } from './day-input.ts';
import type { SourceVote } from './day.ts';
import { failureSentence } from './words/failures.ts';

/** A source whose frame is trusted, as views of its members at every instant it gives. */
export interface Voter {
  readonly source: string;
  readonly forecast: Forecast;
  /** One map from instant to view a member. */
  readonly members: readonly ReadonlyMap<number, HourView>[];
}

export interface Poll {
  readonly deterministic: readonly Voter[];
  readonly ensembles: readonly Voter[];
  readonly votes: readonly SourceVote[];
  readonly failures: readonly { readonly source: string; readonly failure: SourceFailure }[];
  readonly demo: boolean;
}

/** Whether a source judges winds itself; one that only lends a mixed-layer depth does not. */
export function speaks({ forecast }: { readonly forecast: Forecast }): boolean {
  return forecast.declares.includes('wind10m') || forecast.declares.includes('levels');
}

/** Checks every answer's frame at the moment of issue and turns the trusted ones into views. */
export function pollSources(input: DayInput, setup: Setup, judgedMs: readonly number[]): Poll {
  const failures: Poll['failures'][number][] = [];
  const trusted: Forecast[] = [];
  const votes = input.answers.map(({ source, kind, outcome }): SourceVote => {
    const frame = outcome.ok
      ? checkFrame(outcome.value, { now: input.issuedAt, site: input.site, storedGroundM: input.storedGroundM, judgedInstants: judgedMs.map(isoUtc) })
      : outcome;
    const forecast = outcome.ok ? outcome.value : null;
    if (frame.ok) trusted.push(frame.value);
    else failures.push({ source, failure: frame.error });
    return {
      source, kind, state: frame.ok ? 'voted' : 'no vote', why: frame.ok ? null : failureSentence(frame.error),
      runAt: forecast?.runAt ?? null, fetchedAt: forecast?.fetchedAt ?? null,
      runAgeHours: forecast === null ? null : runAgeHours(forecast.runAt, input.issuedAt),
      members: forecast?.members.length ?? 0, declares: forecast?.declares ?? [],
      gridElevationM: forecast?.members[0]?.[0]?.gridElevationM ?? null,
      ...(forecast?.stepHours === undefined ? {} : { stepHours: forecast.stepHours }),
    };
  });
  const borrow = borrowing(trusted);
  const deterministic: Voter[] = [];
  for (const forecast of trusted.filter(({ kind }) => kind === 'deterministic')) {
    deterministic.push(voterOf(forecast, setup, { borrow, leader: deterministic.find(speaks) ?? null }));
  }
  const leader = deterministic.find(speaks) ?? null;
  const ensembles = trusted.filter(({ kind }) => kind === 'ensemble').map((forecast) => voterOf(around(forecast, judgedMs), setup, { borrow, leader }));
  return { deterministic, ensembles, votes, failures, demo: input.demo || input.answers.some(({ outcome }) => outcome.ok && outcome.value.demo) };
}

/** An ensemble cut to the judged hours and the two after them: nobody looks at its others. */
function around(forecast: Forecast, judgedMs: readonly number[]): Forecast {
  const fromMs = judgedMs[0] ?? Infinity;
  const toMs = (judgedMs.at(-1) ?? -Infinity) + 2 * HOUR_MS;
  const kept = (forecast.members[0] ?? []).map(({ validAt }) => epochOf(validAt)).map((atMs) => atMs >= fromMs && atMs <= toMs);
  return { ...forecast, members: forecast.members.map((hours) => hours.filter((_, i) => kept[i])) };
}

/** The first source in order sets the heading of the tow; the others judge that heading. */
function voterOf(forecast: Forecast, setup: Setup, context: { readonly borrow: BorrowMixedLayer; readonly leader: Voter | null }): Voter {
  const { leader } = context;
  const setHeading = (validAtMs: number): { headingDeg: number; by: string } | null => {
    const view = setup.site.kind === 'strip' ? leader?.members[0]?.get(validAtMs) : undefined;
    return view === undefined || leader === null ? null : { headingDeg: view.headingDeg, by: leader.source };
  };
  const members = forecast.members.map((hours) => {
    const checked = hours.map(checkHour);
    const views = viewsOf(setup, checked, { declares: new Set(forecast.declares), borrow: context.borrow, setHeading });
    return new Map(views.map((view) => [view.hour.validAtMs, view]));
  });
  return { source: forecast.source, forecast, members };
}

/** The first source that gives a mixed-layer depth lends it to those that do not. */
function borrowing(trusted: readonly Forecast[]): BorrowMixedLayer {
  const lender = trusted.find(({ kind, declares }) => kind === 'deterministic' && declares.includes('mixedLayerM'));
  if (lender === undefined) return () => null;
  const depths = new Map((lender.members[0] ?? []).map((hour) => [epochOf(hour.validAt), checkHour(hour).mixedLayerM]));
  return (validAtMs) => ({ depthM: depths.get(validAtMs) ?? NaN, source: lender.source });
}
