// Sources that ask for a pause, hang, or come back: when each is asked again within a morning, and what the brief says meanwhile.
import { env } from 'cloudflare:workers';
import { describe, expect, test, vi } from 'vitest';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { success } from '../../../lib/result.ts';
import type { Services } from '../../../worker/service-set.ts';
import type { Source, SourceAnswer } from '../../../worker/sources/source.ts';
import { answersTo, failing, House, newHouse } from '../support/house.ts';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const six = '2027-05-14T04:00:00Z';
const ana = { id: 'ana', sites: ['north'], urls: ['http://127.0.0.1:9/ana'], dueIso: six };

interface StandIn {
  readonly id: string;
  readonly host: string;
  /** Why it gives nothing at an instant; null when it answers. */
  readonly fault: (nowMs: number) => SourceFailure | null;
  /** How long it takes to say so. */
  readonly takesMs?: number;
}

/** A house whose sources are these, asked in this order. */
class HouseOf extends House {
  readonly asking: string[] = [];
  sources: readonly StandIn[] = [];

  override services(): Services {
    const sourcesFor = (): Source[] => this.sources.map(({ id, host, fault, takesMs = 0 }) => ({
      id, host, kind: 'deterministic', covers: () => true,
      fetch: (request) => {
        this.asking.push(`${id} ${new Date(this.nowMs).toISOString().slice(11, 19)}`);
        const failed = fault(this.nowMs);
        this.nowMs += takesMs;
        if (failed !== null) return Promise.resolve(failing(request, failed));
        const own = (answer: SourceAnswer): SourceAnswer => (answer.ok ? success({ ...answer.value, source: id }) : answer);
        return Promise.resolve(new Map([...answersTo(request, this.nowMs)].map(([site, answer]) => [site, own(answer)])));
      },
    }));
    return Object.assign(super.services(), { sourcesFor, sourceNames: sourcesFor });
  }

  async whys(): Promise<Record<string, string | null>> {
    const row = await env.DB.prepare('SELECT body FROM brief ORDER BY revision DESC LIMIT 1').first<{ body: string }>();
    const day = JSON.parse(row?.body ?? '{"sources":[]}') as { sources: { source: string; why: string | null }[] };
    return Object.fromEntries(day.sources.map(({ source, why }) => [source, why]));
  }
}

async function houseOf(sources: readonly StandIn[]): Promise<HouseOf> {
  await newHouse({ nowIso: six });
  const house = new HouseOf({ nowIso: six });
  house.sources = sources;
  await house.seed([ana]);
  return house;
}

const well = (id: string, host = id): StandIn => ({ id, host, fault: () => null });
const until = (iso: string, failed: SourceFailure) => (nowMs: number) => (nowMs < Date.parse(iso) ? failed : null);

describe('F13: a source that asks for a pause', () => {
  test('is asked again when its pause is over, and the brief waits for it', async () => {
    const house = await houseOf([well('a:one'), { ...well('b:two'), fault: until('2027-05-14T04:02:00Z', { kind: 'rate-limited', retryAfterS: 120 }) }]);
    await house.minutes(2);
    expect(house.posts).toHaveLength(0);
    await house.minute();
    expect(house.asking).toEqual(['a:one 04:00:00', 'b:two 04:00:00', 'b:two 04:02:00']);
    expect(house.posts).toHaveLength(1);
    expect(await house.whys()).toEqual({ 'a:one': null, 'b:two': null });
  });

  test('that ends after the brief is due is not waited for: the brief goes out, and says so', async () => {
    const house = await houseOf([well('a:one'), { ...well('b:two'), fault: () => ({ kind: 'rate-limited', retryAfterS: 3600 }) }]);
    await house.minute();
    expect(house.posts).toHaveLength(1);
    expect(await house.whys()).toEqual({ 'a:one': null, 'b:two': 'rate-limited' });
    await house.minutes(5);
    expect(house.asking).toHaveLength(2);
  });

  test('and asks for another one is put off again, never past the time of the brief, and however often counts as no failed attempt', async () => {
    const house = await houseOf([well('a:one'), { ...well('b:two'), fault: () => ({ kind: 'rate-limited', retryAfterS: null }) }]);
    await house.minutes(6);
    expect(house.asking.filter((one) => one.startsWith('b'))).toEqual(['b:two 04:00:00', 'b:two 04:01:00', 'b:two 04:02:00', 'b:two 04:03:00']);
    expect(house.posts).toHaveLength(1);
    expect(await house.whys()).toMatchObject({ 'b:two': 'rate-limited' });
    const { results } = await env.DB.prepare(`SELECT state FROM run WHERE step = 'fetch' ORDER BY key`).all();
    expect(results).toEqual([{ state: 'done' }, { state: 'done' }]);
  });

  test('F29: behind an open breaker it is asked when the breaker lets a probe through', async () => {
    const open: SourceFailure = { kind: 'breaker-open', until: '2027-05-14T04:00:30Z' };
    const house = await houseOf([{ ...well('a:one'), fault: until('2027-05-14T04:00:30Z', open) }]);
    await house.minute();
    expect(house.posts).toHaveLength(0);
    house.nowMs += 60_000;
    await house.minute();
    expect(house.asking).toEqual(['a:one 04:00:00', 'a:one 04:01:00']);
    expect(house.posts).toHaveLength(1);
  });
});

