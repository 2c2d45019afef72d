import { expect, test } from 'vitest';
import { demoSources } from '../../../worker/sources/demo.ts';
import { config } from './scenario.ts';

const NOW_MS = Date.UTC(2028, 4, 14, 3, 12);
const request = { sites: config.sites, fromUtc: '2028-05-13T21:00:00Z', toUtc: '2028-05-14T23:00:00Z' };

test('the demo has two deterministic sources and an ensemble, all called invented', () => {
  const sources = demoSources(config.demo, () => NOW_MS);
  expect(sources.map(({ id, kind }) => [id, kind])).toEqual([
    ['invented:valley', 'deterministic'], ['invented:coarse', 'deterministic'], ['invented:ensemble', 'ensemble'],
  ]);
});

test('every site asked gets an answer, every instant asked an hour', async () => {
  for (const source of demoSources(config.demo, () => NOW_MS)) {
    const answers = await source.fetch(request);
    expect([...answers.keys()]).toEqual(config.sites.map(({ id }) => id));
    for (const [id, answer] of answers) {
      if (!answer.ok) {
        expect([id, answer.error.kind]).toEqual(['maddle-bowl', 'withheld']);
        continue;
      }
      expect(answer.value).toMatchObject({ source: source.id, demo: true, fetchedAt: '2028-05-14T03:12:00Z', runAt: '2028-05-13T18:00:00Z' });
      for (const member of answer.value.members) {
        expect(member).toHaveLength(27);
        expect([member[0]?.validAt, member.at(-1)?.validAt]).toEqual([request.fromUtc, request.toUtc]);
      }
    }
  }
});

test('a site that is not of the demo is not covered', async () => {
  const [source] = demoSources(config.demo, () => NOW_MS);
  const answers = await source?.fetch({ ...request, sites: [{ ...config.sites[0]!, id: 'a-real-place' }] });
  expect(answers?.get('a-real-place')).toEqual({ ok: false, error: { kind: 'not-covered' } });
});
