/**
 * An upper bound for the hours that some groups can have together: the largest flow from groups through their hours
 * and the places at sites to the instructors. It forgets how long a stay must be and what a move takes, so no plan can
 * have more; it is exact about capacities, and about instructors when every group needs one.
 *
 *   source -> group (its most hours) -> its slot (1) -> site and slot (places left) -> slot (groups that can be staffed) -> sink
 */
import type { Puzzle } from './puzzle.ts';
import type { GroupRoom, Room } from './room.ts';

export type MostHours = (groups: readonly { readonly group: number; readonly room: GroupRoom }[], room: Room) => number;

export function mostHoursOf(puzzle: Puzzle): MostHours {
  const { slots } = puzzle;
  const [groups, sites] = [puzzle.groups.length, puzzle.capacity.length];
  const ownSlot = (group: number, slot: number): number => 2 + groups + group * slots + slot;
  const place = (site: number, slot: number): number => 2 + groups + (groups + site) * slots + slot;
  const together = (slot: number): number => 2 + groups + (groups + sites) * slots + slot;
  const nodes = 2 + groups + (groups + sites + 1) * slots;

  return (wanted, room) => {
    const edges: Edges = { to: [], left: [], at: Array.from({ length: nodes }, () => []) };
    for (const { group, room: own } of wanted) {
      connect(edges, 0, 2 + group, own.mostHours);
      for (let slot = 0; slot < slots; slot += 1) {
        const bit = 1 << slot;
        if (own.bySite.every((bits) => (bits & bit) === 0)) continue;
        connect(edges, 2 + group, ownSlot(group, slot), 1);
        for (const [site, bits] of own.bySite.entries()) if ((bits & bit) !== 0) connect(edges, ownSlot(group, slot), place(site, slot), 1);
      }
    }
    for (let slot = 0; slot < slots; slot += 1) {
      for (const [site, left] of room.capacityLeft.entries()) connect(edges, place(site, slot), together(slot), left[slot] ?? 0);
      const needs = wanted.filter(({ room: own }) => own.bySite.some((bits) => (bits & (1 << slot)) !== 0)).map(({ group }) => puzzle.groups[group]?.instructors ?? 0);
      connect(edges, together(slot), 1, staffedAtOnce(needs, room.staffLeft[slot] ?? 0));
    }
    return largestFlow(edges, nodes);
  };
}

/** How many of these groups can have their instructors in the same hour, the ones with the least need counted first. */
function staffedAtOnce(needs: readonly number[], staff: number): number {
  let left = staff;
  let staffed = 0;
  for (const need of [...needs].sort((a, b) => a - b)) {
    left -= need;
    if (left < 0) break;
    staffed += 1;
  }
  return staffed;
}

/** Edge i ends at to[i]; edge i ^ 1 is its way back. */
interface Edges {
  readonly to: number[];
  readonly left: number[];
  readonly at: number[][];
}

function connect({ to, left, at }: Edges, a: number, b: number, most: number): void {
  at[a]?.push(to.length);
  at[b]?.push(to.length + 1);
  to.push(b, a);
  left.push(most, 0);
}

/** Paths that still carry one more, one by one (Ford and Fulkerson), from node 0 to node 1. */
function largestFlow({ to, left, at }: Edges, nodes: number): number {
  const seen = new Int32Array(nodes);
  let round = 0;

  function carries(node: number): boolean {
    if (node === 1) return true;
    seen[node] = round;
    for (const edge of at[node] ?? []) {
      const next = to[edge] ?? 0;
      if ((left[edge] ?? 0) <= 0 || seen[next] === round || !carries(next)) continue;
      left[edge] = (left[edge] ?? 0) - 1;
      left[edge ^ 1] = (left[edge ^ 1] ?? 0) + 1;
      return true;
    }
    return false;
  }

  let flow = 0;
  for (round = 1; carries(0); round += 1) flow += 1;
  return flow;
}
