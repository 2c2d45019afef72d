/** Puts together what the page of a subscription shows. It reads and changes nothing. */
import { localDate } from '../../lib/time.ts';
import { managed, preferencesJson } from '../security/manage.ts';
import { secretLinks } from '../security/letter.ts';
import { linkToken } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import { deliveriesOf, reachedOf } from '../store/deliveries.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { managePage } from '../web/manage/manage-page.ts';
import type { ManageView } from '../web/manage/view.ts';
import { sitesAndSheets } from './forms-data.ts';
import { LOG_MS } from './manage.ts';

/** What the page says after something was done: named in the address, so that nobody's words come from it. */
const SAID: Readonly<Record<string, string>> = {
  changed: 'Changed. From the next brief on this counts.',
  paused: 'Paused.',
  resumed: 'Resumed.',
  test: 'A test is on its way. What became of it stands below; load the page again to see it.',
  asked: 'This browser is asked whether it wants to be told; it answers by itself.',
  quiet: 'Quiet hours are kept from now on.',
  loud: 'There are no quiet hours on this way any more.',
  order: 'The order is changed.',
  removed: 'This way is taken away.',
  'no-plan': 'Nothing is said of that training day any more.',
  added: 'Added. Give its receiver the secret below; a test sends it the challenge.',
  'new-secret': 'A new secret is made. Both sign what is sent until you give up the old one.',
  'old-secret': 'The old secret signs nothing any more.',
  'new-links': 'These are the new links; those before lead nowhere now, a feed that was just read within a minute.',
  welcome: 'Accepted. Keep the address of this page: it is the only way to it, and as secret as a key.',
};

export async function manageMarkup(services: DeskServices, detail: SubscriptionDetail, { said = null, refused = null }: { readonly said?: string | null; readonly refused?: ManageView['refused'] }): Promise<string> {
  const { settings, stores, clock, addresses } = services;
  const nowMs = clock.nowMs();
  const [known, rows, about, deliveries, kept, { channels: seen }, planned] = await Promise.all([
    sitesAndSheets(services), stores.channel.ofSubscription(detail.id), reachedOf(stores.db, detail.id),
    deliveriesOf(stores.db, detail.id, nowMs - LOG_MS), preferencesJson(services, detail), managed(services, detail),
    stores.plan.ofSubscription(detail.id, localDate(nowMs, detail.timeZone)),
  ]);
  const plans = await Promise.all(planned.map(async ({ id, linkVersion, localDate: day }) => ({ id, localDate: day, path: `/plan/${await linkToken(settings.linkKey ?? '', { purpose: 'plan', id, version: linkVersion })}` })));
  const links = await secretLinks({ publicUrl: settings.publicUrl, linkKey: settings.linkKey ?? '' }, detail.id, detail.linkVersion);
  const none = { reachedAtMs: null, shownAtMs: null, reason: null };
  const secrets = await Promise.all(rows.map(async (row) => (row.kind === 'webhook' && (row.state === 'unverified' || settings.linkKeyBefore !== null || row.oldestSecretVersion < row.secretVersion) ? addresses.secretOf(row) : null)));
  return managePage({
    ...known, kept, deliveries, refused, nowMs, plans,
    state: detail.state,
    nextBriefAtMs: detail.state === 'active' ? detail.nextDueAtMs : null,
    channels: rows.map((row, nth) => ({ ...row, to: seen[nth]?.to ?? '', secret: secrets[nth] ?? null, ...(about.get(row.id) ?? none) })),
    feed: links.feed,
    path: new URL(links.manage).pathname,
    pushKey: settings.vapid?.publicKey ?? null,
    said: said === null ? null : (SAID[said] ?? null),
  });
}
