// The operator's desk in the real browser: from a blank database to a rehearsed brief, sheets with what loosens, sites in and
// out, and who is let in. Track and distance are held against GeographicLib (Karney 2013), not against our own geodesic.
import { readFileSync } from 'node:fs';
import { Geodesic } from 'geographiclib-geodesic';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { launch, open } from './support/chromium.ts';
import { OPERATOR_TOKEN, startHouse, type DeskHouse } from './support/house.ts';
import { expectInOrder, expectKeyboard, LOOKS, lookName } from './support/journey.ts';

let browser: Browser;
let house: DeskHouse;

beforeAll(async () => {
  [browser, house] = await Promise.all([launch(), startHouse({ sites: true })]);
});

afterAll(async () => {
  await browser.close();
  await house.close();
});

const press = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: true }).click();
const computed = (page: Page, what: string) => page.locator('.computed div').filter({ has: page.getByText(what, { exact: true }) }).locator('dd').innerText();

async function signedIn(at: DeskHouse, look: { readonly width: number; readonly scripts?: boolean }, path = '/operator') {
  const watched = await open(browser, `${at.origin}/operator`, look);
  expect(new URL(watched.page.url()).pathname).toBe('/operator/sign-in');
  await watched.page.fill('[name=token]', OPERATOR_TOKEN);
  await press(watched.page, 'Sign in');
  if (path !== '/operator') await watched.page.goto(at.origin + path);
  return watched;
}

/** A launch above a valley: where the places are is invented, what is between them is for GeographicLib to say. */
const [LAUNCH, LANDING] = [{ lat: 47.2745, lon: 11.3962, m: 1240 }, { lat: 47.2622, lon: 11.4051, m: 760 }];
const placeText = ({ lat, lon, m }: typeof LAUNCH) => `${lat}, ${lon}, ${m}`;
const between = Geodesic.WGS84.Inverse(LAUNCH.lat, LAUNCH.lon, LANDING.lat, LANDING.lon);

test.each(LOOKS.map((look) => [lookName(look), look] as const))('a new operator adds a launch to a blank database in under ten entries and sees its rehearsed brief, at %s', async (_, look) => {
  const blank = await startHouse({ sites: false });
  const { page, complaints, close } = await signedIn(blank, look);
  expect(await page.locator('main').innerText()).toContain('No site is set up yet.');
  await page.getByRole('link', { name: 'Add a launch' }).click();
  const entries: readonly (readonly [string, string])[] = [
    ['#name', 'Höhberg Süd'], ['#place', placeText(LAUNCH)], ['#landing', placeText(LANDING)], ['#zone', 'Europe/Vienna'], ['#heading', '165'], ['#slope', '26'], ['#hill', '300'], ['#half', '450'],
  ];
  expect(entries.length).toBeLessThan(10);
  // With scripts the reader's own zone stands there already.
  if (look.scripts) expect(await page.inputValue('#zone')).not.toBe('');
  for (const [field, value] of entries) await page.fill(field, value);
  if (!look.scripts) await press(page, 'Look at what follows');
  await expect.poll(() => page.locator('.computed dt').count()).toBe(8);
  expect(await computed(page, 'Distance')).toContain(`${Math.round(between.s12 ?? NaN)} m`);
  expect(await computed(page, 'Track to the landing')).toContain(`${(((between.azi1 ?? NaN) + 360) % 360).toFixed(1)}°`);
  expect(await computed(page, 'Glide needed')).toContain(((between.s12 ?? NaN) / (LAUNCH.m - LANDING.m)).toFixed(1));
  expect(await computed(page, 'Declination')).toMatch(/^\d\.\d° east/);
  const declination = Number.parseFloat(await computed(page, 'Declination'));
  expect(Number.parseFloat(await computed(page, 'True heading'))).toBeCloseTo(165 + declination, 0);
  // Taylor & Lee (1984), a ridge: 2 h/L exp(-3 z/L) with L >= 2h, of a third of the hill at least.
  const speedUp = (heightM: number) => Math.round(100 * 2 * (heightM / Math.max(450, 2 * heightM)) * Math.exp(-30 / Math.max(450, 2 * heightM)));
  expect(await computed(page, 'Speed-up')).toContain(`${speedUp(100)} to ${speedUp(300)} %`);
  await expectInOrder(page, look);
  await press(page, 'Save');
  expect(new URL(page.url()).pathname).toBe('/operator/sites/hohberg-sud');
  expect(await page.inputValue('#place')).toBe(placeText(LAUNCH));
  await press(page, 'Rehearse a brief');
  const text = await page.locator('body').innerText();
  expect(text).toMatch(/^.*Invented weather\. A rehearsal of Höhberg Süd/ms);
  expect(await page.title()).toMatch(/^Invented weather/);
  expect(await page.locator('.arrives').innerText()).toMatch(/^Invented weather: .*Höhberg Süd/);
  expect(await page.locator('.arrives').innerText()).toContain(CLOSING);
  expect(await page.locator('.margins > li').count()).toBeGreaterThan(10);
  await expectInOrder(page, look);
  for (const table of ['brief', 'forecast', 'outbox', 'run', 'published']) expect(blank.ask(`SELECT * FROM ${table}`), table).toEqual([]);
  await page.getByRole('link', { name: 'Back to the site' }).click();
  await press(page, 'Show on the board');
  expect(blank.ask('SELECT site_id, wing_key, sheet_id FROM published')).toEqual([{ site_id: 'hohberg-sud', wing_key: 'EN B', sheet_id: 'descent-new' }]);
  // What a brief of it is held to is there too.
  expect(blank.ask('SELECT id FROM sheet')).toEqual([{ id: 'descent-new' }]);
  expect(await (await fetch(`${blank.origin}/`)).text()).toContain('Höhberg Süd');
  expect(complaints).toEqual([]);
  await close();
  await blank.close();
});

