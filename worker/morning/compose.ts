import type { Message } from '../channels/channel.ts';
import { loosenedNotes } from '../security/loosened.ts';
import type { Services } from '../service-set.ts';
import type { BriefHead, BriefKey } from '../store/brief.ts';
import type { StoredChannel } from '../store/channel.ts';
import type { OutboxRow } from '../store/outbox.ts';
import { contentOf, pairDayKey, type Content, type MessageParts } from './message.ts';
import { noticeMessage } from './notice-message.ts';
import { placesOf } from './places.ts';
import { judgedDate } from './times.ts';

export interface Composed {
  readonly row: OutboxRow;
  readonly channel: StoredChannel;
  /** null when there is nothing left to tell: the channel or every site is gone. */
  readonly message: Message;
}

export interface Composition {
  readonly composed: readonly Composed[];
  /** Rows whose channel or sites are gone. */
  readonly orphans: readonly OutboxRow[];
}

/** Puts rows of the outbox into words. What a message says is fixed at its first attempt and stays for all later ones. */
export async function compose(services: Services, rows: readonly OutboxRow[]): Promise<Composition> {
  const { stores, clock } = services;
  const nowMs = clock.nowMs();
  const subscribers = [...new Set(rows.map((row) => row.subscriptionId))];
  const [found, pairs, units] = await Promise.all([stores.channel.some(rows.map((row) => row.channelId)), stores.subscription.pairsOf(subscribers), stores.subscription.unitsOf(subscribers)]);
  const channels = new Map(found.map((channel) => [channel.id, channel]));
  const [loosened, places] = await Promise.all([loosenedNotes(services, pairs), placesOf(services, [...new Set(pairs.map((pair) => pair.siteId))])]);
  const contents = new Map<string, Content>();
  for (const row of rows) if (row.content !== null) contents.set(row.id, JSON.parse(row.content) as Content);

  const dateOf = remembered((siteId: string, dueAtMs: number): string | null => {
    const place = places.get(siteId);
    return place === undefined ? null : judgedDate(place.site, dueAtMs);
  });
  const open = rows.filter((row) => !contents.has(row.id)).map((row) => ({
    row,
    pairDays: pairs.filter((pair) => pair.subscriptionId === row.subscriptionId).flatMap(({ siteId, wingKey, sheetId }) => {
      const localDate = dateOf(siteId, row.dueAtMs);
      return localDate === null ? [] : [{ siteId, wingKey, sheetId, localDate }];
    }),
  }));
  const wanted = new Map(open.flatMap(({ pairDays }) => pairDays).map((pairDay) => [pairDayKey(pairDay), pairDay]));
  const pinned = rows.filter((row) => row.content !== null).flatMap((row) => contents.get(row.id)?.briefs ?? []);
  const [newest, exact] = await Promise.all([
    wanted.size === 0 ? [] : stores.brief.heads([...wanted.values()]),
    pinned.length === 0 ? [] : stores.brief.exact(pinned.filter((brief): brief is BriefKey => brief.revision !== null)),
  ]);
  const heads = byKey(newest);
  for (const { row, pairDays } of open) contents.set(row.id, contentOf(pairDays, heads, nowMs));
  if (open.length > 0) await stores.outbox.pin(open.map(({ row }) => ({ id: row.id, content: JSON.stringify(contents.get(row.id)) })));

  const composed: Composed[] = [];
  const orphans: OutboxRow[] = [];
  // Hundreds of subscribers read the same words: each set of them is made once.
  const words = new Map<string, Message | null>();
  const worded = (parts: MessageParts): Message | null => {
    if (parts.row.kind !== 'brief') return messageOf(parts);
    const key = JSON.stringify([parts.content, parts.units, parts.notes]);
    const known = words.get(key);
    const message = known === undefined ? messageOf(parts) : known;
    words.set(key, message);
    return message === null ? null : { ...message, id: parts.row.id, ...threadOf(parts.row) };
  };
  for (const row of rows) {
    const channel = channels.get(row.channelId);
    const content = contents.get(row.id);
    const message = content === undefined ? null : worded({ row, content, heads: row.content === null ? heads : pinnedHeads(content, exact), places, units: units.get(row.subscriptionId), notes: loosened.get(row.subscriptionId) });
    if (channel === undefined || channel.state === 'dead' || message === null) orphans.push(row);
    else composed.push({ row, channel, message });
  }
  return { composed, orphans };
}

function byKey(heads: readonly BriefHead[]): ReadonlyMap<string, BriefHead> {
  return new Map(heads.map((head) => [pairDayKey(head), head]));
}

/** The very revisions that a message was made of at its first attempt, and not those that another one was. */
function pinnedHeads(content: Content, heads: readonly BriefHead[]): ReadonlyMap<string, BriefHead> {
  const isPinned = (head: BriefHead): boolean =>
    content.briefs.some((brief) => brief.revision === head.revision && brief.sheetVersion === head.sheetVersion && pairDayKey(brief) === pairDayKey(head));
  return byKey(heads.filter(isPinned));
}

function messageOf(parts: MessageParts): Message | null {
  const message = noticeMessage(parts);
  return message === null ? null : { ...message, ...threadOf(parts.row) };
}

/** A test is of no day; everything else of a subscriber's day takes the place of what came before, plans beside briefs. */
function threadOf(row: OutboxRow): Pick<Message, 'thread'> {
  return row.kind === 'test' ? {} : { thread: `${row.subscriptionId}|${row.dueLocalDate}${row.kind === 'plan' ? '|plan' : ''}` };
}

function remembered<Value>(work: (siteId: string, atMs: number) => Value): (siteId: string, atMs: number) => Value {
  const known = new Map<string, Value>();
  return (siteId, atMs) => {
    const key = `${atMs} ${siteId}`;
    const value = known.has(key) ? (known.get(key) as Value) : work(siteId, atMs);
    known.set(key, value);
    return value;
  };
}
