/**
 * Branch and bound over the groups, the most confined first or the one that needs most instructors: each is given its
 * ways in order of worth (hours, then few moves), and a branch ends where what is still to be had cannot beat the best so
 * far. Bounds are each group's own room, the instructors that can be used, and the flow of mostHours; states that were searched before (the same groups to come, the same room for them) are not
 * searched again. Exact unless the search runs out of `nodeBudget`, which it then says.
 */
import { demandOf, stateOf, type Demand } from './demand.ts';
import { mostHoursOf } from './most-hours.ts';
import { alone, HOUR_WORTH, inOrder, type First } from './order.ts';
import type { Puzzle, Stay } from './puzzle.ts';
import { roomFor, slotsAt, type GroupRoom } from './room.ts';
import type { Found, SearchOptions } from './search.ts';
import { mostUsed, staffedHours } from './staffed-hours.ts';
import { eachWay } from './stays.ts';

/** Most moves of a plan, in the order in which they are asked for. */
const MOVES_ASKED = [0, 1, 2, 3, 5, HOUR_WORTH - 1] as const;

const NO_DEMAND: Demand = { places: [], staff: 0 };

/** What groups to come can be worth together at most, and the hours that they can have; Infinity where those were not looked at. */
interface Bound {
  readonly waiting: readonly Waiting[];
  readonly worth: number;
  readonly hours: number;
}

interface Waiting {
  readonly group: number;
  readonly room: GroupRoom;
}

