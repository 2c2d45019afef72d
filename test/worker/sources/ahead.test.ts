// Mornings that the services' quota spreads over more than minutes begin before they are due, and no earlier than they must.
import { env } from 'cloudflare:workers';
import { expect, test, vi } from 'vitest';
import { planAhead } from '../../../worker/morning/ahead.ts';
import type { Services } from '../../../worker/service-set.ts';
import type { Source } from '../../../worker/sources/source.ts';
import { answersTo, failing, House, newHouse } from '../support/house.ts';

vi.setConfig({ testTimeout: 60_000, hookTimeout: 60_000 });

const due = '2027-05-14T04:00:00Z';

class HouseOfMany extends House {
  weightPerSite = 9;
  isFull = false;

  override services(): Services {
    const sourcesFor = (): Source[] => [{
      id: 'stand-in:one', kind: 'deterministic', covers: () => true, weightPerSite: this.weightPerSite,
      fetch: (request) => {
        this.asked.push(request);
        return Promise.resolve(this.isFull ? failing(request, { kind: 'rate-limited', retryAfterS: 900 }) : answersTo(request, this.nowMs));
      },
    }];
    return Object.assign(super.services(), { sourcesFor, sourceNames: sourcesFor });
  }

  /** The first of every five minutes at which the morning is begun. */
  async begins(fromIso: string): Promise<string | null> {
    for (this.nowMs = Date.parse(fromIso); this.nowMs < Date.parse(due); this.nowMs += 60_000) {
      await planAhead(this.services(), this.nowMs);
      const row = await env.DB.prepare(`SELECT COUNT(*) AS n FROM run WHERE step = 'fetch'`).first<{ n: number }>();
      if ((row?.n ?? 0) > 0) return new Date(this.nowMs).toISOString().slice(11, 16);
    }
    return null;
  }
}

async function houseOfMany(sites: number, weightPerSite: number): Promise<HouseOfMany> {
  await newHouse({ nowIso: due });
  const house = new HouseOfMany({ nowIso: due });
  house.weightPerSite = weightPerSite;
  await house.seed([{ id: 'ana', sites: Array.from({ length: sites }, (_, i) => `site-${i}`), urls: ['http://127.0.0.1:9/ana'], dueIso: due }]);
  return house;
}

// 200 sites at 9 are 1800, three full minutes at 600. At 27 they are 5400, more than the 5000 of an hour: begun at three, the last
// of them would wait until four, when the brief is due.
test.each([[20, 27, null], [40, 1, '03:45'], [200, 9, '03:45'], [200, 27, '02:55']])('%i sites at %i: begun at %s', async (sites, weight, begun) => {
  const house = await houseOfMany(sites, weight);
  expect(await house.begins('2027-05-14T01:50:00Z')).toBe(begun);
});

test('a pause that ends when it is due is left to the morning itself', async () => {
  const house = await houseOfMany(30, 1);
  await house.begins('2027-05-14T03:40:00Z');
  house.isFull = true;
  await house.answerAll();
  const asked = house.asked.length;
  expect(asked).toBe(4);
  const { results } = await env.DB.prepare(`SELECT DISTINCT state, next_attempt_at AS at FROM run WHERE step = 'fetch'`).all();
  expect(results).toEqual([{ state: 'done', at: Date.parse(due) }]);
});

test('a pause that ends before it is due is kept, and what was fetched ahead is not fetched again', async () => {
  const house = await houseOfMany(200, 27);
  expect(await house.begins('2027-05-14T02:50:00Z')).toBe('02:55');
  house.isFull = true;
  await house.answerAll();
  house.isFull = false;
  house.asked.length = 0;
  house.nowMs = Date.parse('2027-05-14T03:10:00Z');
  await house.minute();
  expect(house.asked.flatMap(({ sites }) => sites)).toHaveLength(200);
  house.nowMs = Date.parse(due);
  await house.minute();
  expect(house.asked.flatMap(({ sites }) => sites)).toHaveLength(200);
});
