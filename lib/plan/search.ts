/**
 * Branch and bound over the groups, the most confined first: each is given its ways in order of worth (hours, then few
 * moves), and a branch ends where what is still to be had cannot beat the best so far. Bounds are each group's own room
 * and the flow of mostHours; states that were searched before (the same groups to come, the same room for them) are not
 * searched again. Exact unless the search runs out of `nodeBudget`, which it then says.
 */
import { count } from './bits.ts';
import { demandOf, stateOf, type Demand } from './demand.ts';
import { mostHoursOf } from './most-hours.ts';
import type { Puzzle, Stay } from './puzzle.ts';
import { roomFor, slotsAt, type GroupRoom } from './room.ts';
import { eachWay } from './stays.ts';

/** One hour outweighs every move of a day. */
const HOUR_WORTH = 1000;

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

  const bestWorth = (): number => best?.worth ?? -1;
  const isOver = (): boolean => nodes > options.nodeBudget || (options.anyPlan && best !== null);

  /** What the groups from `depth` on can be worth at most; null when too many of them have no room. */
  function bound(depth: number, leaveOut: number, needed: number): { readonly waiting: readonly Waiting[]; readonly worth: number } | null {
    const all = order.slice(depth).map((group) => ({ group, room: room.of(group) }));
    const waiting = all.filter((each) => each.room.mostHours > 0);
    const spareLeaves = leaveOut - (all.length - waiting.length);
    if (spareLeaves < 0) return null;
    const worth = waiting.reduce((sum, each) => sum + alone(each.room), 0);
    if (worth <= needed || waiting.length < 2) return { waiting, worth };
    const flow = mostHours(waiting, room);
    const least = waiting.map(({ group }) => puzzle.groups[group]?.minHours ?? 0).sort((a, b) => a - b).slice(0, waiting.length - spareLeaves);
    if (flow < least.reduce((sum, hours) => sum + hours, 0)) return null;
    return { waiting, worth: Math.min(worth, flow * HOUR_WORTH) };
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
    const { minHours } = puzzle.groups[own.group] ?? { minHours: Infinity };
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

  descend(0, 0, options.leaveOut);
  const found = best as { readonly stays: readonly (readonly Stay[])[] } | null;
  return { stays: found?.stays ?? null, nodes, proven: nodes <= options.nodeBudget };
}

/** What a group is worth with nobody else about. */
function alone({ mostHours, longest }: GroupRoom): number {
  return mostHours * HOUR_WORTH - (Math.ceil(mostHours / longest) - 1);
}

/** The most confined first; among equals the one that needs more instructors, then as given. */
function inOrder(puzzle: Puzzle, roomOf: (group: number) => GroupRoom): number[] {
  const sizes = puzzle.groups.map((_, group) => roomOf(group).bySite.reduce((sum, bits) => sum + count(bits), 0));
  const needs = puzzle.groups.map(({ instructors }) => instructors);
  return [...puzzle.groups.keys()].sort((a, b) => (sizes[a] ?? 0) - (sizes[b] ?? 0) || (needs[b] ?? 0) - (needs[a] ?? 0) || a - b);
}
