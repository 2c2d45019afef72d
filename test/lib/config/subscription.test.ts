// What may be asked for (C3-C20), every problem at once, and requests at random: no crash, and never a half-read one.
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import sheets from '../../../config/sheets.json' with { type: 'json' };
import wingClasses from '../../../config/wing-classes.json' with { type: 'json' };
import { parseJsonStrict } from '../../../lib/config/json.ts';
import { parseSheet, parseSheets } from '../../../lib/config/sheet.ts';
import { parseSiteFeature } from '../../../lib/config/site.ts';
import { sheetChanges } from '../../../lib/config/sheet-change.ts';
import { parsePreferences, parseSubscription, type SubscriptionContext } from '../../../lib/config/subscription.ts';
import { parseWingClasses } from '../../../lib/config/wing-classes.ts';
import { mailAddress } from '../../../worker/security/mail-address.ts';
import { webhookUrl } from '../../../worker/channels/webhook-url.ts';
import { launchFeature } from '../../worker/support/stand-ins.ts';

const shipped = parseSheets(sheets, { basis: 'required' });
const classes = parseWingClasses(wingClasses);
if (!shipped.ok || !classes.ok) throw new Error('config/ is wrong');

const context: SubscriptionContext = {
  sites: [{ id: 'north', kind: 'launch' }, { id: 'rope', kind: 'strip' }], sheets: shipped.value, wingClasses: classes.value,
  mail: mailAddress,
  webhook: (url) => { const found = webhookUrl(url, { local: false, ownHost: 'brief.example.org' }); return 'url' in found ? { is: found.url } : found; },
  push: ({ endpoint }) => (endpoint.startsWith('https://') ? { is: endpoint } : { problem: 'not https' }),
};

const wish = (over: Readonly<Record<string, unknown>> = {}): Record<string, unknown> => ({
  sites: [{ id: 'north' }], deliver: { at: '05:30', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'mail', address: 'ana@mail.example.org' }], ...over,
});

const paths = (json: unknown): string[] => { const read = parseSubscription(json, context); return read.ok ? [] : read.error.map(({ path }) => path); };
const mailTo = (address: unknown) => wish({ channels: [{ kind: 'mail', address }] });

test('what is left out has its usual value', () => {
  expect(parseSubscription(wish(), context)).toMatchObject({ ok: true, value: {
    sites: [{ id: 'north', sheet: 'descent-new' }], wingClass: 'EN B', deliverMinute: 330, days: 127, units: { speed: 'm/s', height: 'm' }, pauseUntil: null, channels: [{ kind: 'mail', quiet: null }],
  } });
  expect(parseSubscription(wish({ sites: [{ id: 'rope' }], wing: { class: 'EN A', allUpMassKg: 90 }, language: 'tlh' }), context)).toMatchObject({ ok: true, value: { sites: [{ sheet: 'solo-tow' }], wingClass: null } });
});

test('every problem at once', () => {
  const found = paths({ sites: [{ id: 'nowhere' }, { id: 'rope', sheet: 'descent-new' }], wing: { class: 'EN Z' }, deliver: { at: '25:00', timeZone: 'CET', days: ['someday'] }, units: { speed: 'knots' }, pauseUntil: '2027-02-30', channels: [{ kind: 'mail', address: 'x' }, { kind: 'pigeon' }], confirmed: true });
  for (const path of ['$.sites[0].id', '$.sites[1].sheet', '$.wing.class', '$.deliver.at', '$.deliver.timeZone', '$.deliver.days[0]', '$.units.speed', '$.pauseUntil', '$.channels[0].address', '$.channels[1].kind', '$.confirmed']) expect(found).toContain(path);
});

