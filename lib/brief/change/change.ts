/**
 * What has changed since somebody was told. Worse - an hour told open that is now beyond or unknown, or told unknown that
 * is now proven beyond - is a change at once. Better needs two judgements in a row that put the hour within limits with
 * its whole close band to spare, inside a window: a number that swings about its limit is told once and then rests.
 */
import { epochOf, HOUR_MS } from '../../time.ts';
import { packed, saidOf, unpacked, type Judgement, type Said, type Told } from './told.ts';

export interface DayChange {
  /** Hours that got worse, each with what it is now. */
  readonly worse: readonly { readonly validAt: string; readonly now: Exclude<Said, 'open'> }[];
  /** Hours of a window that were told closed. */
  readonly better: readonly string[];
  /** The sheet is another version than the one told: then it is not, or not only, the weather. */
  readonly reason: 'weather' | 'limits';
  /** What a reader of the notice will have been told. */
  readonly told: Told;
}

export interface Sequence {
  readonly told: Told;
  /** The judgement before the newest, if it was made after the telling. */
  readonly previous: Judgement | null;
  readonly newest: Judgement;
  readonly nowMs: number;
}

/** null when there is nothing to tell. Hours that have passed are no news. */
export function changeOf({ told, previous, newest, nowMs }: Sequence): DayChange | null {
  const before = unpacked(told);
  const now = new Map(newest.hours.map((hour) => [hour.validAt, saidOf(hour.verdict)]));
  const ahead = [...new Set([...before.keys(), ...now.keys()])].filter((validAt) => epochOf(validAt) > nowMs - HOUR_MS).sort();
  const worse = ahead.flatMap((validAt) => {
    const said = now.get(validAt) ?? 'unknown';
    return said !== 'open' && isWorse(before.get(validAt), said) ? [{ validAt, now: said }] : [];
  });
  const better = ahead.filter((validAt) => isClosed(before.get(validAt)) && isWellOpen(newest, validAt) && previous !== null && isWellOpen(previous, validAt));
  if (worse.length === 0 && better.length === 0) return null;
  return { worse, better, reason: newest.sheetVersion === told.sheetVersion ? 'weather' : 'limits', told: read(before, now, newest.sheetVersion) };
}

/** An hour nobody was told about is no worse than it was. */
function isWorse(told: Said | undefined, now: Exclude<Said, 'open'>): boolean {
  return told === 'open' || (told === 'unknown' && now === 'beyond');
}

function isClosed(told: Said | undefined): boolean {
  return told === 'unknown' || told === 'beyond';
}

/** Within and not merely close: each margin has its whole band to spare. */
function isWellOpen(day: Judgement, validAt: string): boolean {
  const hour = day.hours.find((each) => each.validAt === validAt);
  const at = epochOf(validAt);
  return hour?.verdict === 'within' && day.windows.some(({ from, to }) => epochOf(from) <= at && at <= epochOf(to));
}

/**
 * A notice shows the newest judgement, so that is what its reader knows; only a proven "beyond" is not forgotten for a
 * "cannot say", or an hour that is now the one and now the other would be news each time.
 */
function read(before: ReadonlyMap<string, Said>, now: ReadonlyMap<string, Said>, sheetVersion: number): Told {
  return packed(new Map([...now].map(([validAt, said]) => [validAt, said === 'unknown' && before.get(validAt) === 'beyond' ? 'beyond' : said])), sheetVersion);
}

/** Whether a day is worth judging again every hour: something ahead is open, or not known. */
export function isInPlay(day: Judgement, nowMs: number): boolean {
  return day.hours.some(({ validAt, verdict }) => epochOf(validAt) > nowMs - HOUR_MS && verdict !== 'beyond');
}