const api = (path: string, { headers = {}, ...init }: { readonly method?: string; readonly body?: string; readonly headers?: Record<string, string> } = {}) => fetch(`${house.origin}/api/v1/operator${path}`, { ...init, headers: { authorization: `Bearer ${OPERATOR_TOKEN}`, 'content-type': 'application/json', ...headers } });
const featureOf = async (id: string) => ((await (await api('/sites')).json()) as { features: { id: string; properties: Record<string, unknown> }[] }).features.find((feature) => feature.id === id);

describe('sites', () => {
  test('a change keeps what no field shows, and an entry that cannot be used keeps what was typed', async () => {
    const before = await featureOf('orlask-shoulder');
    const { page, close } = await signedIn(house, { width: 1280 }, '/operator/sites/orlask-shoulder');
    await page.fill('#slope', '27,5');
    await page.fill('#landing', '44.209, 14.073, 2600');
    await page.fill('#rules', 'Land at the south end only.');
    await press(page, 'Save');
    expect(await page.locator('#landing-wrong').innerText()).toContain('The landing is above the launch');
    expect([await page.inputValue('#landing'), await page.inputValue('#slope'), await page.inputValue('#rules')]).toEqual(['44.209, 14.073, 2600', '27,5', 'Land at the south end only.']);
    expect(await featureOf('orlask-shoulder')).toEqual(before);
    await page.fill('#landing', 'by the river');
    await press(page, 'Save');
    expect(await page.locator('#landing-wrong').innerText()).toContain('Not three numbers of a place');
    expect(await page.inputValue('#landing')).toBe('by the river');
    await page.fill('#landing', '44.209N 14.073E 605');
    await press(page, 'Save');
    expect(await page.locator('.said').innerText()).toContain('Saved');
    expect(await featureOf('orlask-shoulder')).toEqual({ ...before, properties: { ...before?.properties, headingReference: 'true', slopeDeg: 27.5, localRules: 'Land at the south end only.' } });
    await close();
  });

  test('whoever did not see the newest list writes nothing, and is shown what was typed', async () => {
    const { page, close } = await signedIn(house, { width: 390 }, '/operator/sites/quorrin-edge');
    const { etag, body } = await api('/sites').then(async (answer) => ({ etag: answer.headers.get('etag') ?? '', body: await answer.text() }));
    expect((await api('/sites', { method: 'PUT', body: body.replace('"Quorrin Edge"', '"Quorrin Edge Top"'), headers: { 'if-match': etag } })).status).toBe(200);
    await page.fill('#slope', '31');
    await press(page, 'Save');
    expect(await page.locator('[role=alert]').first().innerText()).toContain('Somebody else has changed the sites');
    expect(await page.inputValue('#slope')).toBe('31');
    expect((await featureOf('quorrin-edge'))?.properties['name']).toBe('Quorrin Edge Top');
    await press(page, 'Save');
    expect((await featureOf('quorrin-edge'))?.properties['slopeDeg']).toBe(31);
    await close();
  });

  test('a strip: its heading by the compass, both ways, and a name that is taken is said so', async () => {
    const { page, close } = await signedIn(house, { width: 390, scripts: false }, '/operator/new/strip');
    for (const [field, value] of [['#name', 'Tivvern Strip'], ['#place', '44.31, 14.2, 560'], ['#zone', 'Europe/Vienna'], ['#heading', '90'], ['#line', '900']] as const) await page.fill(field, value);
    await page.getByLabel('Tows go both ways').check();
    await press(page, 'Save');
    expect(await page.locator('#name-wrong').innerText()).toContain('A site of this name is here already');
    await page.fill('#name', 'Marl Field');
    await press(page, 'Save');
    expect((await featureOf('marl-field'))?.properties).toMatchObject({ kind: 'strip', headingDeg: 90, headingReference: 'magnetic', usableBothWays: true, lineLengthM: 900, roughnessM: 0.03 });
    await page.goto(`${house.origin}/operator/sites/marl-field/rehearse`);
    expect(await page.locator('.arrives').innerText()).toMatch(/^Invented weather: .*Marl Field/);
    await page.goto(`${house.origin}/operator/sites/marl-field`);
    await press(page, 'Retire this site');
    expect(await page.locator('main').innerText()).not.toContain('Marl Field');
    expect(await featureOf('marl-field')).toBeUndefined();
    await close();
  });

  test('out and in again as GeoJSON: looked at first, nothing of a file with a fault is taken', async () => {
    const { page, close } = await signedIn(house, { width: 1280 }, '/operator/import');
    const [download] = await Promise.all([page.waitForEvent('download'), page.getByRole('link', { name: /^Take all/ }).click()]);
    const text = readFileSync(await download.path(), 'utf8');
    const collection = JSON.parse(text) as { type: string; features: { id: string; geometry: { type: string; coordinates: number[] }; properties: Record<string, unknown> }[] };
    // RFC 7946, sections 3.1.1 and 3.3: a collection of points, longitude first.
    expect(collection.type).toBe('FeatureCollection');
    for (const { geometry } of collection.features) expect([geometry.type, geometry.coordinates.length, Math.abs(geometry.coordinates[1] ?? 99) <= 90]).toEqual(['Point', 3, true]);
    await page.fill('#text', text);
    await press(page, 'Look at what changes');
    expect(await page.locator('#plan-h + ul').innerText()).toMatch(/^As they are: /);
    const [first, ...others] = collection.features;
    const changed = { ...collection, features: [{ ...first, properties: { ...first?.properties, name: 'Maddle Bowl East' } }, ...others.slice(1)] };
    await page.fill('#text', JSON.stringify({ ...changed, features: [...changed.features, { type: 'Feature', id: 'Bad Id', geometry: { type: 'Point', coordinates: [0, 0, 1] }, properties: { kind: 'launch', slopDeg: 3 } }] }));
    await press(page, 'Look at what changes');
    expect(await page.locator('#text-wrong').innerText()).toMatch(/Nothing was taken\..*unknown key; did you mean "slopeDeg"\?/s);
    expect(await page.inputValue('#text')).toContain('Bad Id');
    expect((await featureOf(first?.id ?? ''))?.properties['name']).toBe(first?.properties['name']);
    await page.setInputFiles('#file', { name: 'sites.geojson', mimeType: 'application/geo+json', buffer: Buffer.from(JSON.stringify(changed)) });
    await page.getByLabel(/retire the others/).check();
    await press(page, 'Look at what changes');
    expect(await page.locator('#plan-h + ul').innerText()).toMatch(new RegExp(`^Retired: ${others[0]?.id}\\s+Changed: ${first?.id}\\s+As they are:`));
    await press(page, 'Take these in');
    expect(await page.locator('.said').innerText()).toContain('Taken in');
    expect((await featureOf(first?.id ?? ''))?.properties['name']).toBe('Maddle Bowl East');
    expect(await featureOf(others[0]?.id ?? '')).toBeUndefined();
    await close();
  });
});

