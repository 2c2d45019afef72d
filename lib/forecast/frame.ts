/**
 * The frame of a forecast: is it the right time, the right place, the right run, and not a stuck feed? Checked when it is
 * judged, with `now` the moment the brief is issued. A frame that fails costs the source its vote; a missing hour inside
 * it costs that hour only and comes back as an hour without fields, which every margin reads as unknown.
 * Units are part of the frame too, but only an adapter sees them: it fails before there is a Forecast.
 */
import { MAX_RUN_AGE_H, MAX_RUN_AHEAD_H, runAgeHours } from './ages.ts';
import type { Conditions, Forecast } from './conditions.ts';
import { constantField } from './constant.ts';
import type { SourceFailure } from './failure.ts';
import { timesFault } from './instants.ts';
import { MAX_GRID_DISTANCE_M, MAX_GROUND_ABOVE_SITE_M, MAX_GROUND_CHANGE_M } from './place.ts';
import { plausible } from './ranges.ts';
import { failure, success, type Result } from '../result.ts';
import type { PlaceM } from '../site.ts';
import { epochOf, HOUR_MS, hourlyInstants, isoUtc } from '../time.ts';

export interface FrameContext {
  /** When the brief is issued, ISO 8601 UTC. */
  readonly now: string;
  readonly site: PlaceM;
  /** Model ground last stored for each source at this site. */
  readonly storedGroundM: Readonly<Record<string, number>>;
  /** The hourly instants that will be judged, ISO 8601 UTC. */
  readonly judgedInstants: readonly string[];
  /** How far a grid point may be; a service on a coarser grid needs more than the default. */
  readonly maxGridDistanceM?: number;
}

/** The forecast with every hour of its day present and in order, or why it has no vote. */
export function checkFrame(forecast: Forecast, context: FrameContext): Result<Forecast, SourceFailure> {
  const members = forecast.members;
  const stamps = (members[0] ?? []).map((hour) => epochOf(hour.validAt));
  const judged = context.judgedInstants.map(epochOf);
  const fault =
    runFault(forecast, context) ??
    stampsFault(members, stamps, judged) ??
    placeFault(forecast, context) ??
    groundFault(forecast, context);
  if (fault !== null) return failure(fault);
  const completed = members.map((hours) => complete(hours, stamps, { judged, nowMs: epochOf(context.now) }));
  const stuck = stuckFault(completed);
  return stuck === null ? success({ ...forecast, members: completed }) : failure(stuck);
}

function runFault(forecast: Forecast, context: FrameContext): SourceFailure | null {
  if (forecast.runAt === null && forecast.trustedWithoutRunTime) return null;
  const ageHours = runAgeHours(forecast.runAt, context.now);
  if (ageHours === null) return { kind: 'run-missing' };
  if (ageHours > MAX_RUN_AGE_H) return { kind: 'run-old', ageHours };
  return ageHours < -MAX_RUN_AHEAD_H ? { kind: 'run-future', aheadHours: -ageHours } : null;
}

function stampsFault(members: Forecast['members'], stamps: readonly number[], judged: readonly number[]): SourceFailure | null {
  const why = timesFault(stamps);
  if (why !== null) return { kind: 'times', why };
  const first = members[0] ?? [];
  const isShared = members.every((hours) => hours.length === first.length && hours.every((hour, i) => hour.validAt === first[i]?.validAt));
  if (!isShared) return { kind: 'times', why: 'gap' };
  const delivered = new Set(stamps);
  const isOurDay = judged.length === 0 || judged.some((at) => delivered.has(at));
  return isOurDay ? null : { kind: 'times', why: 'wrong-day' };
}

function placeFault(forecast: Forecast, context: FrameContext): SourceFailure | null {
  const distanceM = forecast.gridDistanceM;
  if (distanceM === null) return null;
  return distanceM <= (context.maxGridDistanceM ?? MAX_GRID_DISTANCE_M) ? null : { kind: 'place', distanceKm: distanceM / 1000 };
}

function groundFault(forecast: Forecast, context: FrameContext): SourceFailure | null {
  const grounds = forecast.members.flat().map((hour): unknown => hour.gridElevationM);
  const ground = grounds[0];
  if (typeof ground !== 'number' || Number.isNaN(plausible(ground, 'elevationM'))) return { kind: 'ground', why: 'missing', byM: null };
  if (grounds.some((other) => other !== ground)) return { kind: 'ground', why: 'changed', byM: null };
  const movedM = Math.abs(ground - (context.storedGroundM[forecast.source] ?? ground));
  if (movedM > MAX_GROUND_CHANGE_M) return { kind: 'ground', why: 'changed', byM: movedM };
  const aboveM = ground - context.site.elevationM;
  return aboveM > MAX_GROUND_ABOVE_SITE_M ? { kind: 'ground', why: 'above-site', byM: aboveM } : null;
}

function stuckFault(members: Forecast['members']): SourceFailure | null {
  for (const hours of members) {
    const field = constantField(hours);
    if (field !== null) return { kind: 'constant', field };
  }
  return null;
}

/** How far around the judged hours a frame is of use: for what comes before and after a window. */
const AROUND_MS = 36 * HOUR_MS;
/** What must be known beyond the last judged hour: a thunderstorm in the next two counts. */
const AHEAD_MS = 2 * HOUR_MS;

/**
 * Every hour from the first to the last that is judged, or looked at for one that is, or, within reach of those,
 * delivered; what was not delivered has no fields. An hour that had passed, and that the source begins after (services
 * that begin with the current hour, asked again at noon), is not put in: the source has no vote on it. Nothing is judged
 * where there is no legal day: then the hours stay as they are.
 */
function complete(hours: readonly Conditions[], stamps: readonly number[], day: { readonly judged: readonly number[]; readonly nowMs: number }): readonly Conditions[] {
  const [firstMs, lastMs] = [Math.min(...day.judged), Math.max(...day.judged)];
  if (!Number.isFinite(firstMs)) return hours;
  const near = stamps.filter((at) => at >= firstMs - AROUND_MS && at <= lastMs + AROUND_MS);
  const begunMs = Math.min(...near);
  const gridElevationM = hours[0]?.gridElevationM ?? NaN;
  const byStamp = new Map(hours.map((hour, i) => [stamps[i], hour]));
  return hourlyInstants(Math.min(firstMs, begunMs), Math.max(lastMs + AHEAD_MS, ...near))
    .filter((at) => at >= begunMs || at >= day.nowMs - HOUR_MS)
    .map((at) => byStamp.get(at) ?? { validAt: isoUtc(at), gridElevationM });
}
