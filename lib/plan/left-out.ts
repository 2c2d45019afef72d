/** Why a group has no place in the best plan. */
import { longestRun } from './bits.ts';
import type { Cell, Closed } from './cells.ts';
import type { LeftOut } from './day-plan.ts';
import { siteName, type Posed } from './pose.ts';
import type { Puzzle } from './puzzle.ts';
import { slotsAt } from './room.ts';
import { search } from './search.ts';

export function leftOutOf(posed: Posed, group: number, placed: number): LeftOut {
  const { puzzle, request } = posed;
  const own = request.groups[group];
  const needed = own?.instructors ?? 0;
  if (needed > puzzle.instructors) return { kind: 'instructors', needed };
  const runs = (slotsAt(puzzle, -Infinity)[group] ?? []).map(longestRun);
  if (Math.max(0, ...runs) >= (own?.minHours ?? Infinity)) return { kind: 'shared', lacking: lacking(puzzle, placed) };
  // The nearest site is the one with the longest run, among equals the one that the group named first.
  const candidates = (own?.sites ?? []).map((id) => request.sites.findIndex((site) => site.id === id));
  const nearest = candidates.reduce((best, site) => ((runs[site] ?? 0) > (runs[best] ?? 0) ? site : best), candidates[0] ?? 0);
  const site = request.sites[nearest]?.id ?? '';
  return { kind: 'no hours', site, siteName: siteName(posed, site), longestHours: runs[nearest] ?? 0, cause: mainCause(posed.cells[group]?.[nearest] ?? []) };
}

/** With places without end one more could be placed; or with instructors without end; or only with both. */
function lacking(puzzle: Puzzle, placed: number): Extract<LeftOut, { kind: 'shared' }>['lacking'] {
  const many = puzzle.groups.length;
  const isEnough = (other: Puzzle): boolean => search(other, { threshold: -Infinity, leaveOut: many - placed - 1, anyPlan: true, nodeBudget: 5_000 }).stays !== null;
  if (isEnough({ ...puzzle, capacity: puzzle.capacity.map(() => many) })) return 'places';
  const staff = puzzle.groups.reduce((sum, { instructors }) => sum + instructors, 0);
  return isEnough({ ...puzzle, instructors: staff }) ? 'instructors' : 'places and instructors';
}

/** What closes most of the slots; among equals the first of the day. Hours that the group never asked for count last. */
function mainCause(cells: readonly Cell[]): Closed | null {
  const counts = new Map<string, { readonly closed: Closed; count: number }>();
  for (const { closed } of cells) {
    if (closed === null || closed.kind === 'group hours') continue;
    const name = closed.kind === 'margin' ? `${closed.verdict} ${closed.margin?.id ?? ''}` : closed.kind;
    const found = counts.get(name);
    if (found === undefined) counts.set(name, { closed, count: 1 });
    else found.count += 1;
  }
  const [most] = [...counts.values()].sort((a, b) => b.count - a.count);
  return most?.closed ?? cells.find(({ closed }) => closed !== null)?.closed ?? null;
}
