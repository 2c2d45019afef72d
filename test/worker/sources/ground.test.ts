// The model's ground at a site: stored when a source first gives it, read anew every month, and never led astray by a jump.
import { env } from 'cloudflare:workers';
import { expect, test, vi } from 'vitest';
import { failure, success } from '../../../lib/result.ts';
import type { SourceAnswer, SourceRequest } from '../../../worker/sources/source.ts';
import { launchFeature } from '../support/stand-ins.ts';
import { answersTo, newHouse, type House } from '../support/house.ts';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const ana = { id: 'ana', sites: ['north'], urls: ['http://127.0.0.1:9/ana'], dueIso: '2027-05-14T04:00:00Z' };
let groundM = 900;

const onGround = (answer: SourceAnswer): SourceAnswer =>
  answer.ok ? success({ ...answer.value, members: answer.value.members.map((hours) => hours.map((hour) => ({ ...hour, gridElevationM: groundM }))) }) : failure(answer.error);

/** The ground that the house holds after a morning, and since when. */
async function morningOf(house: House, date: string, nowGroundM: number, clock = '04:00'): Promise<{ ground: number; since: string }> {
  groundM = nowGroundM;
  house.nowMs = Date.parse(`${date}T${clock}:00Z`);
  await env.DB.prepare('UPDATE subscription SET next_due_at = ?').bind(house.nowMs).run();
  await house.minute();
  const row = await env.DB.prepare('SELECT ground_m AS ground, stored_at AS at FROM source_ground').first<{ ground: number; at: number }>();
  return { ground: row?.ground ?? NaN, since: new Date(row?.at ?? 0).toISOString().slice(0, 10) };
}

const source = (house: () => House) => async (request: SourceRequest) => new Map([...answersTo(request, house().nowMs)].map(([site, answer]) => [site, onGround(answer)]));

async function aHouse(): Promise<House> {
  const house: House = await newHouse({ nowIso: ana.dueIso, source: (request) => source(() => house)(request) });
  await house.seed([ana]);
  return house;
}

test('is kept as it was first given, and read anew after a month', async () => {
  const house = await aHouse();
  expect(await morningOf(house, '2027-05-14', 900)).toEqual({ ground: 900, since: '2027-05-14' });
  expect(await morningOf(house, '2027-06-01', 950)).toEqual({ ground: 900, since: '2027-05-14' });
  expect(await morningOf(house, '2027-06-14', 950)).toEqual({ ground: 950, since: '2027-06-14' });
});

test('exactly the tolerance of 200 m is read anew, a metre more is a jump, however long it lasts: it stays, and is said to the operator', async () => {
  const house = await aHouse();
  await morningOf(house, '2027-05-14', 900);
  expect(await morningOf(house, '2027-06-14', 1100)).toEqual({ ground: 1100, since: '2027-06-14' });
  for (const date of ['2027-06-15', '2027-08-15', '2027-12-15']) expect(await morningOf(house, date, 899)).toEqual({ ground: 1100, since: '2027-06-14' });
  const { results } = await env.DB.prepare(`SELECT level, detail ->> 'byM' AS byM, detail ->> 'site' AS site FROM log WHERE event = 'ground-moved' ORDER BY id`).all();
  // What is older than a fortnight has been forgotten by then.
  expect(results).toContainEqual({ level: 'error', byM: 201, site: 'north' });
});

test('is forgotten with what was fetched when the site is handed in as another one', async () => {
  const house = await aHouse();
  await morningOf(house, '2027-05-14', 900);
  const { stores } = house.services();
  const moved = { ...(launchFeature('north') as object), geometry: { type: 'Point', coordinates: [11.9, 47.4, 1900] } };
  const site = (feature: unknown) => stores.site.replaceAll([{ id: 'north', feature: JSON.stringify(feature), demo: false }], house.nowMs);
  await stores.db.together(site(launchFeature('north')));
  expect(await stores.sourceGround.ofSite('north')).toEqual({ 'stand-in:one': 900 });
  expect(await stores.forecast.answers('north', '2027-05-14')).toHaveLength(1);
  await stores.db.together(site(moved));
  expect(await stores.sourceGround.ofSite('north')).toEqual({});
  expect(await stores.forecast.answers('north', '2027-05-14')).toEqual([]);
  expect(await morningOf(house, '2027-05-14', 1500, '04:05')).toEqual({ ground: 1500, since: '2027-05-14' });
});
