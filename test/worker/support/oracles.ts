// The six oracles over a house in workerd, of what its webhooks got.
import { env } from 'cloudflare:workers';
import { health } from '../../../worker/routes/health.ts';
import { oraclesOf, toldByWebhook, type Expected, type WebhookData } from '../../support/oracles.ts';
import type { House } from './house.ts';

export async function oracles(house: House, expected: Expected): Promise<string[]> {
  const told = house.posts.flatMap((post) => {
    // The watchdog is told nothing, and a challenge is no message.
    const { data } = JSON.parse(post.body || '{}') as { data?: WebhookData };
    return data?.id === undefined ? [] : [toldByWebhook(post, data)];
  });
  return oraclesOf({ told, health: async () => (await health(house.services())).json(), ask: async <Row>(sql: string) => (await env.DB.prepare(sql).all<Row>()).results }, expected);
}
