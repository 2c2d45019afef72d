// Sources that stand by are tried once a week, in a quiet minute, and whoever looks is told how they did.
import { env } from 'cloudflare:workers';
import { expect, test, vi } from 'vitest';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { success } from '../../../lib/result.ts';
import { tryCanary } from '../../../worker/morning/canary.ts';
import { health } from '../../../worker/routes/health.ts';
import type { Services } from '../../../worker/service-set.ts';
import type { Source, SourceAnswer } from '../../../worker/sources/source.ts';
import { answersTo, failing, House, newHouse } from '../support/house.ts';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

class HouseWithStandBys extends House {
  readonly tried: string[] = [];
  faults: Readonly<Record<string, SourceFailure | null>> = {};
  runAt: string | null = null;

  override services(): Services {
    const standBysFor = (): Source[] => Object.entries(this.faults).map(([id, failed]) => ({
      id, kind: 'deterministic', covers: () => true,
      fetch: (request) => {
        this.tried.push(`${id} at ${request.sites.map((site) => site.id).join()}`);
        if (failed !== null) return Promise.resolve(failing(request, failed));
        return Promise.resolve(new Map([...answersTo(request, this.nowMs)].map(([site, answer]) => [site, this.#lively(answer)])));
      },
    }));
    return Object.assign(super.services(), { standBysFor });
  }

  /** Real wind does not keep one value all day. */
  #lively(answer: SourceAnswer): SourceAnswer {
    if (!answer.ok) return answer;
    const members = answer.value.members.map((hours) => hours.map((hour, i) => ({ ...hour, wind10m: { speedMps: 3 + i / 100, fromDeg: 250 } })));
    return success({ ...answer.value, members, runAt: this.runAt ?? answer.value.runAt });
  }

  /** One minute's part of the tick. */
  async quietMinute(): Promise<void> {
    const services = this.services();
    await tryCanary(services, this.nowMs, (await services.stores.meta.all()).get('canary'));
    this.nowMs += 60_000;
  }

  async standBys(): Promise<{ standBys: unknown; warnings: string[] }> {
    return (await health(this.services())).json();
  }
}

async function houseWith(faults: HouseWithStandBys['faults'], nowIso = '2027-05-12T12:00:00Z'): Promise<HouseWithStandBys> {
  await newHouse({ nowIso });
  const house = new HouseWithStandBys({ nowIso });
  house.faults = faults;
  await house.seed([], ['north', 'south']);
  return house;
}

test('each once, one a minute, for one site; and again when the next week begins, on Wednesday at noon', async () => {
  const house = await houseWith({ 'a:one': null, 'b:one': null });
  for (let minute = 0; minute < 5; minute += 1) await house.quietMinute();
  expect(house.tried).toEqual(['a:one at north', 'b:one at north']);
  house.nowMs = Date.parse('2027-05-19T11:58:00Z');
  await house.quietMinute();
  expect(house.tried).toHaveLength(2);
  for (let minute = 0; minute < 5; minute += 1) await house.quietMinute();
  expect(house.tried.slice(2)).toEqual(['a:one at north', 'b:one at north']);
});

test('one that fails is a warning with its reason, until it is tried again and well', async () => {
  const house = await houseWith({ 'a:one': { kind: 'refused', status: 403 }, 'b:one': null });
  for (let minute = 0; minute < 3; minute += 1) await house.quietMinute();
  const shown = await house.standBys();
  expect(shown.standBys).toEqual([
    { source: 'a:one', triedAt: '2027-05-12T12:00:00.000Z', wrong: 'it refused the question (status 403)' },
    { source: 'b:one', triedAt: '2027-05-12T12:01:00.000Z', wrong: null },
  ]);
  expect(shown.warnings).toContain('the source a:one, which stands by, failed its weekly trial: it refused the question (status 403)');
  house.faults = { 'a:one': null, 'b:one': null };
  house.nowMs = Date.parse('2027-05-19T12:00:00Z');
  for (let minute = 0; minute < 3; minute += 1) await house.quietMinute();
  expect((await house.standBys()).warnings.filter((text) => text.includes('stands by'))).toEqual([]);
});

test('an answer whose run is too old has failed like one that did not come', async () => {
  const house = await houseWith({ 'a:one': null });
  house.runAt = '2027-05-11T06:00:00Z';
  await house.quietMinute();
  expect(await house.standBys()).toMatchObject({ standBys: [{ source: 'a:one', wrong: 'its run is 30 h old' }] });
});

test('one that asks for a pause is tried again in a later minute', async () => {
  const house = await houseWith({ 'a:one': { kind: 'rate-limited', retryAfterS: 60 } });
  await house.quietMinute();
  house.faults = { 'a:one': null };
  await house.quietMinute();
  await house.quietMinute();
  expect(house.tried).toHaveLength(2);
  expect(await house.standBys()).toMatchObject({ standBys: [{ source: 'a:one', wrong: null }] });
});

test('none while a morning is under way, and none that no longer stands by is kept', async () => {
  const house = await houseWith({ 'a:one': null });
  await env.DB.prepare(`INSERT INTO run (key, step, site_id, local_date, source, due_at, start_by, state, next_attempt_at)
    VALUES ('fetch|x|north|2027-05-12', 'fetch', 'north', '2027-05-12', 'x', 0, 0, 'wanted', 0)`).run();
  await house.quietMinute();
  expect(house.tried).toEqual([]);
  await env.DB.prepare('DELETE FROM run').run();
  await house.quietMinute();
  house.faults = { 'c:one': null };
  house.nowMs = Date.parse('2027-05-19T12:00:00Z');
  await house.quietMinute();
  expect(await house.standBys()).toMatchObject({ standBys: [{ source: 'c:one' }] });
});

test('what is kept and cannot be read has not been tried', async () => {
  const house = await houseWith({ 'a:one': null });
  await house.services().stores.meta.set('canary', '{"doneWeek":');
  await house.quietMinute();
  expect(house.tried).toHaveLength(1);
});
