import { HOUR_MS, localDateTime } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import { placesOf } from './places.ts';
import { judgedDate, REFETCH_AFTER_MS, USUAL_PATIENCE } from './times.ts';
import { wantedAssessments, wantedFetches } from './wants.ts';

/** Away from the full hour, when everybody else asks the forecast services. */
export const BOARD_MINUTE = 7;

/** Nobody looks at the board before. */
const FROM_LOCAL_HOUR = 3;

/** Half an hour under the age at which a brief asks for new forecasts: the board comes by only once an hour. */
const RENEW_AFTER_MS = REFETCH_AFTER_MS - HOUR_MS / 2;

/** Once an hour: briefs of what the board shows are made anew when they have none for the day, or one of three hours ago. */
export async function planBoard(services: Services, nowMs: number): Promise<void> {
  const { stores } = services;
  const published = await stores.published.all();
  const places = await placesOf(services, [...new Set(published.map((pair) => pair.siteId))]);
  const shown = published.flatMap((pair) => {
    const place = places.get(pair.siteId);
    if (place === undefined || localDateTime(nowMs, place.site.timeZone).hour < FROM_LOCAL_HOUR) return [];
    return [{ ...pair, localDate: judgedDate(place.site, nowMs), dueAtMs: nowMs }];
  });
  const issued = new Map((await stores.brief.heads(shown)).map((head) => [`${head.siteId}|${head.wingKey}|${head.sheetId}`, head.issuedAtMs]));
  const stale = shown.filter((pair) => (issued.get(`${pair.siteId}|${pair.wingKey}|${pair.sheetId}`) ?? 0) < nowMs - RENEW_AFTER_MS);
  const assessments = wantedAssessments(places, stale, USUAL_PATIENCE);
  const fetches = await wantedFetches(services, { places, assessments, nowMs, refetchAfterMs: RENEW_AFTER_MS });
  await stores.db.together([stores.run.wantFetches(fetches), stores.run.wantAssessments(assessments)]);
}
