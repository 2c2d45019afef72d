// RFC 8259 read strictly; the cases of the bad-input catalogue that are about the text itself (A2-A10, B1, B5, B36, T7).
import { describe, expect, test } from 'vitest';
import { DEFAULT_BOUNDS, parseJsonStrict } from '../../../lib/config/json.ts';
import { issuesOf, pathsOf } from './fixtures.ts';

describe('what JSON.parse reads is read the same', () => {
  test.each([
    'null', 'true', ' [ ] ', '{}', '"a\\u00e9\\n\\"\\\\/"', '-0.5e-3', '1E5', '[1,[2,{"a":[false,null]}]]', '{"a":{"b":"c"},"d":""}', '"\\ud83e\\ude82"',
    '{"constructor":1,"hasOwnProperty":2}', '\t{"a" : 1 ,\r\n"b":2}', '1e-400',
  ])('%s', (text) => {
    expect(parseJsonStrict(text)).toEqual({ ok: true, value: JSON.parse(text) });
  });

  test('behind a byte order mark too', () => {
    expect(parseJsonStrict('\uFEFF{"a":1}')).toEqual({ ok: true, value: { a: 1 } });
  });

  test('minus zero is zero', () => {
    const read = parseJsonStrict('{"a":-0}');
    expect(read.ok && Object.is((read.value as { a: number }).a, 0)).toBe(true);
  });
});

describe('broken JSON is refused with its place', () => {
  test.each([
    ['', 'line 1, column 1'],
    ['{"a":1,}', 'line 1, column 8'],
    ['[1,2', 'line 1, column 5'],
    ['{"a":NaN}', 'line 1, column 6'],
    ["{'a':1}", 'line 1, column 2'],
    ['{\n  "a": 46,5\n}', 'line 2, column 11'],
    ['{"a":1} // note', 'line 1, column 9'],
    ['{"a":1}{"b":2}', 'line 1, column 8'],
    ['{"a" 1}', 'line 1, column 6'],
    ['{"a":01}', 'line 1, column 7'],
    ['{"a":.5}', 'line 1, column 6'],
    ['{"a":+5}', 'line 1, column 6'],
    ['{"a":0x10}', 'line 1, column 7'],
    ['"\u0007"', 'line 1, column 1'],
    ['"\\x41"', 'line 1, column 1'],
    ['tru', 'line 1, column 1'],
    ['a: 1\nb: 2', 'line 1, column 1'],
    ['<site/>', 'line 1, column 1'],
    ['\uFEFF\uFEFF1', 'line 1, column 2'],
  ])('%j', (text, place) => {
    const [issue, ...others] = issuesOf(parseJsonStrict(text));
    expect(others).toEqual([]);
    expect(issue?.problem).toContain(`${place}:`);
  });

  test('inside its path', () => {
    expect(pathsOf(parseJsonStrict('{"hours":[{"gustMps":1},{"gustMps":}]}'))).toEqual(['$.hours[1].gustMps']);
  });
});

describe('what JSON.parse lets pass in silence is refused', () => {
  test('a key that comes twice, each with its path', () => {
    const read = parseJsonStrict('{"maxGustMps":8,"maxGustMps":80,"a":[{"b":1,"b":2}]}');
    expect(pathsOf(read)).toEqual(['$.maxGustMps', '$.a[0].b']);
  });

  test('the same key in another spelling of its letters', () => {
    expect(pathsOf(parseJsonStrict('{"a":1,"\\u0061":2}'))).toEqual(['$.a']);
  });

  test('numbers too large for a double', () => {
    const issues = issuesOf(parseJsonStrict('[1e999,-1e999,1]'));
    expect(issues.map(({ path, value }) => [path, value])).toEqual([['$[0]', '1e999'], ['$[1]', '-1e999']]);
  });

  test('__proto__, and nothing comes of it', () => {
    expect(pathsOf(parseJsonStrict('{"a":{"__proto__":{"polluted":1}}}'))).toEqual(['$.a.__proto__']);
    expect(({} as { polluted?: number }).polluted).toBeUndefined();
  });

  test('a key named like a method of objects is a key', () => {
    expect(pathsOf(parseJsonStrict('{"toString":1}'))).toEqual([]);
  });
});

test('thirty thousand faults are counted, not listed', () => {
  const issues = issuesOf(parseJsonStrict(`{${Array.from({ length: 30_000 }, () => '"a":1').join(',')}}`));
  expect(issues).toHaveLength(500);
  expect(issues.at(-1)?.value).toBe('29500 more');
});

describe('bounds', () => {
  test('twelve levels pass, the thirteenth is refused', () => {
    expect(parseJsonStrict('['.repeat(12) + ']'.repeat(12)).ok).toBe(true);
    expect(issuesOf(parseJsonStrict('['.repeat(13) + ']'.repeat(13)))[0]?.allowed).toBe('at most 12 levels');
  });

  test('a hundred thousand levels are refused, not a crash', () => {
    expect(parseJsonStrict('['.repeat(100_000)).ok).toBe(false);
    expect(parseJsonStrict('{"a":'.repeat(20_000)).ok).toBe(false);
  });

  test('256 KiB pass, a byte more is refused', () => {
    const text = (bytes: number): string => JSON.stringify('x'.repeat(bytes - 2));
    expect(parseJsonStrict(text(DEFAULT_BOUNDS.maxBytes)).ok).toBe(true);
    expect(parseJsonStrict(text(DEFAULT_BOUNDS.maxBytes + 1)).ok).toBe(false);
  });

  test('bytes are counted as UTF-8', () => {
    const bounds = { maxBytes: 10, maxDepth: 3 };
    expect(parseJsonStrict('"éé\u20ac"', bounds).ok).toBe(true);
    expect(parseJsonStrict('"éé\u20acé"', bounds).ok).toBe(false);
    expect(parseJsonStrict('"\u{1FA82}\u{1FA82}"', bounds).ok).toBe(true);
    expect(parseJsonStrict('"\u{1FA82}\u{1FA82}a"', bounds).ok).toBe(false);
  });
});
