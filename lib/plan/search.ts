/**
 * Branch and bound over the groups, the most confined first: each is given its ways in order of worth (hours, then few
 * moves), and a branch ends where what is still to be had cannot beat the best so far. Bounds are each group's own room
 * and the flow of mostHours; states that were searched before (the same groups to come, the same room for them) are not
 * searched again. Exact unless the search runs out of `nodeBudget`, which it then says.
 */
import { demandOf, stateOf, type Demand } from './demand.ts';
import { mostHoursOf } from './most-hours.ts';
import type { Puzzle, Stay } from './puzzle.ts';
import { alone, HOUR_WORTH, inOrder } from './order.ts';
import { roomFor, slotsAt, type GroupRoom } from './room.ts';
import { staffedHours } from './staffed-hours.ts';
import { eachWay } from './stays.ts';

export interface SearchOptions {
  /** Slots with less spare are not used. */
  readonly threshold: number;
  /** Groups that may be left out. */
  readonly leaveOut: number;
  /** True: any plan that gives everyone the least hours will do. */
  readonly anyPlan: boolean;
  readonly nodeBudget: number;
}

export interface Found {
  /** By group; null when there is no such plan. */
  readonly stays: readonly (readonly Stay[])[] | null;
  /** Ways of groups that were tried. */
  readonly nodes: number;
  /** False when the budget ended the search. */
  readonly proven: boolean;
}

const NO_DEMAND: Demand = { places: [], staff: 0 };

interface Waiting {
  readonly group: number;
  readonly room: GroupRoom;
}

export function search(whole: Puzzle, options: SearchOptions): Found {
  const puzzle = options.anyPlan ? { ...whole, groups: whole.groups.map((group) => ({ ...group, wishHours: group.minHours })) } : whole;
  const slots = slotsAt(puzzle, options.threshold);
  const room = roomFor(puzzle, slots);
  const mostHours = mostHoursOf(puzzle);
  const order = inOrder(puzzle, (group) => room.of(group));
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
  function bound(depth: number, leaveOut: number, needed: number): { readonly waiting: readonly Waiting[]; readonly worth: number } | null {
    const all = order.slice(depth).map((group) => ({ group, room: room.of(group) }));
    const waiting = all.filter((each) => each.room.mostHours > 0);
    const spareLeaves = leaveOut - (all.length - waiting.length);
    if (spareLeaves < 0) return null;
    const worth = waiting.reduce((sum, each) => sum + alone(each.room), 0);
    if (worth <= needed || waiting.length < 2) return { waiting, worth };
    const staffed = staffedHours(waiting.map((each) => ({ ...hoursOf(each.group), mostHours: each.room.mostHours })), staffLeftFor(waiting), spareLeaves > 0);
    if (staffed < 0) return null;
    const byStaff = Math.min(worth, staffed * HOUR_WORTH);
    if (byStaff <= needed) return { waiting, worth: byStaff };
    const flow = mostHours(waiting, room);
    const least = waiting.map(({ group }) => puzzle.groups[group]?.minHours ?? 0).sort((a, b) => a - b).slice(0, waiting.length - spareLeaves);
    if (flow < least.reduce((sum, hours) => sum + hours, 0)) return null;
    return { waiting, worth: Math.min(byStaff, flow * HOUR_WORTH) };
  }

  function hoursOf(group: number): { readonly instructors: number; readonly minHours: number } {
    const { instructors, minHours } = puzzle.groups[group] ?? { instructors: 0, minHours: Infinity };
    return { instructors, minHours };
  }

  /** Hours of instructors in those slots in which somebody could be out. */
  function staffLeftFor(waiting: readonly Waiting[]): number {
    const open = waiting.reduce((all, each) => all | each.room.bySite.reduce((bits, more) => bits | more, 0), 0);
    return room.staffLeft.reduce((sum, left, slot) => sum + ((open & (1 << slot)) === 0 ? 0 : left), 0);
  }

  function descend(depth: number, worth: number, leaveOut: number): void {
    if (depth === order.length) {
      if (worth > bestWorth()) best = { worth, stays: [...chosen] };
      return;
    }
    const atMost = bound(depth, leaveOut, bestWorth() - worth);
    if (atMost === null || worth + atMost.worth <= bestWorth()) return;
    const state = `${depth} ${leaveOut} ${stateOf(demand[depth] ?? NO_DEMAND, room)}`;
    const knownWorth = known.get(state);
    if (knownWorth !== undefined && worth + knownWorth <= bestWorth()) return;
    const group = order[depth] ?? 0;
    const own = atMost.waiting.find((each) => each.group === group);
    const rest = atMost.waiting.reduce((sum, each) => sum + (each.group === group ? 0 : alone(each.room)), 0);
    if (own !== undefined) place({ own, depth, worth, leaveOut, rest });
    if (leaveOut > 0 && worth + rest > bestWorth() && !isOver()) descend(depth + 1, worth, leaveOut - 1);
    if (!isOver()) known.set(state, bestWorth() - worth);
  }

  function place({ own, depth, worth, leaveOut, rest }: { own: Waiting; depth: number; worth: number; leaveOut: number; rest: number }): void {
    const { minHours } = hoursOf(own.group);
    for (let hours = own.room.mostHours; hours >= minHours; hours -= 1) {
      for (let stays = 1; stays * minHours <= hours; stays += 1) {
        const gain = hours * HOUR_WORTH - (stays - 1);
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

  // Hours are asked for from the most there could be downward: a plan of so many is found sooner, or ruled out for good.
  const most = bound(0, options.leaveOut, -1)?.worth ?? 0;
  for (let hours = Math.ceil(most / HOUR_WORTH); hours >= 0 && best === null && !isOver(); hours -= 1) {
    floor = options.anyPlan ? -1 : (hours - 1) * HOUR_WORTH;
    descend(0, 0, options.leaveOut);
    if (options.anyPlan) break;
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
