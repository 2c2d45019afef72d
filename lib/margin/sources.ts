import type { Margin } from './ids.ts';
import { defaultBand } from './margin.ts';
import { moreSevere } from './verdict.ts';

/** One source's margin, and whose it is. */
export interface Vote {
  readonly source: string;
  readonly margin: Margin;
}

/**
 * A margin over its sources: any beyond makes it beyond, else the worst over those that have a vote. The number shown is
 * that of the deciding source, the tightest one among equals. Without any vote it is unknown.
 */
export function combine(votes: readonly Vote[]): { readonly margin: Margin; readonly source: string | null } | null {
  const first = votes[0];
  if (first === undefined) return null;
  const voters = votes.filter(({ margin }) => !margin.noVote);
  const deciding = voters.reduce<Vote | null>((worst, vote) => (worst === null || decides(vote.margin, worst.margin) ? vote : worst), null);
  if (deciding !== null) return { margin: deciding.margin, source: deciding.source };
  return { margin: first.margin, source: null };
}

function decides(a: Margin, b: Margin): boolean {
  const bySeverity = moreSevere(a.status, b.status);
  return bySeverity !== 0 ? bySeverity > 0 : tightness(a) < tightness(b);
}

/** Spare over the default band of its kind, for ordering unlike margins; no solution is the tightest of all. */
export function tightness(margin: Pick<Margin, 'id' | 'unit' | 'spare' | 'status'>): number {
  if (margin.spare === null) return margin.status === 'beyond' ? -Infinity : Infinity;
  return margin.spare / (defaultBand(margin.id, margin.unit) || 1);
}
