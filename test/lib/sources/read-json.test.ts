// What a provider's bytes may look like. Rows of the assurance table 4-A by id.
import { describe, expect, test } from 'vitest';
import { readJson } from '../../../worker/sources/read-json.ts';

describe('is not read', () => {
  test.each([
    ['A2: broken off', '{"a": [1, 2'],
    ['A2: a trailing comma', '{"a": 1,}'],
    ['A2: a comment', '{"a": 1 /* m/s */}'],
    ['A2: the literal NaN', '{"a": NaN}'],
    ['A6: two documents', '{"a": 1}{"a": 1}'],
    ['A7: a key twice', '{"hourly": {"wind_gusts_10m": [12], "wind_gusts_10m": [2]}}'],
    ['A7: a key twice in two spellings', String.raw`{"wind_gusts": 12, "wind\u005fgusts": 2}`],
    ['A7: a key twice with an object between', '{"a": {"b": 1, "c": [{"d": 1}]}, "e": "x", "a": 2}'],
    ['A9: a thousand lists in one another', '['.repeat(1000) + ']'.repeat(1000)],
    ['A11: nothing', ''],
    ['A5: UTF-16 read as bytes', '{\u0000"\u0000a\u0000"\u0000:\u00001\u0000}\u0000'],
    ['half a stream', '{"hourly":{"time":[1,2,3Unexpected error while streaming data: timeout'],
  ])('%s', (_, text) => {
    expect(readJson(text)).toBeUndefined();
  });
});

describe('is read', () => {
  test.each<[string, string, unknown]>([
    ['the same key in two objects', '[{"a": 1}, {"a": 2, "b": {"a": 3}}]', [{ a: 1 }, { a: 2, b: { a: 3 } }]],
    ['a value that equals a key', '{"a": "a", "b": ["a", "b", "b"]}', { a: 'a', b: ['a', 'b', 'b'] }],
    ['quotes and backslashes inside strings', String.raw`{"a\"": "\\", "a": "\\\"{,", "b\\": 1}`, { 'a"': '\\', a: '\\"{,', 'b\\': 1 }],
    ['thirty-two levels', '['.repeat(32) + ']'.repeat(32), JSON.parse('['.repeat(32) + ']'.repeat(32))],
    ['null', 'null', null],
    ['A31: a number beyond a double, as Infinity', '{"w": 1e999}', { w: Infinity }],
  ])('%s', (_, text, value) => {
    expect(readJson(text)).toEqual(value);
  });

  test('A8: keys named after prototypes pollute nothing', () => {
    const value = readJson('{"__proto__": {"polluted": 1}, "constructor": {"prototype": {"polluted": 1}}}') as object;
    expect(Object.getPrototypeOf(value)).toBe(Object.prototype);
    expect(({} as { polluted?: number }).polluted).toBeUndefined();
  });
});
