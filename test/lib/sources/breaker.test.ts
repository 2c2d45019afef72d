// The breaker as a pure machine: opens at five failures in a minute, one probe after half a minute, doubling to ten minutes.
import { describe, expect, test } from 'vitest';
import { afterFailure, afterSuccess, CLOSED, parseBreaker, permit, type BreakerState } from '../../../worker/sources/breaker.ts';

const t0 = Date.parse('2027-05-14T03:00:20Z');
const down = { kind: 'server-error', status: 500 } as const;

function failing(times: number, everyMs: number): BreakerState {
  let state = CLOSED;
  for (let i = 0; i < times; i += 1) state = afterFailure(state, down, t0 + i * everyMs);
  return state;
}

const passes = (state: BreakerState, atMs: number) => permit(state, atMs).allowed;

test('four failures in a minute leave it closed, the fifth opens it for half a minute', () => {
  expect(passes(failing(4, 1000), t0 + 4000)).toBe(true);
  const open = failing(5, 1000);
  expect(permit(open, t0 + 4000)).toEqual({ allowed: false, untilMs: t0 + 34_000 });
  expect(passes(open, t0 + 33_999)).toBe(false);
  expect(passes(open, t0 + 34_000)).toBe(true);
});

test('five failures over more than a minute do not open it', () => {
  expect(passes(failing(5, 15_000), t0 + 61_000)).toBe(true);
  expect(passes(failing(50, 15_001), t0 + 50 * 15_001)).toBe(true);
});

test('F3: one hang opens it by itself', () => {
  const open = afterFailure(CLOSED, { kind: 'timeout', afterMs: 10_000 }, t0);
  expect(permit(open, t0 + 1)).toEqual({ allowed: false, untilMs: t0 + 30_000 });
});

describe('open', () => {
  const probe = (state: BreakerState, atMs: number): BreakerState => {
    const passed = permit(state, atMs);
    if (!passed.allowed) throw new Error('no probe may pass here');
    return passed.state;
  };

  test('F29: one probe only; while it is under way nothing else passes', () => {
    const probing = probe(failing(5, 0), t0 + 30_000);
    expect(passes(probing, t0 + 30_001)).toBe(false);
    expect(passes(probing, t0 + 89_999)).toBe(false);
    expect(passes(probing, t0 + 90_000), 'a probe that never reported is given up after a minute').toBe(true);
  });

  test('each failed probe doubles the wait, up to ten minutes', () => {
    let state = failing(5, 0);
    let nowMs = t0;
    const waits: number[] = [];
    for (let i = 0; i < 7; i += 1) {
      const refused = permit(state, nowMs);
      if (refused.allowed) throw new Error('open, it lets nothing pass');
      waits.push((refused.untilMs - nowMs) / 1000);
      nowMs = refused.untilMs;
      state = afterFailure(probe(state, nowMs), down, nowMs);
    }
    expect(waits).toEqual([30, 60, 120, 240, 480, 600, 600]);
  });

  test('a probe that succeeds closes it, and the next time it waits half a minute again', () => {
    expect(afterSuccess()).toEqual(CLOSED);
  });

  test('a probe that is refused for what it asked shows that the host is well', () => {
    expect(afterFailure(probe(failing(5, 0), t0 + 30_000), { kind: 'refused', status: 404 }, t0 + 30_500)).toEqual(CLOSED);
  });
});

describe('429', () => {
  const until = (retryAfterS: number | null) => {
    const refused = permit(afterFailure(CLOSED, { kind: 'rate-limited', retryAfterS }, t0), t0);
    return refused.allowed ? null : new Date(refused.untilMs).toISOString().slice(11, 19);
  };

  test('F13: opens at once, to the next full minute, or as long as it was told', () => {
    expect(until(null)).toBe('03:01:00');
    expect(until(5)).toBe('03:01:00');
    expect(until(3600)).toBe('04:00:20');
    expect(until(9_999_999), 'not for longer than a day').toBe('03:00:20');
  });

  test('again and again, it is left alone for longer', () => {
    let state = afterFailure(CLOSED, { kind: 'rate-limited', retryAfterS: null }, t0);
    const waits: number[] = [];
    for (let i = 0; i < 4; i += 1) {
      const passed = permit(state, state.openUntilMs ?? 0);
      const nowMs = state.openUntilMs ?? 0;
      state = afterFailure(passed.allowed ? passed.state : state, { kind: 'rate-limited', retryAfterS: null }, nowMs);
      waits.push(((state.openUntilMs ?? 0) - nowMs) / 1000);
    }
    expect(waits).toEqual([60, 120, 240, 480]);
  });
});

test('what was asked wrongly, or answered wrongly, says nothing about the host', () => {
  for (const kind of ['run-missing', 'withheld', 'not-covered', 'not-fetched'] as const) {
    let state = CLOSED;
    for (let i = 0; i < 9; i += 1) state = afterFailure(state, { kind }, t0);
    expect(state).toEqual(CLOSED);
  }
});

describe('kept as text', () => {
  test('comes back as it was', () => {
    const state = failing(5, 1000);
    expect(parseBreaker(JSON.stringify(state))).toEqual(state);
  });
  test.each([null, '', 'x', 'null', '[]', '{}', '{"failuresMs":[],"openUntilMs":"soon","waitMs":1,"probeMs":null}'])('%j is a closed one', (body) => {
    expect(parseBreaker(body)).toEqual(CLOSED);
  });
});
