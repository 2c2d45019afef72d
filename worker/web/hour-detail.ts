/** Workings and pictures of one hour, from the very views that its margins were measured on. */
import { componentsOfVector } from '../../lib/air/wind.ts';
import { heightsBetween, windAt } from '../../lib/air/profile.ts';
import type { CombinedMargin, JudgedHour } from '../../lib/brief/day.ts';
import type { DayInput } from '../../lib/brief/day-input.ts';
import { pollSources, speaks, type Voter } from '../../lib/brief/voters.ts';
import { glidePath } from '../../lib/margin/arrival-rule.ts';
import type { HourView } from '../../lib/margin/hour-view.ts';
import { judgedRules, workingOf } from '../../lib/margin/judge-member.ts';
import { gustOn, meanOn } from '../../lib/margin/launch-wind.ts';
import { setUp } from '../../lib/margin/setup.ts';
import { windOverStrip } from '../../lib/margin/strip-profile.ts';
import { flyTowOn } from '../../lib/margin/tow-heading.ts';
import { directSun, incidenceDeg, legalDay, sunAt } from '../../lib/sky/sun.ts';
import type { LaunchSite, Site, StripSite } from '../../lib/site.ts';
import { epochOf, hourlyInstants, isoUtc } from '../../lib/time.ts';
import type { OwnNumbers } from './own-numbers.ts';
import type { GlidePicture, HourDetail, LadderPicture, MarginWorking, SunPicture, TowPicture } from './page-services.ts';

/** How far above launch the wind ladder reaches, and how many points of a climb are drawn. */
const LADDER_ABOVE_LAUNCH_M = 1500;
const CLIMB_POINTS = 36;

type ViewOf = (source: string | null) => HourView | null;

export function hourDetail(input: DayInput): (hour: JudgedHour) => HourDetail {
  const setup = setUp(input);
  const day = legalDay(input.site, input.localDate);
  const poll = pollSources(input, setup, 'none' in day ? [] : hourlyInstants(day.fromMs, day.toMs));
  const { rules } = judgedRules(setup);
  return (hour) => {
    const viewOf = viewsAt(poll.deterministic, epochOf(hour.validAt));
    const workings = hour.margins.flatMap((margin): MarginWorking[] => {
      const rule = rules.find(({ id }) => id === margin.id);
      const view = viewOf(margin.source);
      if (rule === undefined || view === null || margin.source === null) return [];
      const terms = workingOf(rule, view);
      return addsUp(margin, terms) ? [{ id: margin.id, terms }] : [];
    });
    const sourceOf = (id: CombinedMargin['id']) => hour.margins.find((margin) => margin.id === id)?.source ?? null;
    return { workings, sun: sunOn(input, hour), given: givenIn(viewOf(null)), ...pictures(input.site, { hour, viewOf, sourceOf }) };
  };
}

/** The view of a source at an instant; of the first that speaks where none is named. */
function viewsAt(voters: readonly Voter[], validAtMs: number): ViewOf {
  return (source) => {
    const voter = source === null ? voters.find(speaks) : voters.find((candidate) => candidate.source === source);
    return voter?.members[0]?.get(validAtMs) ?? null;
  };
}

/** A stored brief may be older than the forecasts: a sum that does not give its spare is not its working. */
function addsUp(margin: CombinedMargin, terms: MarginWorking['terms']): boolean {
  if (margin.spare === null || terms.length === 0) return false;
  const sum = terms.filter(({ unit }) => unit === margin.unit).reduce((total, { value }) => total + value, 0);
  return Math.abs(sum - margin.spare) < 1e-6 * Math.max(1, Math.abs(margin.spare));
}

interface At {
  readonly hour: JudgedHour;
  readonly viewOf: ViewOf;
  readonly sourceOf: (id: CombinedMargin['id']) => string | null;
}

