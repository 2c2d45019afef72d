// How a text is heard that may be cut off anywhere: the verdicts that it speaks of, and whether a beginning of it says more
// than the whole allows.
import type { Verdict } from '../../../lib/margin/ids.ts';
import { restrictiveness, verdictPhrase } from '../../../lib/brief/words/index.ts';

export const VERDICTS: readonly Verdict[] = ['within', 'close', 'unknown', 'beyond'];

/** Where each verdict is first heard in a text: the length at which its phrase is complete. */
function heardAt(text: string): { readonly rank: number; readonly length: number }[] {
  const heard = text.toLowerCase();
  return VERDICTS.flatMap((verdict) => {
    const phrase = verdictPhrase(verdict);
    const at = heard.indexOf(phrase);
    return at < 0 ? [] : [{ rank: restrictiveness(verdict), length: at + phrase.length }];
  });
}

/** The most restrictive verdict that a text speaks of; null while it speaks of none. */
export function readAs(text: string): number | null {
  const heard = heardAt(text);
  return heard.length === 0 ? null : Math.max(...heard.map(({ rank }) => rank));
}

/**
 * Lengths at which a prefix begins to speak more permissively than the whole. A prefix speaks of what is complete in it,
 * so only the lengths at which a phrase becomes complete have to be looked at: that is every prefix there is.
 */
export function permissivePrefixes(text: string): number[] {
  const heard = heardAt(text);
  const whole = readAs(text) ?? restrictiveness('unknown');
  const spokenBy = (length: number) => Math.max(...heard.filter((one) => one.length <= length).map(({ rank }) => rank));
  return heard.map(({ length }) => length).filter((length) => spokenBy(length) < whole);
}
