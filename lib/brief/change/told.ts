import { HOUR_MS, epochOf, isoUtc } from '../../time.ts';
import type { Verdict } from '../../margin/ids.ts';
import type { JudgedDay, JudgedHour } from '../day.ts';

/**
 * What somebody was told of a day, an hour a letter: open (within or close), unknown, beyond. Kept with a message, so that
 * the next judgement can be held against what was read and not against what was computed.
 */
export interface Told {
  /** The sheet that it was held to. */
  readonly sheetVersion: number;
  /** The first judged hour, null when there was none. */
  readonly from: string | null;
  /** `o`, `u`, `b` from there on, hour by hour. */
  readonly hours: string;
}

/** A judgement as far as a change is concerned. */
export interface Judgement extends Pick<JudgedDay, 'windows' | 'sheetVersion'> {
  readonly hours: readonly Pick<JudgedHour, 'validAt' | 'verdict'>[];
}

export type Said = 'open' | 'unknown' | 'beyond';

const LETTER: Readonly<Record<Said, string>> = { open: 'o', unknown: 'u', beyond: 'b' };

export function saidOf(verdict: Verdict): Said {
  return verdict === 'within' || verdict === 'close' ? 'open' : verdict;
}

/** What a reader of this day has read. */
export function toldOf(day: Pick<Judgement, 'hours' | 'sheetVersion'>): Told {
  return packed(new Map(day.hours.map((hour) => [hour.validAt, saidOf(hour.verdict)])), day.sheetVersion);
}

/** By instant. */
export function unpacked(told: Told): ReadonlyMap<string, Said> {
  const fromMs = told.from === null ? NaN : epochOf(told.from);
  if (!Number.isFinite(fromMs)) return new Map();
  return new Map(Array.from(told.hours, (letter, index) => [isoUtc(fromMs + index * HOUR_MS), letter === 'o' ? 'open' : letter === 'b' ? 'beyond' : 'unknown']));
}

/** Hours between the first and the last that are not there are unknown. */
export function packed(hours: ReadonlyMap<string, Said>, sheetVersion: number): Told {
  const instants = [...hours.keys()].map(epochOf).sort((a, b) => a - b);
  const [fromMs, toMs] = [instants[0], instants.at(-1)];
  if (fromMs === undefined || toMs === undefined) return { sheetVersion, from: null, hours: '' };
  let letters = '';
  for (let at = fromMs; at <= toMs; at += HOUR_MS) letters += LETTER[hours.get(isoUtc(at)) ?? 'unknown'];
  return { sheetVersion, from: isoUtc(fromMs), hours: letters };
}
