// When a source that asked for a pause is asked again, and that nothing else is.
import { expect, test } from 'vitest';
import { askAgainMs } from '../../../lib/forecast/ask-again.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';

const at = (clock: string) => Date.parse(`2027-05-14T${clock}Z`);

// RFC 9110, 10.2.3: Retry-After in seconds. Buckets that are emptied on the full minute: reference/forecast-sources, 1.8 and 1.9.
test.each<[string, SourceFailure, string, string]>([
  ['a pause without a length: the next full minute', { kind: 'rate-limited', retryAfterS: null }, '04:00:20', '04:01:00'],
  ['a pause of nothing: the next full minute', { kind: 'rate-limited', retryAfterS: 0 }, '04:00:20', '04:01:00'],
  ['a short pause within the minute: its end all the same', { kind: 'rate-limited', retryAfterS: 5 }, '04:00:20', '04:01:00'],
  ['a pause of two minutes', { kind: 'rate-limited', retryAfterS: 120 }, '04:00:20', '04:02:20'],
  ['on a full minute the next one', { kind: 'rate-limited', retryAfterS: null }, '04:01:00', '04:02:00'],
  ['an open breaker: when it lets a probe through', { kind: 'breaker-open', until: '2027-05-14T04:00:50Z' }, '04:00:20', '04:00:50'],
  ['an open breaker that is over: not at once, which would be for ever', { kind: 'breaker-open', until: '2027-05-14T04:00:10Z' }, '04:00:20', '04:00:21'],
])('%s', (_, failed, now, again) => {
  expect(askAgainMs(failed, at(now))).toBe(at(again));
});

test.each<SourceFailure>([
  { kind: 'unreachable' }, { kind: 'timeout', afterMs: 10_000 }, { kind: 'server-error', status: 503 }, { kind: 'refused', status: 401 }, { kind: 'redirected' },
  { kind: 'not-json' }, { kind: 'run-missing' }, { kind: 'run-old', ageHours: 19 }, { kind: 'breaker-open', until: 'soon' },
])('$kind is not asked again this morning', (failed) => {
  expect(askAgainMs(failed, at('04:00:20'))).toBeNull();
});
