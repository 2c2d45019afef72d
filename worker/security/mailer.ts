import type { SendOutcome } from '../channels/channel.ts';

/** One mail, ready but for its transport. Every header value is ASCII, on one line. */
export interface Letter {
  /** Stable: every attempt at one letter has the same. */
  readonly messageId: string;
  readonly to: string;
  readonly subject: string;
  readonly text: string;
  readonly html: string;
  readonly headers: Readonly<Record<string, string>>;
}

/** A way to hand a letter over. Never throws for anything the world did. */
export interface Mailer {
  /** It ends on this machine: invented weather may be sent there. */
  readonly local: boolean;
  send(letter: Letter, limits: { readonly timeoutMs: number }): Promise<SendOutcome>;
}

/** What of the platform's own way to send mail is used: a `send_email` binding named MAIL. */
export interface MailBinding {
  send(mail: { readonly from: string; readonly to: string; readonly subject: string; readonly text: string; readonly html: string; readonly headers: Record<string, string> }): Promise<unknown>;
}

/** A header value as RFC 2047 has it where it is not ASCII: encoded words of at most 75 characters, folded. */
export function headerText(text: string): string {
  const flat = text.replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ').trim().slice(0, 400).toWellFormed();
  if (/^[\x20-\x7e]*$/.test(flat) && !flat.includes('=?')) return flat;
  const words: string[] = [];
  let word = '';
  for (const character of flat) {
    const coded = [...new TextEncoder().encode(character)].map(coding).join('');
    if (word.length + coded.length > 60) {
      words.push(word);
      word = '';
    }
    word += coded;
  }
  return [...words, word].map((part) => `=?UTF-8?Q?${part}?=`).join('\r\n ');
}

function coding(byte: number): string {
  if (byte === 0x20) return '_';
  const character = String.fromCharCode(byte);
  return /[A-Za-z0-9]/.test(character) ? character : `=${byte.toString(16).toUpperCase().padStart(2, '0')}`;
}

/** What the answer of a mail service means (RFC 5321, 4.2): 5xx of a recipient ends the channel, of a message only that message. */
export function outcomeOfReply(reply: string): SendOutcome {
  // An address in the reply may hold digits of its own.
  const code = /\b([245]\d\d)\b/.exec(reply.replace(/<[^>]*>/g, ''))?.[1] ?? '';
  const isOfRecipient = /RCPT TO/i.test(reply);
  if (code.startsWith('5') && isOfRecipient && code !== '552') return { state: 'gone', reason: `the mail service answered ${code} for the address` };
  if (code.startsWith('5') && /body|DATA/i.test(reply)) return { state: 'refused', reason: `the mail service answered ${code} to the message` };
  return { state: 'retry', reason: code === '' ? 'the mail service could not be reached' : `the mail service answered ${code}`, afterMs: null };
}