test.each([[390, false], [1280, true]] as const)('sheets: what loosens comes first and has to be meant, at %i px, scripts %s', async (width, scripts) => {
  const { page, close } = await signedIn(house, { width, scripts }, '/operator/sheets');
  await page.getByRole('link', { name: 'Ridge soaring' }).click();
  const gust = page.getByLabel('Gust, at most', { exact: true });
  const before = Number(await gust.inputValue());
  const version = Number(/Version (\d+)/.exec(await page.locator('main').innerText())?.[1]);
  await gust.fill('strong');
  await press(page, 'Look at what changes');
  expect(await page.locator('.limits .wrong').innerText()).toContain('A text where a number is needed');
  expect(await gust.inputValue()).toBe('strong');
  await gust.fill(String(before + 1));
  const rain = page.getByLabel('Rain, at most', { exact: true });
  const rainBefore = await rain.inputValue();
  await rain.fill('0.05');
  await press(page, 'Look at what changes');
  expect(await page.locator('.loosens').innerText()).toContain(`Gust, at most: ${before} → ${before + 1}`);
  expect(await page.locator('.tightens').innerText()).toContain(`Rain, at most: ${rainBefore} → 0.05`);
  await expectInOrder(page, { scripts });
  const save = page.getByRole('button', { name: `Save as version ${version + 1}` });
  await save.click();
  expect(await page.locator('[role=alert]').innerText()).toContain('This lets more pass than before');
  expect(((await (await api('/sheets/ridge-soaring')).json()) as { sheet: { version: number } }).sheet.version).toBe(version);
  await page.getByLabel('I mean to let this pass').check();
  await save.click();
  expect(await page.locator('.said').innerText()).toContain('Saved');
  const stored = (await (await api('/sheets/ridge-soaring')).json()) as { sheet: { version: number; limits: Record<string, number>; basis: Record<string, string> } };
  expect(stored.sheet).toMatchObject({ version: version + 1, limits: { maxGustMps: before + 1, maxRainMm: 0.05 } });
  // A number that was typed anew has no longer the basis of the old one.
  expect(stored.sheet.basis).not.toHaveProperty('maxGustMps');
  expect(await page.locator('#history').innerText()).toContain(`Loosened. Gust, at most: ${before} → ${before + 1}`);
  await gust.fill(String(before));
  await rain.fill(rainBefore);
  await press(page, 'Look at what changes');
  await page.getByLabel('I mean to let this pass').check();
  await press(page, `Save as version ${version + 2}`);
  await close();
});

