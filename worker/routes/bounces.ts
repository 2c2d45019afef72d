/** What the mail service reports of letters it took: signed like a webhook (Standard Webhooks), or it is not listened to. */
import { base64, derivedKey, hmacSha256, sameText } from '../secrets.ts';
import { ownerOf } from '../security/owner.ts';
import type { DeskServices } from '../service-set.ts';
import { readUpTo } from './body.ts';
import { json, problem } from './problem.ts';

const MAX_BODY_BYTES = 8 * 1024;
const MOST_OFF_S = 300;

export async function bounce(services: DeskServices, request: Request): Promise<Response> {
  const { settings, clock, stores } = services;
  const bytes = await readUpTo(request.body, MAX_BODY_BYTES);
  if (bytes === null) return problem('too-large');
  const body = new TextDecoder().decode(bytes);
  const id = request.headers.get('webhook-id') ?? '';
  const at = request.headers.get('webhook-timestamp') ?? '';
  if (settings.linkKey === null || !/^\d{1,12}$/.test(at) || Math.abs(clock.nowMs() / 1000 - Number(at)) > MOST_OFF_S) return problem('not-allowed');
  const key = await derivedKey(settings.linkKey, { purpose: 'bounce', id: 'mail', version: 1 });
  const wanted = `v1,${base64(await hmacSha256(key, new TextEncoder().encode(`${id}.${at}.${body}`)))}`;
  const given = (request.headers.get('webhook-signature') ?? '').split(' ').slice(0, 5);
  const matches = await Promise.all(given.map((one) => sameText(one, wanted)));
  if (!matches.includes(true)) return problem('not-allowed');
  const report = read(body);
  if (report === null) return problem('bad-input', { problems: [{ path: '$', value: 'not shown', problem: 'not a report of a bounce', allowed: '{"messageId": "<msg_…@domain>", "type": "hard" | "soft" | "complaint"}' }] });
  if (report.type === 'soft') return json({ state: 'noted' });
  const reason = report.type === 'hard' ? 'bounced' as const : 'complained' as const;
  const channel = await stores.channel.ofMessage(report.messageId);
  if (channel === null) return json({ state: 'noted' });
  const { address } = JSON.parse(channel.target) as { readonly address?: string };
  const nowMs = clock.nowMs();
  await stores.db.together([
    ...(address === undefined ? [] : [stores.suppression.add(await ownerOf(settings.linkKey, address), reason, nowMs)]),
    stores.channel.end(channel.id, reason === 'bounced' ? 'the mail came back' : 'the mail was called unwanted'),
    ...stores.channel.afterBounce(report.messageId, nowMs),
  ]);
  await stores.log.write([{ level: 'warning', step: 'mail', event: reason, detail: { message: report.messageId } }], nowMs);
  await services.wake('deliver', 1);
  return json({ state: 'noted' });
}

function read(body: string): { readonly messageId: string; readonly type: 'hard' | 'soft' | 'complaint' } | null {
  try {
    const { messageId, type } = JSON.parse(body) as { readonly messageId?: unknown; readonly type?: unknown };
    const id = typeof messageId === 'string' ? /^<?(msg_[0-9a-f]{32})@/.exec(messageId)?.[1] : undefined;
    return id !== undefined && (type === 'hard' || type === 'soft' || type === 'complaint') ? { messageId: id, type } : null;
  } catch {
    return null;
  }
}
