import { isInPlay } from '../../lib/brief/change/change.ts';
import { epochOf, HOUR_MS, MINUTE_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import type { PairDay } from '../store/brief.ts';
import type { WantedAssess } from '../store/run.ts';
import { heldPlans, pairDaysOf } from './plan-notices.ts';
import { placesOf } from './places.ts';
import { REFETCH_AFTER_MS, type Patience } from './times.ts';
import { wantedFetches } from './wants.ts';

/** Minute of the hour: away from the full hour and from the board's. */
const RECHECK_MINUTE = 10;

/** A forecast from the hour before is asked for again. */
const RENEW_AFTER_MS = 50 * MINUTE_MS;

/** Whether an hour's recheck is owed. By its time and not by its tick: a tick that never came is made up for. */
export function isRecheckDue(nowMs: number, lastRecheckMs: number): boolean {
  const hourOf = (atMs: number): number => Math.floor((atMs - RECHECK_MINUTE * MINUTE_MS) / HOUR_MS);
  return hourOf(nowMs) > hourOf(lastRecheckMs);
}

/**
 * Once an hour: days that somebody was told about, or has a plan for, are judged again until they end, every hour while something ahead is
 * open or not known, every three hours while all of it is beyond.
 */
export async function planRecheck(services: Services, nowMs: number, patience: Patience): Promise<void> {
  const { stores } = services;
  const own = [...(await stores.windowState.toldPairDays(nowMs)), ...pairDaysOf(await heldPlans(services, nowMs))];
  const told = [...new Map(own.map((pairDay) => [keyOf(pairDay), pairDay])).values()];
  if (told.length === 0) return stores.meta.set('last-recheck', String(nowMs)).then(() => undefined);
  const newest = new Map((await stores.windowState.newestTwo(told)).toReversed().map((brief) => [keyOf(brief), brief]));
  const wanted = told.filter((pairDay) => {
    const brief = newest.get(keyOf(pairDay));
    // Told that it was not computed: worth another try while its day lasts, which the fetches know.
    if (brief === undefined) return true;
    if (brief.validUntilMs <= nowMs || !brief.hours.some(({ validAt }) => epochOf(validAt) > nowMs)) return false;
    return isInPlay(brief, nowMs) || brief.issuedAtMs <= nowMs - REFETCH_AFTER_MS;
  });
  const places = await placesOf(services, [...new Set(wanted.map(({ siteId }) => siteId))]);
  const assessments: WantedAssess[] = wanted.filter(({ siteId }) => places.has(siteId)).map((pairDay) => ({ ...pairDay, dueAtMs: nowMs, startByMs: nowMs + patience.assessWithinMs }));
  const fetches = await wantedFetches(services, { places, assessments, nowMs, refetchAfterMs: RENEW_AFTER_MS });
  await stores.db.together([
    stores.run.wantFetches(fetches),
    stores.run.wantAssessments(assessments),
    stores.meta.setting('last-recheck', String(nowMs)),
  ]);
}

function keyOf({ siteId, localDate, wingKey, sheetId }: PairDay): string {
  return `${siteId}|${localDate}|${wingKey}|${sheetId}`;
}
