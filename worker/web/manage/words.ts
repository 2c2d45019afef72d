/** The words of a subscription: what it says as a whole, of each channel, and of each message that went out. */
import { ageName, capital, clockTime, dateName, listed, placeName, plainText, sentence } from '../../../lib/brief/words/index.ts';
import { DAYS } from '../../../lib/config/subscription.ts';
import { isoUtc, localDate } from '../../../lib/time.ts';
import type { Delivery } from '../../store/deliveries.ts';
import { DAY_NAMES } from '../forms/wishes.ts';
import type { ChannelView, ManageView } from './view.ts';

/** "Tue 1 Dec, 5:31" in the subscriber's zone. */
export function momentIn(atMs: number, timeZone: string): string {
  return `${dateName(localDate(atMs, timeZone), 'short')}, ${clockTime(isoUtc(atMs), timeZone)}`;
}

function channelName({ kind }: Pick<ChannelView, 'kind'>): string {
  switch (kind) {
    case 'mail': return 'mail';
    case 'push': return 'a browser';
    case 'webhook': return 'a webhook';
    default: return 'this machine’s terminal';
  }
}

function daysWords(days: readonly string[]): string {
  if (days.length === DAYS.length) return 'every day';
  if (days.join() === 'mon,tue,wed,thu,fri') return 'from Monday to Friday';
  if (days.join() === 'sat,sun') return 'on Saturday and Sunday';
  return `on ${listed(DAYS.filter((day) => days.includes(day)).map((day) => DAY_NAMES[day]))}`;
}

function wingWords(wing: unknown): string {
  const { class: name, allUpMassKg } = (typeof wing === 'object' && wing !== null ? wing : {}) as { readonly class?: unknown; readonly allUpMassKg?: unknown };
  const known = typeof name === 'string' ? (name === 'tandem' ? 'a tandem' : `an ${plainText(name)} wing`) : 'a wing of your own figures';
  return typeof allUpMassKg === 'number' ? `${known} at ${allUpMassKg} kg` : known;
}

/** The whole of it in two sentences, as somebody would say it. */
export function wishWords({ kept, sites, sheets }: Pick<ManageView, 'kept' | 'sites' | 'sheets'>): string {
  const places = kept.sites.map(({ id, sheet }) => {
    const site = sites.find((known) => known.id === id);
    return `${site === undefined ? plainText(id) : placeName(site)} (${plainText(sheets.find((known) => known.id === sheet)?.name ?? sheet)})`;
  });
  const { at, timeZone, days } = kept.deliver;
  return `A brief for ${listed(places)}, ${daysWords(days)} at ${at.replace(/^0/, '')} in ${timeZone}, for ${wingWords(kept.wing)}; speeds in ${kept.units.speed}, heights in ${kept.units.height}.`;
}

/** "By a browser at push.example; when that has ended, by mail to a…@b.org." */
export function orderWords(channels: readonly ChannelView[]): string {
  const live = channels.filter(({ state }) => state !== 'dead').map((channel) => `by ${channelName(channel)} (${channel.to})`);
  const [first, ...rest] = live;
  if (first === undefined) return 'No way to reach you is left: nothing is sent.';
  return sentence([first, ...rest.map((words) => `when that has ended, ${words}`)].join('; '));
}

export function nextWords({ state, nextBriefAtMs, kept }: Pick<ManageView, 'state' | 'nextBriefAtMs' | 'kept'>): string {
  if (state === 'active') return nextBriefAtMs === null ? '' : `The next one comes on ${momentIn(nextBriefAtMs, kept.deliver.timeZone)}.`;
  return kept.pauseUntil === null ? 'Paused: no brief comes until you resume.' : `Paused: no brief comes before ${dateName(kept.pauseUntil)}.`;
}

/** What is known of a channel, nothing more: taken is not seen. */
export function reachedWords(channel: ChannelView, { timeZone, nowMs }: { readonly timeZone: string; readonly nowMs: number }): string {
  const { reachedAtMs, shownAtMs, kind, state } = channel;
  if (state === 'dead') return `Ended: ${plainText(channel.reason ?? 'nothing is taken there any more', 160)}.`;
  const waits = state === 'unverified' ? `${kind === 'push' ? 'This browser has not confirmed yet that it wants to be told: no brief goes there.' : 'It has not answered its challenge yet: no brief goes there. A test sends the challenge first.'} ` : '';
  const said = (atMs: number): string => `${momentIn(atMs, timeZone)}${nowMs - atMs < 60_000 ? ', just now' : `, ${ageName(nowMs - atMs)} ago`}`;
  if (kind === 'push' && shownAtMs !== null) return `${waits}Last shown on ${said(shownAtMs)}.`;
  if (reachedAtMs === null) return `${waits}Nothing has been handed over on this way so far.`;
  const taken = `Last handed over on ${said(reachedAtMs)}`;
  return kind === 'push' ? `${waits}${taken}; the browser has not said that it showed anything.` : `${waits}${taken}. Whether it was read is not known here.`;
}

const KINDS: Readonly<Record<Delivery['kind'], string>> = { brief: 'brief', change: 'change notice', missed: 'notice that there is none', plan: 'notice of a planned block', test: 'test' };

export function kindWords({ kind }: Pick<Delivery, 'kind'>): string {
  return KINDS[kind];
}

/** accepted, shown, failed, and why. */
export function outcomeWords(delivery: Delivery, isPush: boolean, timeZone: string): string {
  const { state, reason, settledAtMs, shownAtMs, attempts } = delivery;
  const why = reason === null ? '' : `: ${plainText(reason, 200)}`;
  const at = settledAtMs === null ? '' : ` at ${clockTime(isoUtc(settledAtMs), timeZone)}`;
  switch (state) {
    case 'sent': return shownAtMs === null ? `accepted${at}${isPush ? ', not shown so far' : ''}` : `shown at ${clockTime(isoUtc(shownAtMs), timeZone)}`;
    case 'pending': return shownAtMs !== null ? `shown at ${clockTime(isoUtc(shownAtMs), timeZone)}` : reason === null && attempts === 0 ? 'on its way' : `waits${why}`;
    case 'expired': return `failed${why}`;
    case 'dead': return `failed${why}`;
    case 'suppressed': return `not sent${why}`;
  }
}

export function channelTitle(channel: ChannelView): string {
  return channel.kind === 'push' ? 'Browser' : capital(channelName(channel).replace(/^an? /, ''));
}
