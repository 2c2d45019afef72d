/** From a request and its judged days to the puzzle, with the cells kept so that the answer can be explained. */
import { MINUTE_MS, HOUR_MS } from '../time.ts';
import { cellOf, type Cell } from './cells.ts';
import type { Puzzle } from './puzzle.ts';
import { dayKey, type JudgedDays, type PlanRequest } from './request.ts';
import { slotsOf, type Slot } from './slots.ts';

export interface Posed {
  readonly request: PlanRequest;
  readonly days: JudgedDays;
  readonly slots: readonly Slot[];
  /** By group, site, slot; null at a site that is none of the group's. */
  readonly cells: readonly (readonly (readonly Cell[] | null)[])[];
  readonly puzzle: Puzzle;
}

export function pose(request: PlanRequest, days: JudgedDays, timeZone: string): Posed {
  const slots = slotsOf(days, timeZone);
  const isLost = (site: string, slot: Slot): boolean => request.lost.some((lost) => lost.site === site && lost.hour === Math.floor(slot.startMin / 60));
  const cells = request.groups.map((group) => request.sites.map((site) => {
    if (!group.sites.includes(site.id)) return null;
    const day = days.get(dayKey({ site: site.id, wing: group.wing, sheet: group.sheet }));
    return slots.map((slot) => cellOf({ group, site, slot, day, isLost: isLost(site.id, slot) }));
  }));
  const never = slots.map(() => NaN);
  return {
    request, days, slots, cells,
    puzzle: {
      slots: slots.length,
      instructors: request.instructors,
      capacity: request.sites.map(({ capacity }) => capacity),
      gapSlots: request.sites.map(({ id }) => request.sites.map((other) => Math.ceil((movingMinutes(request, id, other.id) * MINUTE_MS) / HOUR_MS))),
      groups: request.groups.map(({ minHours, wishHours, instructors }, group) => ({
        minHours, wishHours, instructors, spare: (cells[group] ?? []).map((own) => own?.map(({ spare }) => spare) ?? never),
      })),
    },
  };
}

export function movingMinutes(request: PlanRequest, a: string, b: string): number {
  if (a === b) return 0;
  return request.moves.find(({ from, to }) => (from === a && to === b) || (from === b && to === a))?.minutes ?? request.movingMin;
}

export function siteName(posed: Posed, site: string): string {
  return [...posed.days.values()].find(({ siteId }) => siteId === site)?.siteName ?? site;
}
