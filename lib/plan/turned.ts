/** What has been said of planned blocks that turned, and whether there is more to say: each block once, and again only for worse. */
import type { Verdict } from '../margin/ids.ts';
import { moreSevere } from '../margin/verdict.ts';
import type { PlanNotice } from './changes.ts';

/** The blocks of one plan, as it was made that time, that have turned. */
export interface TurnedPlan {
  readonly id: string;
  readonly revision: number;
  readonly timeZone: string;
  /** Invented weather. */
  readonly demo: boolean;
  readonly notices: readonly PlanNotice[];
}

/** A block that turned, was told and turned back is not told a second time: whoever was told has not been told otherwise. */
export function isNews(turned: readonly TurnedPlan[], told: readonly TurnedPlan[]): boolean {
  const worst = new Map<string, Verdict>();
  for (const { key, verdict } of blocksOf(told)) {
    const known = worst.get(key);
    if (known === undefined || moreSevere(verdict, known) > 0) worst.set(key, verdict);
  }
  return blocksOf(turned).some(({ key, verdict }) => {
    const known = worst.get(key);
    return known === undefined || moreSevere(verdict, known) > 0;
  });
}

function blocksOf(plans: readonly TurnedPlan[]): { readonly key: string; readonly verdict: Verdict }[] {
  return plans.flatMap(({ id, revision, notices }) => notices.map(({ group, block, verdict }) => ({ key: JSON.stringify([id, revision, group, block.site, block.from]), verdict })));
}