test.each([[390, false], [1280, true]] as const)('a new sheet begins as a copy: what it lets pass beyond the other has to be meant, at %i px, scripts %s', async (width, scripts) => {
  const { page, close } = await signedIn(house, { width, scripts }, '/operator/sheets/ridge-soaring');
  const model = ((await (await api('/sheets/ridge-soaring')).json()) as { sheet: { for: string; limits: Record<string, number>; basis: Record<string, string> } }).sheet;
  await page.getByRole('link', { name: 'Begin a new sheet from this one' }).click();
  const gust = page.getByLabel('Gust, at most', { exact: true });
  const before = Number(await gust.inputValue());
  expect([await page.inputValue('#name'), await page.inputValue('#for'), before]).toEqual(['', model.for, model.limits['maxGustMps']]);
  await gust.fill(String(before + 1));
  const rain = page.getByLabel('Rain, at most', { exact: true });
  await rain.fill('0.05');
  for (const [name, why] of [['', 'This text is empty'], ['First hops', 'A sheet of this name is here already']] as const) {
    await page.fill('#name', name);
    await press(page, 'Look at what differs');
    expect(await page.locator('#name-wrong').innerText()).toContain(why);
    expect([await page.inputValue('#name'), await gust.inputValue()]).toEqual([name, String(before + 1)]);
  }
  await page.fill('#name', `Ridge at dusk ${width}`);
  await press(page, 'Look at what differs');
  expect(await page.locator('.loosens').innerText()).toMatch(new RegExp(`^Lets more pass than Ridge soaring\\s+Gust, at most: ${before} → ${before + 1}\\s+Nobody is held to the new sheet yet\\.`));
  expect(await page.locator('.tightens').innerText()).toContain('→ 0.05');
  await expectInOrder(page, { scripts });
  await press(page, 'Save as a new sheet');
  expect(await page.locator('[role=alert]').innerText()).toContain('This lets more pass than before');
  expect((await api(`/sheets/ridge-at-dusk-${width}`)).status).toBe(404);
  await page.getByLabel('I mean to let this pass').check();
  await press(page, 'Save as a new sheet');
  expect(await page.locator('.said').innerText()).toContain('Saved as a new sheet');
  expect(new URL(page.url()).pathname).toBe(`/operator/sheets/ridge-at-dusk-${width}`);
  const stored = ((await (await api(`/sheets/ridge-at-dusk-${width}`)).json()) as { sheet: typeof model }).sheet;
  const { maxGustMps: _, maxRainMm: __, ...basis } = model.basis;
  expect(stored).toMatchObject({ name: `Ridge at dusk ${width}`, kind: 'launch', version: 1, limits: { ...model.limits, maxGustMps: before + 1, maxRainMm: 0.05 } });
  expect(stored.basis).toEqual(basis);
  await close();
});

