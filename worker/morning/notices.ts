import { changeOf, type DayChange } from '../../lib/brief/change/change.ts';
import { toldOf, type Told } from '../../lib/brief/change/told.ts';
import { HOUR_MS, MINUTE_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import type { BriefKey } from '../store/brief.ts';
import type { PlannedChange, SlimBrief, TellingRow } from '../store/window-state.ts';
import type { ChangeContent } from './notice-message.ts';
import { pairDayKey } from './message.ts';

type Said = ChangeContent['briefs'][number];

/** A notice for the worse that did not get through within the hour is made anew by the next recheck; it is not lost. */
const WORSE_WITHIN_MS = HOUR_MS;
const BETTER_WITHIN_MS = 3 * HOUR_MS;

/** Assessments that were under way when notices were last looked for are looked at again. */
const OVERLAP_MS = 2 * MINUTE_MS;

/** Rows in one statement stay under the two megabytes that a parameter may hold. */
const NOTICES_A_STATEMENT = 100;

/**
 * After every assessment: holds the newest judgement of each day against what each subscriber was told, and plans one
 * notice a subscriber for all of their sites. A brief that can still take up what is new is left to do so. True when
 * there is something to send.
 */
export async function noticeChanges(services: Services, nowMs: number, lastNoticeMs: number): Promise<boolean> {
  const { stores } = services;
  const fresh = await stores.windowState.freshPairDays(lastNoticeMs - OVERLAP_MS, nowMs);
  const rows = fresh.length === 0 ? [] : await stores.windowState.tellings(fresh, nowMs);
  const tellings = [...Map.groupBy(rows, (row) => row.subscriptionId).values()].flatMap((own) => telling(own) ?? []);
  const pinned = tellings.flatMap(({ said }) => said).filter((brief) => brief.told === undefined && brief.revision !== null) as BriefKey[];
  const judged = await judgements(services, { fresh: tellings.flatMap(({ said }) => said), pinned });
  const planned: PlannedChange[] = [];
  const superseded: string[] = [];
  for (const each of tellings) {
    const change = noticeFor(each, judged, nowMs);
    if (change === null) continue;
    planned.push(change);
    superseded.push(...each.unsent);
  }
  const chunks = Array.from({ length: Math.ceil(planned.length / NOTICES_A_STATEMENT) }, (_, index) => planned.slice(index * NOTICES_A_STATEMENT, (index + 1) * NOTICES_A_STATEMENT));
  await stores.db.together([
    ...(superseded.length > 0 ? [stores.windowState.supersede(superseded, nowMs)] : []),
    ...chunks.map((chunk) => stores.windowState.planChanges(chunk, nowMs)),
    stores.meta.setting('last-notice', String(nowMs)),
  ]);
  return planned.length > 0;
}

interface Telling {
  readonly subscriptionId: string;
  readonly dueLocalDate: string;
  readonly nextSeq: number;
  /** What the subscriber was last told, all sites. */
  readonly said: readonly Said[];
  /** What would be told if messages under way arrive: a notice that says no more is not made. */
  readonly pending: readonly Said[] | null;
  /** Messages that have not been sent and that a notice takes the place of. */
  readonly unsent: readonly string[];
}

/** null when nothing was told yet, or a brief is about to leave that takes up what is newest anyway. */
function telling(rows: readonly TellingRow[]): Telling | null {
  if (rows.some((row) => row.content === null)) return null;
  const last = rows.at(-1);
  const sent = rows.filter((row) => row.state === 'sent' || row.isLeased).at(-1);
  const unsent = rows.filter((row) => row.state === 'pending' && !row.isLeased && (sent === undefined || rows.indexOf(row) > rows.indexOf(sent)));
  const from = sent ?? unsent[0];
  if (last === undefined || from === undefined) return null;
  return {
    subscriptionId: last.subscriptionId, dueLocalDate: last.dueLocalDate, nextSeq: 1 + last.lastSeq,
    said: contentOf(from).briefs, pending: unsent.length === 0 ? null : contentOf(unsent.at(-1) ?? from).briefs, unsent: unsent.map((row) => row.id),
  };
}

function contentOf(row: TellingRow): ChangeContent {
  return JSON.parse(row.content ?? '{"briefs":[]}') as ChangeContent;
}

interface Judgements {
  /** The newest two by pairDayKey, the newest first. */
  readonly newest: ReadonlyMap<string, readonly SlimBrief[]>;
  readonly pinned: ReadonlyMap<string, SlimBrief>;
}

async function judgements({ stores }: Services, asked: { readonly fresh: readonly Said[]; readonly pinned: readonly BriefKey[] }): Promise<Judgements> {
  const days = [...new Map(asked.fresh.map((pair) => [pairDayKey(pair), pair])).values()];
  const keys = [...new Map(asked.pinned.map((key) => [revisionKey(key), key])).values()];
  const newest = days.length === 0 ? [] : await stores.windowState.newestTwo(days);
  const pinned = keys.length === 0 ? [] : await stores.windowState.exact(keys);
  return { newest: Map.groupBy(newest, pairDayKey), pinned: new Map(pinned.map((brief) => [revisionKey(brief), brief])) };
}

function revisionKey(key: { readonly sheetVersion: number | null; readonly revision: number | null } & Parameters<typeof pairDayKey>[0]): string {
  return `${pairDayKey(key)}${key.sheetVersion}.${key.revision}`;
}

/** What changed of one day since it was said, and the revision that says so. */
function changed(said: Said, judged: Judgements, nowMs: number): { readonly newest: SlimBrief; readonly told: Told; readonly change: DayChange | null } | null {
  const [newest, before] = judged.newest.get(pairDayKey(said)) ?? [];
  if (newest === undefined) return null;
  const read = judged.pinned.get(revisionKey(said));
  // Told that nothing was computed: every hour of it was "cannot say".
  const told = said.told ?? (read === undefined ? { ...toldOf(newest), hours: 'u'.repeat(toldOf(newest).hours.length) } : toldOf(read));
  if (newest.sheetVersion === said.sheetVersion && newest.revision === said.revision) return { newest, told, change: null };
  const isLater = before !== undefined && !(before.sheetVersion === said.sheetVersion && before.revision === said.revision);
  return { newest, told, change: newest.validUntilMs <= nowMs ? null : changeOf({ told, previous: isLater ? before : null, newest, nowMs }) };
}

function noticeFor(each: Telling, judged: Judgements, nowMs: number): PlannedChange | null {
  const briefs = each.said.map((said) => ({ said, now: changed(said, judged, nowMs) }));
  const changes = briefs.flatMap(({ now }) => now?.change ?? []);
  if (changes.length === 0) return null;
  if (each.pending !== null && !each.pending.some((said) => (changed(said, judged, nowMs)?.change ?? null) !== null)) return null;
  const isWorse = changes.some(({ worse }) => worse.length > 0);
  const content: ChangeContent = {
    issuedAtMs: nowMs,
    briefs: briefs.map(({ said, now }): Said => {
      if (now === null) return said;
      const { told, ...change } = now.change ?? { told: undefined };
      const { siteId, localDate, wingKey, sheetId, sheetVersion, revision } = now.newest;
      return { siteId, localDate, wingKey, sheetId, sheetVersion, revision, told: told ?? shownToo(now), ...('worse' in change ? { change } : {}) };
    }),
  };
  return {
    subscriptionId: each.subscriptionId, dueLocalDate: each.dueLocalDate, seq: each.nextSeq,
    validUntilMs: nowMs + (isWorse ? WORSE_WITHIN_MS : BETTER_WITHIN_MS), content: JSON.stringify(content),
  };
}

/** A site that has not changed stands in the notice as it is now judged: an hour it shows open will have been read so. */
function shownToo({ newest, told }: { readonly newest: SlimBrief; readonly told: Told }): Told {
  const shown = toldOf(newest);
  if (shown.from !== told.from || shown.hours.length !== told.hours.length) return shown;
  return { ...shown, hours: Array.from(shown.hours, (letter, index) => (letter === 'u' && told.hours[index] === 'b' ? 'b' : letter)).join('') };
}
