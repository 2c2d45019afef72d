/** A stay of the puzzle as a block of the plan, with the reasons why it stands. */
import { worstVerdict } from '../margin/verdict.ts';
import { epochOf, HOUR_MS, isoUtc } from '../time.ts';
import type { Best } from './best-stays.ts';
import type { Block, BlockEnd } from './day-plan.ts';
import { movingMinutes, siteName, type Posed } from './pose.ts';
import type { Stay } from './puzzle.ts';
import { dayKey } from './request.ts';

export type Place = Pick<Block, 'site' | 'siteName' | 'from' | 'to'>;

export function placeOf(posed: Posed, stay: Stay): Place {
  const site = posed.request.sites[stay.site]?.id ?? '';
  return { site, siteName: siteName(posed, site), from: posed.slots[stay.from]?.from ?? '', to: posed.slots[stay.to - 1]?.to ?? '' };
}

export function blockOf(posed: Posed, group: number, { nth, best }: { readonly nth: number; readonly best: Best }): Block {
  const stays = best.stays[group] ?? [];
  const [stay, before] = [stays[nth], stays[nth - 1]];
  if (stay === undefined) throw new Error(`group ${group} has no stay ${nth}`);
  const place = placeOf(posed, stay);
  const own = posed.request.groups[group];
  const cells = posed.cells[group]?.[stay.site] ?? [];
  const day = own === undefined ? undefined : posed.days.get(dayKey({ site: place.site, wing: own.wing, sheet: own.sheet }));
  const instants = instantsOf(place);
  const hours = (day?.hours ?? []).filter(({ validAt }) => instants.includes(validAt));
  const tightest = cells.slice(stay.from, stay.to).reduce((least, cell) => (cell.spare < least.spare ? cell : least));
  return {
    ...place,
    hours: stay.to - stay.from,
    verdict: hours.length === instants.length ? worstVerdict(hours.map(({ verdict }) => verdict)) : 'unknown',
    closeAt: hours.filter(({ verdict }) => verdict === 'close').map(({ validAt }) => validAt),
    spare: tightest.spare,
    tightest: tightest.tightest,
    window: day?.windows.find(({ from, to }) => epochOf(from) <= epochOf(place.from) && epochOf(place.to) <= epochOf(to)) ?? null,
    endsAt: endOf(posed, group, { stay, best }),
    movingMin: before === undefined ? null : movingMinutes(posed.request, posed.request.sites[before.site]?.id ?? '', place.site),
  };
}

function endOf(posed: Posed, group: number, { stay, best }: { readonly stay: Stay; readonly best: Best }): BlockEnd | null {
  const after = posed.cells[group]?.[stay.site]?.[stay.to];
  if (after === undefined) return null;
  if (after.closed !== null) return after.closed;
  const hours = (best.stays[group] ?? []).reduce((sum, { from, to }) => sum + to - from, 0);
  if (hours >= (posed.request.groups[group]?.wishHours ?? 0)) return { kind: 'wish' };
  return after.spare < best.objective.spare ? { kind: 'less spare', spare: after.spare } : { kind: 'elsewhere' };
}

/** The judged instants of a block, its first and its last included. */
export function instantsOf({ from, to }: Pick<Block, 'from' | 'to'>): string[] {
  const instants: string[] = [];
  for (let at = epochOf(from); at <= epochOf(to); at += HOUR_MS) instants.push(isoUtc(at));
  return instants;
}
