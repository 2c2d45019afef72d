import type { JudgedDay } from '../../lib/brief/day.ts';
import type { Verdict } from '../../lib/margin/ids.ts';
import type { MessageKind } from '../store/outbox.ts';

/** What one subscriber is told, ready in words; a channel only carries it. */
export interface Message {
  /** Stable: every attempt at one message has the same. */
  readonly id: string;
  readonly kind: MessageKind;
  /** Of messages with the same, a later one takes the place of an earlier; its own id where there is none. */
  readonly thread?: string;
  readonly title: string;
  readonly text: string;
  readonly issuedAtMs: number;
  /** The oldest run behind it, null when there is none or one is not known. */
  readonly dataRunAtMs: number | null;
  readonly validUntilMs: number;
  /** Worse than what was said before: it may wake somebody. */
  readonly urgent: boolean;
  /** Holds invented weather. */
  readonly demo: boolean;
  readonly days: readonly MessageDay[];
  /** Asks a browser to show that it wants to be told, by sending this back. */
  readonly nonce?: string;
}

export interface MessageDay {
  readonly siteId: string;
  readonly localDate: string;
  readonly verdict: Verdict;
  readonly windows: JudgedDay['windows'];
}

/** Where it goes: a row of the table `channel`. */
export interface Address {
  readonly id: string;
  readonly target: string;
  /** `unverified`: it has not shown yet that it wants to be told. */
  readonly state: 'unverified' | 'active' | 'dead';
  readonly secretVersion: number;
  readonly oldestSecretVersion: number;
  /** What the links in a message are derived from. */
  readonly subscriptionId?: string;
  readonly linkVersion?: number;
  /** Of a browser: which of our keys it signed up under, as far as it is known. */
  readonly pushKey?: string | null;
}

export type SendOutcome =
  | { readonly state: 'sent'; /** It has just shown that it wants to be told. */ readonly verified?: true; /** The key that a browser turned out to have signed up under. */ readonly pushKey?: string }
  /** The world failed for now. */
  | { readonly state: 'retry'; readonly reason: string; readonly afterMs: number | null; /** These are more messages than it takes. */ readonly busy?: true }
  /** This message will never be taken there, another may be. */
  | { readonly state: 'refused'; readonly reason: string }
  /** Nothing will be taken there any more. */
  | { readonly state: 'gone'; readonly reason: string };

export interface Attempt {
  /** 1 for the first. */
  readonly number: number;
  readonly nowMs: number;
  readonly timeoutMs: number;
  /** Nothing of it may arrive later. */
  readonly untilMs: number;
}

/** A way to reach a subscriber. It never throws for anything the world did, and repeats nothing on its own account. */
export interface Channel {
  /** Messages of one lane are sent one after the other: a host, so that a slow one holds up only its own. */
  lane(address: Address): string;
  /** What many lanes share, where that can be too busy for all of them. */
  host?(address: Address): string;
  send(message: Message, address: Address, attempt: Attempt): Promise<SendOutcome>;
}