describe('C6-C15 addresses', () => {
  test.each([
    null, [], {}, 7, '', 'a@b', '@b.org', 'a@', 'a b@c.org', 'a@b@c.org', `${'x'.repeat(65)}@b.org`, `a@${'b'.repeat(250)}.org`, 'a@b.org\r\nBcc: c@d.org', '"x" <a@b.org>', 'a(comment)@b.org',
    '"quoted"@b.org', 'a@[127.0.0.1]', 'a@127.0.0.1', 'a@2130706433', 'a@b.org,c@d.org', 'a@b.org;c@d.org', 'a@localhost', 'a@x.internal', 'a@b..org', '.a@b.org', 'a.@b.org', 'a@-b.org', 'a@b.org.', 'a\u202e@b.org', 'a@b.org/path', 'a@b.org:25', 'a@b_c.org', 'a@b.123',
  ])('%j is refused', (address) => {
    expect(paths(mailTo(address))[0]).toMatch(/^\$\.channels\[0\]/);
  });

  test.each([['a+tag@b.org', 'a+tag@b.org'], ['A@B.ORG', 'A@b.org'], ['ö@b.org', null], ['a@bücher.example.org', 'a@xn--bcher-kva.example.org'], ['a@раураl.example.org', 'a@xn--l-7sba6dbr.example.org'], ["o'hara@b.org", "o'hara@b.org"]])('%s: %s', (given, is) => {
    const read = parseSubscription(mailTo(given), context);
    expect(read.ok ? read.value.channels[0]!.target : null).toBe(is);
  });
});

describe('C21-C47 webhooks', () => {
  test.each([
    'http://h.example.org/', 'ftp://h.example.org/', 'file:///etc/passwd', 'data:text/plain,x', 'javascript:alert(1)', 'https://u:p@h.example.org/', 'https://h.example.org:22/', 'https://h.example.org:25/', 'https://h.example.org:8080/',
    'https://127.0.0.1/', 'https://127.1/', 'https://0x7f.1/', 'https://2130706433/', 'https://0177.0.0.1/', 'https://１２７.０.０.１/', 'https://[::1]/', 'https://[::ffff:127.0.0.1]/', 'https://[64:ff9b::a00:1]/', 'https://[2002:a00:1::1]/',
    'https://169.254.169.254/', 'https://100.64.0.1/', 'https://0/', 'https://localhost./', 'https://LOCALHOST/', 'https://x.internal/', 'https://metadata.google.internal/', 'https://router/', 'https://brief.example.org/', 'https://sub.brief.example.org/',
    `https://h.example.org/${'x'.repeat(2048)}`, 'https://exa\tmple.com/', 'https://example.com\\@evil.org/', 'https://exa\nmple.com', 'https://h.test/',
  ])('%j is refused', (url) => {
    expect(paths(wish({ channels: [{ kind: 'webhook', url }] }))[0]).toMatch(/^\$\.channels\[0\]\.url/);
  });

  test.each([['https://h.example.org/a#part', 'https://h.example.org/a'], ['https://H.EXAMPLE.org./a', 'https://h.example.org/a'], ['https://h.example.org:443/', 'https://h.example.org/']])('%s is %s', (given, is) => {
    const read = parseSubscription(wish({ channels: [{ kind: 'webhook', url: given }] }), context);
    expect(read.ok ? read.value.channels[0]!.target : null).toBe(is);
  });
});

test.each([
  ['C18 500 ids', wish({ sites: Array.from({ length: 500 }, () => ({ id: 'north' })) })], ['C15 two addresses', wish({ channels: ['a@b.org', 'c@b.org'].map((address) => ({ kind: 'mail', address })) })],
  ['the same twice', wish({ channels: [1, 2].map(() => ({ kind: 'webhook', url: 'https://h.example.org/' })) })], ['B23 quiet for no time', wish({ channels: [{ kind: 'mail', address: 'a@b.org', quiet: { from: '10:00', to: '10:00' } }] })],
  ['C19', wish({ deliver: { at: '8:5', timeZone: 'Europe/Vienna' } })], ['B21', wish({ deliver: { at: '08:05', timeZone: 'Etc/GMT+2' } })], ['C4 an id', wish({ id: 'x' })], ['C4 a role', wish({ role: 'admin' })], ['a list', [wish()]], ['nothing', null],
])('%s is refused', (_, json) => {
  expect(paths(json).length).toBeGreaterThan(0);
});

test('C18 the same site twice is one', () => {
  const read = parseSubscription(wish({ sites: [{ id: 'north' }, { id: 'north' }] }), context);
  expect(read.ok && read.value.sites.length).toBe(1);
});

