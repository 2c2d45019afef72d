import { letterFoot } from '../../lib/brief/words/letters.ts';
import { linkToken } from '../secrets.ts';
import { html, type Html } from '../web/html.ts';
import type { Message } from '../channels/channel.ts';
import type { Letter } from './mailer.ts';

export interface LetterContext {
  readonly publicUrl: string;
  readonly linkKey: string;
  readonly mailFrom: string;
}

/** The secret addresses of one subscription. */
export async function secretLinks({ publicUrl, linkKey }: Omit<LetterContext, 'mailFrom'>, id: string, version: number) {
  const token = (purpose: 'manage' | 'unsubscribe' | 'feed'): Promise<string> => linkToken(linkKey, { purpose, id, version });
  return {
    manage: `${publicUrl}/manage/${await token('manage')}`,
    unsubscribe: `${publicUrl}/unsubscribe/${await token('unsubscribe')}`,
    feed: `${publicUrl}/feeds/${await token('feed')}.atom`,
  };
}

export type SecretLinks = Awaited<ReturnType<typeof secretLinks>>;

/** `<msg_…@domain>`: the same at every attempt. */
function messageIdOf(id: string, mailFrom: string): string {
  return `<${id}@${mailFrom.slice(mailFrom.indexOf('@') + 1)}>`;
}

/** A message as a mail: plain and as HTML, with the way out in its headers (RFC 2369, RFC 8058). */
export function briefLetter(message: Message, to: string, { links, mailFrom }: { readonly links: SecretLinks; readonly mailFrom: string }): Letter {
  return letterOf({ id: message.id, to, title: message.title, text: `${message.text.trimEnd()}\n\n${letterFoot(links)}\n` }, {
    mailFrom,
    headers: {
      'List-Unsubscribe': `<${links.unsubscribe}>`,
      'List-Unsubscribe-Post': 'List-Unsubscribe=One-Click',
      'Auto-Submitted': 'auto-generated',
      Expires: new Date(message.validUntilMs).toUTCString().replace('GMT', '+0000'),
    },
  });
}

export function letterOf(
  words: { readonly id: string; readonly to: string; readonly title: string; readonly text: string },
  { mailFrom, headers = { 'Auto-Submitted': 'auto-generated' } }: { readonly mailFrom: string; readonly headers?: Letter['headers'] },
): Letter {
  const page = html`<!doctype html><html lang="en"><head><meta charset="utf-8"><title>${words.title}</title></head><body><h1>${words.title}</h1>${blocks(words.text)}</body></html>`;
  return { messageId: messageIdOf(words.id, mailFrom), to: words.to, subject: words.title, text: words.text, html: page.toString(), headers };
}

/** Blocks of text become paragraphs, their lines lines, and addresses of ours links: the same words in the same order. */
function blocks(text: string): Html[] {
  return text.trim().split(/\n{2,}/).map((block) => html`<p>${block.split('\n').map((line, index) => [index === 0 ? null : html`<br>`, ...linked(line)])}</p>`);
}

function linked(line: string): (string | Html)[] {
  return line.split(/(https?:\/\/[^\s<>()]+)/).map((part, index) => (index % 2 === 1 ? html`<a href="${part}">${part}</a>` : part));
}