test('where there is a second key, what loosens waits for it, and what tightens does not', async () => {
  const secondToken = 'the-token-of-the-second-key-for-tests-0123456789';
  const two = await startHouse({ sites: true, secondToken });
  const { page, close } = await signedIn(two, { width: 390, scripts: false }, '/operator/sheets/first-hops');
  const gust = page.getByLabel('Gust, at most', { exact: true });
  const before = Number(await gust.inputValue());
  const versions = () => two.ask('SELECT version FROM sheet WHERE id = \'first-hops\' ORDER BY version').length;
  await gust.fill(String(before - 0.5));
  await press(page, 'Look at what changes');
  expect(await page.locator('#second').count()).toBe(0);
  await press(page, /^Save as version/);
  expect(versions()).toBe(2);
  await gust.fill(String(before + 2));
  await press(page, 'Look at what changes');
  for (const token of ['', OPERATOR_TOKEN, `${secondToken}0`]) {
    await page.getByLabel('I mean to let this pass').check();
    await page.fill('#second', token);
    await press(page, /^Save as version/);
    expect(await page.locator('[role=alert]').innerText()).toContain('What loosens needs the second key here');
    expect([await gust.inputValue(), await page.inputValue('#second')]).toEqual([String(before + 2), '']);
  }
  expect(versions()).toBe(2);
  await page.getByLabel('I mean to let this pass').check();
  await page.fill('#second', secondToken);
  await press(page, /^Save as version/);
  expect(await page.locator('.said').innerText()).toContain('Saved');
  expect(versions()).toBe(3);
  await close();
  await two.close();
});

test('the status says how steps, sources, breakers, messages and canaries are', async () => {
  const untilMs = Date.now() + 600_000;
  house.ask('INSERT INTO breaker (source, body, stored_at) VALUES (?, ?, ?) RETURNING source', 'weather.example', JSON.stringify({ failuresMs: [1, 2, 3], openUntilMs: untilMs, waitMs: 60_000, probeMs: null }), Date.now());
  const { page, close } = await signedIn(house, { width: 390 }, '/operator/status');
  expect(await page.locator('h1').innerText()).toBe('Status: needs a look');
  expect(await page.locator('main').innerText()).toContain('No tick for more than five minutes');
  expect(await page.locator('#breakers table').innerText()).toMatch(new RegExp(`weather\\.example\\s+open until ${new Date(untilMs).toISOString().slice(0, 16).replace('T', ' ')} UTC\\s+3`));
  expect(await page.locator('#canaries table').innerText()).toMatch(/The judge, against what is known\s+not yet\s+cannot say: it has not been asked yet/);
  for (const part of ['steps', 'messages', 'work', 'sources', 'log']) expect(await page.locator(`#${part} h2`).count(), part).toBe(1);
  await expectInOrder(page, { scripts: true });
  await expectKeyboard(page);
  await close();
});