describe('F3: a host that hangs', () => {
  test('comes behind the others: every other source is asked before it is asked again', async () => {
    const hang = { fault: (): SourceFailure => ({ kind: 'timeout', afterMs: 10_000 }), takesMs: 10_000 };
    const house = await houseOf([{ ...well('a:one', 'a'), ...hang }, { ...well('a:two', 'a'), ...hang }, { ...well('a:three', 'a'), ...hang }, well('b:one'), well('c:one')]);
    await house.minute();
    expect(house.asking.map((one) => one.split(' ')[0])).toEqual(['a:one', 'b:one', 'c:one', 'a:three', 'a:two']);
    expect(await house.whys()).toEqual({ 'a:one': 'timeout', 'a:two': 'timeout', 'a:three': 'timeout', 'b:one': null, 'c:one': null });
    expect(house.posts).toHaveLength(1);
  });
});

describe('the last forecast that was good', () => {
  const hourLater = async (house: HouseOf, fault: SourceFailure) => {
    await house.minute();
    house.sources = [{ ...well('a:one'), fault: () => fault }];
    house.nowMs = Date.parse('2027-05-14T05:10:00Z');
    await house.minute();
  };

  test('stands while its service cannot be reached, with its age', async () => {
    const house = await houseOf([well('a:one')]);
    await hourLater(house, { kind: 'unreachable' });
    expect(house.asking).toEqual(['a:one 04:00:00', 'a:one 05:10:00']);
    expect(await house.whys()).toEqual({ 'a:one': null });
    const { results } = await env.DB.prepare(`SELECT outcome ->> 'ok' AS ok, finished_at AS at FROM run WHERE step = 'fetch'`).all();
    expect(results).toEqual([{ ok: 1, at: Date.parse(six) }]);
    // F28: it comes back; what was told once is not told again.
    house.sources = [well('a:one')];
    house.nowMs = Date.parse('2027-05-14T06:10:00Z');
    await house.minute();
    expect(house.asking).toHaveLength(3);
    expect(house.posts).toHaveLength(1);
  });

  test.each<SourceFailure>([{ kind: 'unit', field: 'wind_speed_10m', expected: 'm/s', found: 'km/h' }, { kind: 'refused', status: 401 }])('does not stand in for an answer that is wrong: $kind', async (fault) => {
    const house = await houseOf([well('a:one')]);
    await hourLater(house, fault);
    expect(await house.whys()).toEqual({ 'a:one': fault.kind });
  });
});

describe('F28: a source that comes and goes', () => {
  /** Hour after hour at ten past, each for three minutes; what was sent by then. */
  async function hours(house: HouseOf, isUp: (hour: number) => boolean): Promise<readonly string[]> {
    for (let hour = 5; hour <= 12; hour += 1) {
      house.sources = [isUp(hour) ? well('a:one') : { ...well('a:one'), fault: () => ({ kind: 'unreachable' }) }];
      house.nowMs = Date.parse(`2027-05-14T${String(hour).padStart(2, '0')}:10:00Z`);
      await house.minutes(3);
    }
    return house.posts.map(({ body }) => (JSON.parse(body) as { type: string }).type);
  }
  const houseWithout = async (): Promise<HouseOf> => {
    const house = await houseOf([{ ...well('a:one'), fault: () => ({ kind: 'unreachable' }) }]);
    await house.minutes(3);
    expect(JSON.parse(house.posts[0]!.body)).toMatchObject({ type: 'brief.issued', data: { days: [{ verdict: 'unknown' }] } });
    return house;
  };

  test('down for the brief and well from the next hour on: one update, and no more', async () => {
    expect(await hours(await houseWithout(), () => true)).toEqual(['brief.issued', 'brief.changed']);
  });

  test('well every second hour: still one update, for what it gave stands while it is away', async () => {
    expect(await hours(await houseWithout(), (hour) => hour % 2 === 1)).toEqual(['brief.issued', 'brief.changed']);
  });

  test('down all day: nothing more to say', async () => {
    expect(await hours(await houseWithout(), () => false)).toEqual(['brief.issued']);
  });
});

test('F14, F15: a revoked key and an address that has moved are for people: they stand in the log as errors', async () => {
  const house = await houseOf([{ ...well('a:one'), fault: () => ({ kind: 'refused', status: 401 }) }, { ...well('b:one'), fault: () => ({ kind: 'redirected' }) }, { ...well('c:one'), fault: () => ({ kind: 'unreachable' }) }]);
  await house.minute();
  const { results } = await env.DB.prepare(`SELECT level, event, detail ->> 'source' AS source, detail ->> 'kind' AS kind, detail ->> 'status' AS status FROM log ORDER BY id`).all();
  expect(results).toEqual([
    { level: 'error', event: 'source-failed', source: 'a:one', kind: 'refused', status: 401 },
    { level: 'error', event: 'source-failed', source: 'b:one', kind: 'redirected', status: null },
    { level: 'warning', event: 'source-failed', source: 'c:one', kind: 'unreachable', status: null },
  ]);
});
