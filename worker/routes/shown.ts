import type { Context } from 'hono';
import type { DeskServices } from '../service-set.ts';
import { shown } from '../store/deliveries.ts';
import { jsonBody } from './body.ts';
import { problem } from './problem.ts';

/**
 * POST /api/v1/push/shown {"id"}: a service worker says that it showed a message. Whoever knows its id was sent it; the
 * answer is the same for an id that is none.
 */
export async function pushShown({ stores, clock }: Pick<DeskServices, 'stores' | 'clock'>, c: Context): Promise<Response> {
  const body = await jsonBody(c.req.raw, 1024);
  if (!body.ok) return body.error;
  const { id } = (typeof body.value === 'object' && body.value !== null ? body.value : {}) as { readonly id?: unknown };
  if (typeof id !== 'string' || !/^msg_[0-9a-f-]{32,40}$/.test(id)) return problem('bad-input', { problems: [{ path: '$.id', value: typeof id, problem: 'not the id of a message', allowed: 'the id of the push, as it came' }] });
  await shown(stores.db, id, clock.nowMs());
  return new Response(null, { status: 204, headers: { 'cache-control': 'no-store' } });
}
