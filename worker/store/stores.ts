import type { Stores } from '../service-set.ts';
import { absenceStore } from './absence.ts';
import { breakerStore } from './breaker.ts';
import { briefStore } from './brief.ts';
import { channelStore } from './channel.ts';
import type { Database } from './database.ts';
import { forecastStore } from './forecast.ts';
import { logStore } from './log.ts';
import { metaStore } from './meta.ts';
import { outboxStore } from './outbox.ts';
import { outboxUpkeepStore } from './outbox-upkeep.ts';
import { planStore } from './plan.ts';
import { publishedStore } from './published.ts';
import { rateStore } from './rate.ts';
import { runStore } from './run.ts';
import { runWorkStore } from './run-work.ts';
import { sheetStore } from './sheet.ts';
import { sheetHistoryStore } from './sheet-history.ts';
import { signupStore } from './signup.ts';
import { siteStore } from './site.ts';
import { sourceCacheStore } from './source-cache.ts';
import { sourceGroundStore } from './source-ground.ts';
import { subscriptionStore } from './subscription.ts';
import { suppressionStore } from './suppression.ts';
import { terminalStore } from './terminal.ts';
import { tokenStore } from './token.ts';
import { windowStateStore } from './window-state.ts';
import { wingStore } from './wing.ts';

/** Every table, on one database. */
export function storesOn(db: Database): Stores {
  return {
    db,
    meta: metaStore(db),
    site: siteStore(db),
    sheet: sheetStore(db),
    wing: wingStore(db),
    plan: planStore(db),
    published: publishedStore(db),
    sourceGround: sourceGroundStore(db),
    forecast: forecastStore(db),
    brief: briefStore(db),
    subscription: subscriptionStore(db),
    channel: channelStore(db),
    outbox: outboxStore(db),
    outboxUpkeep: outboxUpkeepStore(db),
    run: runStore(db),
    runWork: runWorkStore(db),
    breaker: breakerStore(db),
    sourceCache: sourceCacheStore(db),
    windowState: windowStateStore(db),
    absence: absenceStore(db),
    terminal: terminalStore(db),
    log: logStore(db),
    signup: signupStore(db),
    token: tokenStore(db),
    rate: rateStore(db),
    suppression: suppressionStore(db),
    sheetHistory: sheetHistoryStore(db),
  };
}
