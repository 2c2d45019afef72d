import { dayVerdict } from '../../lib/brief/words/index.ts';
import type { JudgedDay } from '../../lib/brief/day.ts';
import type { DayInput } from '../../lib/brief/day-input.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import { isoUtc, localDay, MINUTE_MS } from '../../lib/time.ts';
import type { Wing } from '../../lib/wing/wing.ts';
import { sha256Hex } from '../secrets.ts';
import { traceOf } from '../say.ts';
import type { Place, Services } from '../service-set.ts';
import type { NewBrief } from '../store/brief.ts';
import type { Statement } from '../store/database.ts';
import type { AssessRun } from '../store/run-work.ts';
import { answersFor, type DayAnswers } from './answers.ts';
import { digestOf } from './digest.ts';
import { placesOf } from './places.ts';
import { isJudgeTrusted } from './self-test.ts';
import { ASSESS_CHUNK, SEND_CHUNK } from './sizes.ts';
import { LEASE_MS, REFETCH_AFTER_MS } from './times.ts';

/** Third step: judges up to four pairs of one site-day and stores their briefs. True when there was something to do. */
export async function assessStep(services: Services): Promise<boolean> {
  const { stores, clock } = services;
  const runs = await stores.runWork.claimAssessments({ nowMs: clock.nowMs(), leaseMs: LEASE_MS, by: services.ids.next(), limit: ASSESS_CHUNK });
  const [first] = runs;
  if (first === undefined) return false;
  if (!(await isJudgeTrusted(services))) {
    const back = stores.runWork.release(runs.map((run) => run.key));
    await stores.db.write(back.sql, ...back.values);
    return false;
  }
  const place = (await placesOf(services, [first.siteId])).get(first.siteId);
  if (place === undefined) await putOff(services, runs, 'the site is gone or cannot be read');
  const messages = place === undefined ? 0 : await assessSiteDay(services, { runs, place, localDate: first.localDate });
  const ready = await stores.run.ready(clock.nowMs(), ASSESS_CHUNK, [first.siteId]);
  await services.wake('assess', ready.assessJobs);
  await services.wake('deliver', Math.min(4, Math.ceil(messages / SEND_CHUNK)));
  return true;
}

interface SiteDay {
  readonly runs: readonly AssessRun[];
  readonly place: Place;
  readonly localDate: string;
}

/** How many messages waited for nothing else. */
async function assessSiteDay(services: Services, { runs, place, localDate }: SiteDay): Promise<number> {
  const { stores } = services;
  const sheets = new Map((await stores.sheet.newestOf(runs.map((run) => run.sheetId))).map((row) => [row.id, row]));
  const wings = new Map((await stores.wing.some(runs.map((run) => run.wingKey))).map((row) => [row.key, row]));
  const held = new Map((await stores.brief.heads(runs)).map((head) => [`${head.wingKey}|${head.sheetId}`, head]));
  const answers = await answersFor(services, place, localDate);
  const nowMs = services.clock.nowMs();
  const statements: Statement[] = [];
  const done: string[] = [];
  for (const run of runs) {
    const sheetRow = sheets.get(run.sheetId);
    const wingRow = wings.get(run.wingKey);
    const sheet = sheetRow === undefined ? undefined : services.read.sheet(sheetRow);
    const wing = wingRow === undefined ? undefined : services.read.wing(wingRow);
    if (wingRow === undefined || sheetRow === undefined || !sheet?.ok || !wing?.ok) {
      await putOff(services, [run], 'the wing or the sheet is gone or cannot be read');
      continue;
    }
    const inputHash = await sha256Hex(JSON.stringify([place, sheetRow, wingRow, answers.thresholds, answers.fingerprint]));
    const last = held.get(`${run.wingKey}|${run.sheetId}`);
    done.push(run.key);
    if (last?.inputHash === inputHash && last.issuedAtMs > nowMs - REFETCH_AFTER_MS) continue;
    try {
      const day = services.judge(dayInput({ place, localDate, run, wing: wing.value, wingName: wingRow.name, sheet: sheet.value, answers, nowMs }));
      statements.push(stores.brief.add(newBrief({ run, day, inputHash, nowMs })));
    } catch (error) {
      done.pop();
      await putOff(services, [run], `judging failed: ${error instanceof Error ? error.name : 'unknown'}`);
    }
  }
  services.say({ step: 'assess', event: 'judged', trace: [traceOf({ siteId: place.site.id, localDate })], detail: { pairs: done.length, new: statements.length } });
  const changed = await stores.db.together([
    ...statements, stores.runWork.finishAssessments(done, nowMs), stores.meta.setting('last-assess', String(nowMs)), stores.outbox.bringForward(place.site.id, nowMs),
  ]);
  return changed.at(-1) ?? 0;
}

export interface DayInputParts {
  readonly place: Place;
  readonly localDate: string;
  readonly run: { readonly wingKey: string };
  readonly wing: Wing;
  readonly wingName: string;
  readonly sheet: LimitSheet;
  readonly answers: DayAnswers;
  readonly nowMs: number;
}

export function dayInput({ place, localDate, run, wing, wingName, sheet, answers, nowMs }: DayInputParts): DayInput {
  return {
    site: place.site,
    wing,
    wingKey: run.wingKey,
    wingName,
    sheet,
    localDate,
    issuedAt: isoUtc(nowMs),
    validUntil: isoUtc(localDay(localDate, place.site.timeZone).toMs),
    answers: answers.answers,
    demo: answers.demo,
    thresholds: answers.thresholds,
    storedGroundM: answers.storedGroundM,
  };
}

function newBrief({ run, day, inputHash, nowMs }: { run: AssessRun; day: JudgedDay; inputHash: string; nowMs: number }): NewBrief {
  return {
    siteId: run.siteId,
    localDate: run.localDate,
    wingKey: run.wingKey,
    sheetId: run.sheetId,
    sheetVersion: day.sheetVersion,
    verdict: dayVerdict(day),
    demo: day.demo,
    issuedAtMs: nowMs,
    validUntilMs: Date.parse(day.validUntil),
    runAtMs: oldestRunMs(day),
    inputHash,
    digest: JSON.stringify(digestOf(day)),
    body: JSON.stringify(day),
  };
}

/** null when nobody voted, or when one that did gives no run time. */
function oldestRunMs(day: JudgedDay): number | null {
  const runs = day.sources.filter((source) => source.state === 'voted').map((source) => (source.runAt === null ? NaN : Date.parse(source.runAt)));
  const oldest = Math.min(...runs);
  return Number.isFinite(oldest) ? oldest : null;
}

async function putOff(services: Services, runs: readonly AssessRun[], reason: string): Promise<void> {
  const { stores, clock } = services;
  const nowMs = clock.nowMs();
  const put = stores.runWork.putOff(runs.map((run) => run.key), reason, { againAtMs: nowMs + MINUTE_MS / 2, nowMs });
  await stores.db.write(put.sql, ...put.values);
  await stores.log.write([{ level: 'error', step: 'assess', event: 'put-off', detail: { site: runs[0]?.siteId ?? '', reason } }], nowMs);
}