describe('who is let in', () => {
  const form = (path: string, fields: Record<string, string>, headers: Record<string, string> = {}) => fetch(house.origin + path, { method: 'POST', redirect: 'manual', body: new URLSearchParams(fields).toString(), headers: { 'content-type': 'application/x-www-form-urlencoded', ...headers } });
  const cookieOf = (answer: Response) => (answer.headers.get('set-cookie') ?? '').split(';')[0] ?? '';
  const stampIn = (markup: string) => /name="stamp" value="([\w-]+)"/.exec(markup)?.[1] ?? '';
  const everything = () => JSON.stringify(['site', 'sheet', 'published', 'sheet_change', 'wing'].map((table) => house.ask(`SELECT * FROM ${table}`)));

  test('T5 nobody without the token: every page leads to the sign-in, every wrong token gets one answer, the sixth waits', async () => {
    for (const path of ['', '/sites/wennet-meadow', '/new/launch', '/sheets', '/sheets/first-hops', '/import', '/status', '/sites.geojson', '/sites/wennet-meadow/rehearse']) {
      for (const cookie of ['', 'operator=x', `operator=${Date.now() + 9e5}.${'a'.repeat(16)}.${'b'.repeat(32)}`]) {
        const answer = await fetch(`${house.origin}/operator${path}`, { redirect: 'manual', headers: { cookie } });
        expect([answer.status, answer.headers.get('location')], path).toEqual([303, '/operator/sign-in']);
      }
    }
    const answers = [];
    for (const token of ['', 'x', `${OPERATOR_TOKEN}0`, OPERATOR_TOKEN.slice(1), 'a'.repeat(199)]) answers.push(await form('/operator/sign-in', { token }, { 'cf-connecting-ip': '203.0.113.5' }));
    expect(new Set(answers.map(({ status }) => status))).toEqual(new Set([401]));
    expect(new Set(await Promise.all(answers.map((answer) => answer.text()))).size).toBe(1);
    expect((await form('/operator/sign-in', { token: 'x' }, { 'cf-connecting-ip': '203.0.113.5' })).status).toBe(429);
  });

  test('T6 the cookie is for these pages only, and a form of anybody else changes nothing', async () => {
    const signIn = await form('/operator/sign-in', { token: OPERATOR_TOKEN });
    expect(signIn.headers.get('set-cookie')).toMatch(/^operator=[\w.-]+; Path=\/operator; HttpOnly; SameSite=Strict; Max-Age=3600$/);
    const cookie = cookieOf(signIn);
    expect(cookie).not.toContain(OPERATOR_TOKEN);
    const home = await fetch(`${house.origin}/operator`, { headers: { cookie } });
    expect([home.status, home.headers.get('cache-control'), home.headers.get('x-robots-tag')]).toEqual([200, 'no-store', 'noindex']);
    const stamp = stampIn(await home.text());
    expect(stamp).toMatch(/^[\w-]{32}$/);
    // The API never looks at it.
    expect((await fetch(`${house.origin}/api/v1/operator/sites`, { headers: { cookie } })).status).toBe(401);
    const before = everything();
    const wanted = { to: 'show', site: 'wennet-meadow', wing: 'EN A', sheet: 'first-hops' };
    expect((await form('/operator/board', wanted)).status).toBe(303);
    for (const headers of [{ cookie }, { cookie, origin: 'https://evil.example' }, { cookie, 'sec-fetch-site': 'cross-site' }, { cookie, 'sec-fetch-site': 'same-site' }]) {
      const given = 'origin' in headers || 'sec-fetch-site' in headers ? { ...wanted, stamp } : wanted;
      expect((await form('/operator/board', given, headers)).status).toBe(403);
    }
    const other = stampIn(await (await fetch(`${house.origin}/operator`, { headers: { cookie: cookieOf(await form('/operator/sign-in', { token: OPERATOR_TOKEN })) } })).text());
    expect(other).not.toBe(stamp);
    expect((await form('/operator/board', { ...wanted, stamp: other }, { cookie })).status).toBe(403);
    // Looking, whatever the address says, is only looking.
    for (const path of ['?said=retired', '/sites/wennet-meadow?to=retire', '/import?to=save', '/sheets/first-hops?to=save', '/sites/wennet-meadow/rehearse?wing=tandem&sheet=first-hops']) expect((await fetch(`${house.origin}/operator${path}`, { headers: { cookie } })).status).toBe(200);
    expect(everything()).toBe(before);
    expect((await form('/operator/board', { ...wanted, stamp }, { cookie, 'sec-fetch-site': 'same-origin' })).status).toBe(303);
    expect(everything()).not.toBe(before);
    const out = await form('/operator/sign-out', { stamp }, { cookie });
    expect(out.headers.get('set-cookie')).toContain('Max-Age=0');
  });
});