export function searchBy(first: First, whole: Puzzle, options: SearchOptions): Found {
  const puzzle = options.anyPlan ? { ...whole, groups: whole.groups.map((group) => ({ ...group, wishHours: group.minHours })) } : whole;
  const slots = slotsAt(puzzle, options.threshold);
  const room = roomFor(puzzle, slots);
  const mostHours = mostHoursOf(puzzle);
  const order = inOrder(puzzle, (group) => room.of(group), first);
  const demand = demandOf(puzzle, slots, order);
  const known = new Map<string, number>();
  const chosen: (readonly Stay[])[] = puzzle.groups.map(() => []);
  let best: { readonly worth: number; readonly stays: readonly (readonly Stay[])[] } | null = null;
  let nodes = 0;

  /** What a plan must be worth more than: the best so far, or the hours that are asked for at the moment. */
  let floor = -1;
  const bestWorth = (): number => Math.max(floor, best?.worth ?? -1);
  let budget = options.nodeBudget;
  let anyPlan = options.anyPlan;
  const isOver = (): boolean => nodes > budget || (anyPlan && best !== null);

  /** What the groups from `depth` on can be worth at most; null when too many of them have no room. */
  function bound(depth: number, leaveOut: number, needed: number): Bound | null {
    const all = order.slice(depth).map((group) => ({ group, room: room.of(group) }));
    const waiting = all.filter((each) => each.room.mostHours > 0);
    const spareLeaves = leaveOut - (all.length - waiting.length);
    if (spareLeaves < 0) return null;
    const worth = waiting.reduce((sum, each) => sum + alone(each.room), 0);
    if (worth <= needed || waiting.length < 2) return { waiting, worth, hours: Infinity };
    const staffed = staffedHours(waiting.map((each) => ({ ...hoursOf(each.group), mostHours: each.room.mostHours })), staffLeftFor(waiting), spareLeaves);
    if (staffed < 0) return null;
    const byStaff = Math.min(worth, staffed * HOUR_WORTH);
    if (byStaff <= needed) return { waiting, worth: byStaff, hours: staffed };
    const flow = mostHours(waiting, room);
    const least = waiting.map(({ group }) => puzzle.groups[group]?.minHours ?? 0).sort((a, b) => a - b).slice(0, waiting.length - spareLeaves);
    if (flow < least.reduce((sum, hours) => sum + hours, 0)) return null;
    return { waiting, worth: Math.min(byStaff, flow * HOUR_WORTH), hours: Math.min(staffed, flow) };
  }

  function hoursOf(group: number): { readonly instructors: number; readonly minHours: number } {
    const { instructors, minHours } = puzzle.groups[group] ?? { instructors: 0, minHours: Infinity };
    return { instructors, minHours };
  }

  /** Hours of instructors that could be used: in each slot as many as some of the groups that could be out then add up to. */
  function staffLeftFor(waiting: readonly Waiting[]): number {
    const out = waiting.map((each) => ({ need: hoursOf(each.group).instructors, slots: each.room.bySite.reduce((bits, more) => bits | more, 0) }));
    return room.staffLeft.reduce((sum, left, slot) => sum + mostUsed(out.flatMap(({ need, slots: open }) => ((open & (1 << slot)) === 0 ? [] : [need])), left), 0);
  }

  function descend(depth: number, worth: number, leaveOut: number): void {
    if (depth === order.length) {
      if (worth > bestWorth()) best = { worth, stays: [...chosen] };
      return;
    }
    const state = `${depth} ${leaveOut} ${stateOf(demand[depth] ?? NO_DEMAND, room)}`;
    const knownWorth = known.get(state);
    if (knownWorth !== undefined && worth + knownWorth <= bestWorth()) return;
    const atMost = bound(depth, leaveOut, bestWorth() - worth);
    if (atMost === null || worth + atMost.worth <= bestWorth()) {
      known.set(state, bestWorth() - worth);
      return;
    }
    const group = order[depth] ?? 0;
    const own = atMost.waiting.find((each) => each.group === group);
    const rest = atMost.waiting.reduce((sum, each) => sum + (each.group === group ? 0 : alone(each.room)), 0);
    if (own !== undefined) place({ own, depth, worth, leaveOut, rest, together: atMost.hours });
    if (leaveOut > 0 && worth + rest > bestWorth() && !isOver()) descend(depth + 1, worth, leaveOut - 1);
    if (!isOver()) known.set(state, bestWorth() - worth);
  }

  function place({ own, depth, worth, leaveOut, rest, together }: { own: Waiting; depth: number; worth: number; leaveOut: number; rest: number; together: number }): void {
    const { minHours } = hoursOf(own.group);
    for (let hours = own.room.mostHours; hours >= minHours; hours -= 1) {
      for (let stays = 1; stays * minHours <= hours; stays += 1) {
        const gain = hours * HOUR_WORTH - (stays - 1);
        if (worth + together * HOUR_WORTH - (stays - 1) <= bestWorth()) break;
        const ended = eachWay(puzzle, { ...own, hours, stays }, (ways) => {
          if (isOver() || worth + gain + rest <= bestWorth()) return true;
          nodes += 1;
          const taken = [...ways];
          chosen[own.group] = taken;
          room.occupy(own.group, taken, 1);
          descend(depth + 1, worth + gain, leaveOut);
          room.occupy(own.group, taken, -1);
          chosen[own.group] = [];
          return false;
        });
        if (ended) return;
      }
    }
  }

  // Hours are asked for from the most there could be downward, and with few moves before many: a plan of so many is found
  // sooner, or ruled out for good.
  const most = options.anyPlan ? 0 : Math.ceil((bound(0, options.leaveOut, -1)?.worth ?? 0) / HOUR_WORTH);
  for (let hours = most; hours >= 0 && best === null && !isOver(); hours -= 1) {
    for (const moves of MOVES_ASKED) {
      if (best !== null || isOver()) break;
      floor = options.anyPlan ? -1 : Math.max(-1, hours * HOUR_WORTH - moves - 1);
      descend(0, 0, options.leaveOut);
      if (options.anyPlan) break;
    }
  }
  const proven = nodes <= budget;
  if (best === null && !proven && !options.anyPlan) {
    // Out of budget with nothing in hand: the first plan there is.
    [floor, anyPlan, budget] = [-1, true, nodes + options.nodeBudget];
    descend(0, 0, options.leaveOut);
  }
  const found = best as { readonly stays: readonly (readonly Stay[])[] } | null;
  return { stays: found?.stays ?? null, nodes, proven };
}
