import { base64Url, hmacSha256 } from '../secrets.ts';
import { sameMailbox } from './mail-address.ts';

const encoder = new TextEncoder();

/** A text under a keyed hash: it tells the same one again, and to nobody without the key which one it was. */
async function keyed(linkKey: string, purpose: string, text: string): Promise<string> {
  return base64Url((await hmacSha256(encoder.encode(linkKey), encoder.encode(`${purpose}|${text}`))).subarray(0, 18));
}

/** Whose subscription it is: of a mail address in any spelling one and the same. */
export function ownerOf(linkKey: string, address: string): Promise<string> {
  return keyed(linkKey, 'owner', sameMailbox(address));
}

/** Which browser it is. */
export function browserKey(linkKey: string, endpoint: string): Promise<string> {
  return keyed(linkKey, 'browser', endpoint);
}

/** Who asks, for counting: the network that a request came from. Of IPv6 the first 64 bits, which one customer has whole. */
export async function callerKey(linkKey: string, request: Request): Promise<string> {
  const from = request.headers.get('cf-connecting-ip') ?? 'unknown';
  const network = from.includes(':') ? from.split(':').slice(0, 4).join(':') : from;
  return keyed(linkKey, 'caller', network);
}
