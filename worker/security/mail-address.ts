/**
 * A mail address in its one spelling: the domain in lower case and punycode, the local part as it was given. Quoted local
 * parts, comments, display names, lists and addresses of machines are refused: nobody who wants a brief has one.
 */
import type { Checked } from '../../lib/config/subscription-channels.ts';

const LOCAL_PART = /^[A-Za-z0-9!#$%&'*+/=?^_`{|}~-]+(?:\.[A-Za-z0-9!#$%&'*+/=?^_`{|}~-]+)*$/;
const LABEL = /^[a-z0-9](?:[a-z0-9-]{0,61}[a-z0-9])?$/;
const NOT_PUBLIC = new Set(['localhost', 'local', 'internal', 'invalid', 'onion', 'arpa']);

export function mailAddress(text: string): Checked {
  if (/[\s\p{Cc}\p{Cf}]/u.test(text)) return { problem: 'holds a space, a line break or a character that prints nothing' };
  const at = text.indexOf('@');
  if (at < 1 || text.indexOf('@', at + 1) >= 0) return { problem: 'not one name, one @ and one domain' };
  const local = text.slice(0, at);
  if (local.length > 64) return { problem: 'the part before the @ is longer than 64 characters' };
  if (!LOCAL_PART.test(local)) return { problem: 'the part before the @ is not plain' };
  const domain = asciiDomain(text.slice(at + 1));
  if (domain === null) return { problem: 'the domain is not a public name' };
  const address = `${local}@${domain}`;
  return address.length > 254 ? { problem: 'longer than 254 characters' } : { is: address };
}

/** As the address is told apart from others: mailboxes that differ by case alone are one. */
export function sameMailbox(address: string): string {
  return address.toLowerCase();
}

function asciiDomain(domain: string): string | null {
  if (/[[\]:/?#\\%@,;<>()"]/.test(domain) || domain.endsWith('.') || domain.length > 253) return null;
  if (!URL.canParse(`http://${domain}/`)) return null;
  const { hostname } = new URL(`http://${domain}/`);
  const labels = hostname.split('.');
  const last = labels.at(-1) ?? '';
  if (labels.length < 2 || /^\d+$/.test(last) || NOT_PUBLIC.has(last) || !labels.every((label) => LABEL.test(label))) return null;
  return hostname;
}