test('a change of a sheet knows what loosens', () => {
  const of = (limits: object) => { const read = parseSheet({ id: 'x', kind: 'launch', limits }, { basis: 'optional' }); if (!read.ok) throw new Error('wrong'); return read.value; };
  const loosened = (before: object, after: object) => sheetChanges(of(before), of(after)).filter(({ loosens }) => loosens).map(({ what }) => what);
  expect(loosened({ maxMeanMps: 6, minForwardMps: 3 }, { maxMeanMps: 7, minForwardMps: 2 })).toEqual(['maxMeanMps', 'minForwardMps']);
  expect(loosened({ maxMeanMps: 6, minForwardMps: 3 }, { maxMeanMps: 5, minForwardMps: 4 })).toEqual([]);
  expect(loosened({ maxMeanMps: 6, maxGustMps: 9 }, { maxMeanMps: 6 })).toEqual(['maxGustMps']);
  expect(loosened({ maxMeanMps: 6 }, { maxMeanMps: 6, maxGustMps: 9 })).toEqual([]);
});

/** `npm run prove` asks for 200,000 of each. */
const RUNS = process.env['PROVE'] === undefined ? 4000 : 200_000;

/** A right value with some places in it spoilt. */
function spoilt(right: unknown): fc.Arbitrary<unknown> {
  const junk = fc.oneof(fc.jsonValue({ maxDepth: 2 }), fc.constantFrom(null, '', -1, 1e308, '\u202e', '__proto__', [], {}, 'x'.repeat(500)), fc.string({ unit: 'binary' }));
  return fc.tuple(fc.array(fc.tuple(fc.nat(200), junk, fc.boolean()), { minLength: 1, maxLength: 4 })).map(([edits]) => edits.reduce((value, [at, by, isNew]) => {
    const copy = structuredClone(value) as object;
    const places: [object, string][] = [];
    const walk = (node: unknown): void => { if (typeof node === 'object' && node !== null) for (const key of Object.keys(node)) { places.push([node, key]); walk((node as Record<string, unknown>)[key]); } };
    walk(copy);
    const place = places[at % Math.max(1, places.length)];
    if (place === undefined) return copy;
    Object.defineProperty(place[0], isNew ? `${place[1]}x` : place[1], { value: by, enumerable: true, configurable: true, writable: true });
    return copy;
  }, right));
}

test(`${RUNS} spoilt bodies and ${RUNS} spoilt configurations: read whole or refused with reasons`, () => {
  const whole = wish({ wing: { class: 'EN B', allUpMassKg: 95 }, units: { speed: 'kt' }, pauseUntil: '2027-05-20', channels: [{ kind: 'mail', address: 'a@b.org', quiet: { from: '22:00', to: '06:00' } }, { kind: 'webhook', url: 'https://h.example.org/x' }] });
  let refused = 0;
  fc.assert(fc.property(spoilt(whole), (body) => {
    const text = JSON.stringify(body);
    const json = parseJsonStrict(text ?? 'null');
    const read = json.ok ? parseSubscription(json.value, context) : json;
    if (!read.ok) {
      refused += 1;
      expect(read.error.length).toBeGreaterThan(0);
      for (const { path, problem, allowed } of read.error) expect(path.startsWith('$') && problem !== '' && allowed !== '').toBe(true);
    } else {
      expect(read.value.sites.every(({ id, sheet }) => context.sites.some((site) => site.id === id) && sheet !== '')).toBe(true);
      expect(read.value.channels.length).toBeGreaterThan(0);
      expect(Number.isInteger(read.value.deliverMinute) && read.value.days > 0 && read.value.days < 128).toBe(true);
    }
  }), { numRuns: RUNS, seed: 6 });
  const right = { site: launchFeature('north'), sheet: sheets[0], wish: Object.fromEntries(Object.entries(whole).filter(([key]) => key !== 'channels')) };
  fc.assert(fc.property(spoilt(right), (all) => {
    const { site, sheet, wish: preferences } = all as Record<string, unknown>;
    for (const read of [parseSiteFeature(site, { nowMs: 1.8e12 }), parseSheet(sheet, { basis: 'optional' }), parsePreferences(preferences, context)]) {
      if (!read.ok) { refused += 1; expect(read.error.length).toBeGreaterThan(0); }
    }
  }), { numRuns: RUNS, seed: 7 });
  expect(refused).toBeGreaterThan(RUNS / 2);
}, 3_600_000);