function pictures(site: Site, { hour, viewOf, sourceOf }: At): Pick<HourDetail, 'glide' | 'ladder' | 'tow'> {
  if (site.kind === 'strip') {
    const view = viewOf(sourceOf('towHeight'));
    const heading = hour.heading;
    return { glide: null, ladder: view === null ? null : ladderOf(view, { axisDeg: heading?.headingDeg ?? site.headingDeg, fromM: view.hour.gridElevationM, site }), tow: view === null || heading === null ? null : towOf(view, site, heading) };
  }
  const arrival = hour.margins.find(({ id }) => id === 'arrival');
  const glideView = viewOf(arrival?.source ?? null);
  const windView = viewOf(sourceOf('forwardLaunch'));
  return {
    glide: glideView === null || arrival === undefined || arrival.status === 'unknown' ? null : glideOf(glideView, site, arrival),
    ladder: windView === null ? null : ladderOf(windView, { axisDeg: site.facingDeg, fromM: site.landing.elevationM, site }),
    tow: null,
  };
}

function glideOf(view: HourView, site: LaunchSite, arrival: CombinedMargin): GlidePicture {
  return {
    launchM: site.elevationM, landingM: site.landing.elevationM, distanceM: site.distanceM,
    stillAir: glidePath(view, 'still'), inWind: glidePath(view, 'forecast'), arrivalM: arrival.demand, askedM: arrival.limit,
  };
}

function ladderOf(view: HourView, ladder: { readonly axisDeg: number; readonly fromM: number; readonly site: Site }): LadderPicture {
  const { axisDeg, fromM, site } = ladder;
  const rungs = heightsBetween(view.profile, [fromM, site.elevationM + 10, site.elevationM + LADDER_ABOVE_LAUNCH_M]).flatMap((altitudeM) => {
    const { uMps, vMps } = windAt(view.profile, altitudeM);
    const { headMps, crossMps } = componentsOfVector(uMps, vMps, axisDeg);
    return Number.isFinite(headMps) && Number.isFinite(crossMps) ? [{ altitudeM, headMps, crossMps }] : [];
  });
  return { rungs, trimMps: view.trimAt(site.elevationM), launchM: site.elevationM, landingM: site.kind === 'launch' ? site.landing.elevationM : null };
}

function towOf(view: HourView, site: StripSite, heading: NonNullable<JudgedHour['heading']>): TowPicture | null {
  const [wind] = view.winds;
  if (wind === undefined || heading.releaseM === null) return null;
  const points: { alongM: number; heightM: number }[] = [];
  flyTowOn(view, site, heading.headingDeg, ({ toWinchM, heightM }) => points.push({ alongM: site.lineLengthM - toWinchM, heightM }));
  const every = Math.max(1, Math.ceil(points.length / CLIMB_POINTS));
  const halfway = windOverStrip(view, site, heading.releaseM / 2);
  const toLeft = componentsOfVector(halfway.uMps, halfway.vMps, heading.headingDeg).crossMps >= 0;
  const mean = meanOn(wind, heading.headingDeg);
  const gust = gustOn(wind, heading.headingDeg);
  return {
    headingDeg: heading.headingDeg, lineLengthM: site.lineLengthM, releaseM: heading.releaseM, lineClearM: site.lineClearM,
    climb: points.filter((_, index) => index % every === 0 || index === points.length - 1),
    driftM: heading.lineDriftM === null ? null : heading.lineDriftM * (toLeft ? 1 : -1),
    headMps: mean.headMps, crossMps: mean.crossMps, gustMps: Number.isFinite(gust.headMps) ? wind.gustMps : null,
  };
}

/** What the forecast says of the hour; a number that is not there stays away. */
function givenIn(view: HourView | null): OwnNumbers | null {
  if (view === null) return null;
  const { wind10m, gustMps, precipitationMm, capeJkg } = view.hour;
  const { trimMps, glideAtTrim, minSinkMps } = view.setup.wing;
  const all = { wind: wind10m.speedMps, from: wind10m.fromDeg, gust: gustMps, rain: precipitationMm, cape: capeJkg, trim: trimMps, glide: glideAtTrim, sink: minSinkMps };
  return Object.fromEntries(Object.entries(all).filter(([, value]) => Number.isFinite(value)));
}

function sunOn(input: DayInput, hour: JudgedHour): SunPicture | null {
  const { site } = input;
  if (site.kind !== 'launch') return null;
  const span = directSun(site, site, input.localDate);
  const incidence = incidenceDeg(sunAt(epochOf(hour.validAt), site), site);
  return { first: span === null ? null : isoUtc(span.firstMs), last: span === null ? null : isoUtc(span.lastMs), incidenceDeg: incidence !== null && incidence < 90 ? incidence : null };
}
