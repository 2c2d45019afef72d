/** Words of letters and pages about a subscription itself. No text of a subscriber's stands in them, only names of sites. */
import { CLOSING } from './closing.ts';
import { listed } from './plain.ts';

export interface LetterWords {
  readonly title: string;
  readonly text: string;
}

export function confirmLetter({ sites, link, service }: { readonly sites: readonly string[]; readonly link: string; readonly service: string }): LetterWords {
  const text = [
    `Somebody, perhaps you, asked ${service} to send a morning brief to this address, for ${listed(sites)}.`,
    `Nothing is sent before you confirm it here, within 48 hours:\n${link}`,
    'Was it not you? Then there is nothing to do: the request is forgotten after 48 hours.',
    CLOSING,
  ];
  return { title: 'Please confirm: morning margin briefs to this address', text: `${text.join('\n\n')}\n` };
}

export function knownLetter({ link, service }: { readonly link: string; readonly service: string }): LetterWords {
  const text = [
    `Somebody, perhaps you, asked ${service} to send a morning brief to this address. It has a subscription already.`,
    `Here you can look at it, change it and end it:\n${link}`,
    CLOSING,
  ];
  return { title: 'This address has a subscription already', text: `${text.join('\n\n')}\n` };
}

/** A push that a browser answers by itself: it shows that the browser asked. */
export function askBrowserWords({ service }: { readonly service: string }): LetterWords {
  return { title: `Confirming the morning brief of ${service}`, text: 'This browser answers by itself; there is nothing to do. No brief is sent to it before.' };
}

/** Under every brief by mail. */
export function letterFoot({ manage, unsubscribe, feed }: { readonly manage: string; readonly unsubscribe: string; readonly feed: string }): string {
  return `Change, pause or test: ${manage}\nEnd it: ${unsubscribe}\nThe same as a feed: ${feed}`;
}

/** "limit sheet First hops was loosened: maxGustMps from 8 to 10." */
export function loosenedSentence(change: { readonly sheet: string; readonly version: number; readonly changes: readonly { readonly what: string; readonly before: number | string | null; readonly after: number | string | null }[] }): string {
  const named = (value: number | string | null): string => (value === null ? 'none' : String(value));
  const each = change.changes.map(({ what, before, after }) => `${what} from ${named(before)} to ${named(after)}`);
  return `The limit sheet ${change.sheet} lets more pass since its version ${change.version}: ${listed(each)}.`;
}
