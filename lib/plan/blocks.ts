/** A stay of the puzzle as a block of the plan, with the reasons why it stands. */
import { worstVerdict } from '../margin/verdict.ts';
import { epochOf, HOUR_MS, isoUtc } from '../time.ts';
import type { Block } from './day-plan.ts';
import { movingMinutes, siteName, type Posed } from './pose.ts';
import type { Stay } from './puzzle.ts';
import { dayKey } from './request.ts';

export type Place = Pick<Block, 'site' | 'siteName' | 'from' | 'to'>;

export function placeOf(posed: Posed, stay: Stay): Place {
  const site = posed.request.sites[stay.site]?.id ?? '';
  return { site, siteName: siteName(posed, site), from: posed.slots[stay.from]?.from ?? '', to: posed.slots[stay.to - 1]?.to ?? '' };
}

export function blockOf(posed: Posed, group: number, { stay, before }: { readonly stay: Stay; readonly before: Stay | undefined }): Block {
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
    endsAt: cells[stay.to]?.closed ?? null,
    movingMin: before === undefined ? null : movingMinutes(posed.request, posed.request.sites[before.site]?.id ?? '', place.site),
  };
}

/** The judged instants of a block, its first and its last included. */
export function instantsOf({ from, to }: Pick<Block, 'from' | 'to'>): string[] {
  const instants: string[] = [];
  for (let at = epochOf(from); at <= epochOf(to); at += HOUR_MS) instants.push(isoUtc(at));
  return instants;
}
