import { speedAt, windAt } from '../air/profile.ts';
import { componentsOfVector } from '../air/wind.ts';
import { glidePath } from '../margin/arrival-rule.ts';
import type { HourView } from '../margin/hour-view.ts';
import type { MarginId, Term } from '../margin/ids.ts';
import { judgedRules, measure, workingOf } from '../margin/judge-member.ts';
import { setUp } from '../margin/setup.ts';
import { combine } from '../margin/sources.ts';
import { readAtM, windOverStrip } from '../margin/strip-profile.ts';
import { flyTowOn } from '../margin/tow-heading.ts';
import { epochOf, hourlyInstants } from '../time.ts';
import type { GlidePoint } from '../wing/glide.ts';
import type { TowPoint } from '../wing/tow.ts';
import type { DayInput } from './day-input.ts';
import { pollSources, speaks } from './voters.ts';

/** A rung of the wind ladder: the wind along and across the launch axis (or tow heading) at a height, and the wing's trim there. */
export interface LadderRung {
  readonly altitudeM: number;
  readonly headMps: number;
  readonly crossMps: number;
  readonly speedMps: number;
  readonly trimMps: number | null;
}

/** The workings and pictures of one hour, made only when somebody looks. Their source is the first that has a vote. */
export interface HourExplained {
  readonly validAt: string;
  readonly source: string | null;
  readonly workings: readonly { readonly id: MarginId; readonly source: string; readonly working: readonly Term[] }[];
  /** Rising. */
  readonly ladder: readonly LadderRung[];
  readonly glide: { readonly still: readonly GlidePoint[]; readonly forecast: readonly GlidePoint[]; readonly launchM: number; readonly landingM: number; readonly distanceM: number } | null;
  readonly tow: { readonly points: readonly TowPoint[]; readonly headingDeg: number; readonly lineLengthM: number; readonly surface: { readonly headMps: number; readonly crossMps: number } } | null;
}

/** Explains one hour of a day, from the same input as judgeDay and by the same code. */
export function explainHour(input: DayInput, validAt: string): HourExplained {
  const setup = setUp(input);
  const day = setup.legalDayOf(input.localDate);
  const poll = pollSources(input, setup, 'none' in day ? [] : hourlyInstants(day.fromMs, day.toMs));
  const atMs = epochOf(validAt);
  const voters = poll.deterministic.flatMap((voter) => {
    const view = voter.members[0]?.get(atMs);
    return view === undefined ? [] : [{ source: voter.source, view, leads: speaks(voter) }];
  });
  const workings = judgedRules(setup).rules.flatMap((rule) => {
    const votes = voters.flatMap(({ source, view }) => {
      const margin = measure(rule, view);
      return margin === null ? [] : [{ source, margin }];
    });
    const deciding = combine(votes)?.source ?? null;
    const view = voters.find(({ source }) => source === deciding)?.view;
    return deciding === null || view === undefined ? [] : [{ id: rule.id, source: deciding, working: workingOf(rule, view) }];
  });
  const lead = voters.find(({ leads }) => leads);
  return {
    validAt, source: lead?.source ?? null, workings,
    ladder: lead === undefined ? [] : ladderOf(lead.view),
    glide: lead === undefined ? null : glideOf(lead.view),
    tow: lead === undefined ? null : towOf(lead.view),
  };
}

/** Rungs above and below the site that belong in the picture, m. */
const LADDER_BELOW_M = 600;
const LADDER_ABOVE_M = 2000;

function ladderOf(view: HourView): LadderRung[] {
  const { site } = view.setup;
  const axisDeg = site.kind === 'launch' ? site.facingDeg : view.headingDeg;
  const atM = site.kind === 'launch' ? site.elevationM + 10 : readAtM(view, site, 10);
  const heights = [...new Set([...view.profile.altitudeM, atM])].filter((z) => z >= site.elevationM - LADDER_BELOW_M && z <= site.elevationM + LADDER_ABOVE_M).sort((a, b) => a - b);
  return heights.flatMap((altitudeM) => {
    const { uMps, vMps } = windAt(view.profile, altitudeM, true);
    const speedMps = speedAt(view.profile, altitudeM, true);
    if (Number.isNaN(speedMps)) return [];
    const trimMps = view.trimAt(altitudeM);
    return [{ altitudeM, ...componentsOfVector(uMps, vMps, axisDeg), speedMps, trimMps: Number.isNaN(trimMps) ? null : trimMps }];
  });
}

function glideOf(view: HourView): HourExplained['glide'] {
  const { site } = view.setup;
  if (site.kind !== 'launch') return null;
  return { still: glidePath(view, 'still'), forecast: glidePath(view, 'forecast'), launchM: site.elevationM, landingM: site.landing.elevationM, distanceM: site.distanceM };
}

function towOf(view: HourView): HourExplained['tow'] {
  const { site } = view.setup;
  if (site.kind !== 'strip') return null;
  const points: TowPoint[] = [];
  const end = flyTowOn(view, site, view.headingDeg, (point) => points.push(point));
  const surface = windOverStrip(view, site, 10);
  if (Number.isNaN(end.releaseM) || Number.isNaN(surface.uMps)) return null;
  return { points, headingDeg: view.headingDeg, lineLengthM: site.lineLengthM, surface: componentsOfVector(surface.uMps, surface.vMps, view.headingDeg) };
}
