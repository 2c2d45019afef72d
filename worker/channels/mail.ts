import type { Address, Channel } from './channel.ts';
import { briefLetter, secretLinks, type LetterContext } from '../security/letter.ts';
import type { Mailer } from '../security/mailer.ts';

/** Mail to an address that has confirmed it. A hard refusal ends the channel; everything else is tried again. */
export interface MailOptions extends Omit<LetterContext, 'linkKey'> {
  readonly mailer: Mailer;
  readonly linkKey: string | null;
}

export function mailChannel({ mailer, linkKey, publicUrl, mailFrom }: MailOptions): Channel {
  return {
    /** One service takes the letters of all. */
    lane: () => 'mail',
    async send(message, address, { timeoutMs }) {
      const to = addressIn(address.target);
      if (to === null) return { state: 'gone', reason: 'the mail address cannot be read' };
      if (message.demo && !mailer.local) return { state: 'refused', reason: 'invented weather stays on this machine' };
      if (linkKey === null) return { state: 'retry', reason: 'the setting LINK_KEY is missing', afterMs: null };
      if (address.state !== 'active') return { state: 'refused', reason: 'the address has not been confirmed' };
      const links = await secretLinks({ publicUrl, linkKey }, subscriptionOf(address), address.linkVersion ?? 1);
      return mailer.send(briefLetter(message, to, { links, mailFrom }), { timeoutMs });
    },
  };
}

function subscriptionOf(address: Address): string {
  return address.subscriptionId ?? address.id;
}

function addressIn(target: string): string | null {
  try {
    const parsed = JSON.parse(target) as { readonly address?: unknown } | null;
    return typeof parsed?.address === 'string' ? parsed.address : null;
  } catch {
    return null;
  }
}
