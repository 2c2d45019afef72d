import { isoUtc } from '../lib/time.ts';

/**
 * One line of the running log, for whoever follows a brief from its source to a push: every line of a site-day carries the
 * same trace. Names of sites and sources, ids of messages, fixed words and numbers only; never an address or a text from outside.
 */
export interface Said {
  readonly step: 'fetch' | 'assess' | 'deliver';
  readonly event: string;
  readonly trace: readonly string[];
  readonly detail?: Readonly<Record<string, string | number | readonly string[]>>;
}

export type Say = (said: Said) => void;

/** What all lines about a site's day have in common, from the forecast that was fetched to the message that was sent. */
export function traceOf({ siteId, localDate }: { readonly siteId: string; readonly localDate: string }): string {
  return `${siteId}@${localDate}`;
}

export function sayer(nowMs: () => number, write: (line: string) => void): Say {
  return ({ step, event, trace, detail = {} }) => write(JSON.stringify({ at: isoUtc(nowMs()), step, event, trace, ...detail }));
}
