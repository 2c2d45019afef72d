// The running log: a brief can be followed from its source to the message, and nobody is named on the way.
import { expect, test } from 'vitest';
import { FastHouse, hook } from '../support/fast-house.ts';

interface Line {
  readonly at: string;
  readonly step: string;
  readonly event: string;
  readonly trace: readonly string[];
  readonly messages?: readonly string[];
}

test('fetch, judgement and message of a site’s day carry one trace; no line names a subscriber, an address or a secret', async () => {
  const house = new FastHouse({ nowIso: '2027-05-14T02:00:00Z' });
  await house.seed([
    { id: 'somebody-in-particular', sites: ['north', 'west'], urls: [hook('a-secret-place')], dueIso: '2027-05-14T04:00:00Z' },
    { id: 'another-one', sites: ['west'], urls: [hook('elsewhere')], dueIso: '2027-05-14T04:00:00Z' },
  ]);
  await house.until('2027-05-14T04:10:00Z');
  expect(house.posts).toHaveLength(2);
  const lines = house.lines.map((line) => JSON.parse(line) as Line);
  expect(house.lines.every((line) => !line.includes('\n'))).toBe(true);
  const followed = (trace: string) => [...new Set(lines.filter((line) => line.trace.includes(trace)).map(({ step, event }) => `${step} ${event}`))];
  for (const trace of ['north@2027-05-14', 'west@2027-05-14']) expect(followed(trace)).toEqual(['fetch stored', 'assess judged', 'deliver sent']);
  const sent = lines.filter(({ step }) => step === 'deliver').flatMap(({ messages }) => messages ?? []);
  expect(sent.sort()).toEqual(house.posts.map(({ id }) => id).sort());
  expect(house.lines.join('\n')).not.toMatch(/somebody-in-particular|another-one|secret-place|elsewhere|127\.0\.0\.1|a-link-key/);
});

test('a source that fails is told by its kind, with the trace of the days that it costs', async () => {
  const house = new FastHouse({ nowIso: '2027-05-14T02:00:00Z', source: () => Promise.reject(new Error('text from outside')) });
  await house.seed([{ id: 's', sites: ['north'], urls: [hook('x')], dueIso: '2027-05-14T04:00:00Z' }]);
  await house.until('2027-05-14T04:10:00Z');
  const failed = house.lines.map((line) => JSON.parse(line) as Line).filter(({ step }) => step === 'fetch');
  expect(failed[0]).toMatchObject({ event: 'unreachable', trace: ['north@2027-05-14'] });
  expect(house.lines.join('\n')).not.toContain('text from outside');
});
