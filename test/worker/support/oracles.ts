// The six oracles over a house in workerd, of what its webhooks got.
import { env } from 'cloudflare:workers';
import { oraclesOf, verdictsIn, type Expected, type Told } from '../../support/oracles.ts';
import type { House } from './house.ts';

export async function oracles(house: House, expected: Expected): Promise<string[]> {
  const told = house.posts.flatMap(({ url, id, body, atMs, taken }): Told[] => {
    // The watchdog is told nothing, and a challenge is no message.
    const { data } = JSON.parse(body || '{}') as { data?: { id?: string; title: string; validUntil: string; days: { verdict: string }[] } };
    if (data?.id === undefined) return [];
    const verdicts = data.days.length > 0 ? data.days.map(({ verdict }) => verdict) : verdictsIn(data.title);
    return [{ name: url.slice(url.lastIndexOf('/') + 1), id, atMs, said: body, verdicts, validUntilMs: Date.parse(data.validUntil), taken }];
  });
  return oraclesOf({ told, services: house.services(), ask: async <Row>(sql: string) => (await env.DB.prepare(sql).all<Row>()).results }, expected);
}
