// Which sources a place is asked of, and what each declares.
import { expect, test } from 'vitest';
import { forgetful, liveSources, withCompanions } from '../../../worker/sources/order.ts';
import { order } from './pipeline.ts';

const settings = { openMeteoUrl: 'https://a.example', openMeteoEnsembleUrl: 'https://e.example', metNorwayUrl: 'https://m.example', nwsUrl: 'https://n.example', openMeteoKey: null, contact: null };
const asked: string[] = [];
const sourcesFor = liveSources(order, settings, {
  fetch: (url) => (asked.push(url), Promise.reject(new Error('closed'))), now: () => Date.parse('2027-05-14T02:40:00Z'), local: false, ...forgetful(),
});

const alps = { latDeg: 47.26, lonDeg: 11.44 };
const utah = { latDeg: 40.2, lonDeg: -111.7 };

test('the order is that of config, companions follow the models that need them, ensembles come last', () => {
  const ids = (place: typeof alps) => sourcesFor(place).map(({ id }) => id);
  const configured = (place: typeof alps) => order.sources.filter((entry) => ids(place).includes(entry.id)).map(({ id }) => id);
  for (const place of [alps, utah]) {
    expect(ids(place).filter((id) => !id.startsWith('open-meteo-mixed-layer:'))).toEqual(configured(place));
    expect(new Set(ids(place)).size).toBe(ids(place).length);
    expect(sourcesFor(place).map(({ kind }) => kind)).toEqual(sourcesFor(place).map(({ kind }) => kind).sort());
  }
  expect(ids(alps)).toContain('open-meteo-mixed-layer:ecmwf_ifs');
});

test('a depth that is lent is declared by its lender only', () => {
  const entries = withCompanions(order.sources);
  for (const entry of entries) {
    const lends = entry.id.startsWith('open-meteo-mixed-layer:');
    if (lends) expect(entry.declares).toEqual(['mixedLayerM']);
    else if (entry.provider === 'open-meteo' && entry.mixedLayerFrom !== null) expect(entry.declares).not.toContain('mixedLayerM');
  }
});

test('every source covers the places it is asked about, and says what a site costs', () => {
  for (const source of [...sourcesFor(alps), ...sourcesFor(utah)]) {
    expect(source.covers(source.id.startsWith('nws') ? utah : alps) || source.covers(utah)).toBe(true);
    if (source.id.startsWith('open-meteo')) expect(source.weightPerSite).toBeGreaterThanOrEqual(1);
  }
});

test('without a contact, services that want one are not asked at all', async () => {
  const site = { ...utah, id: 'u' } as never;
  const nws = sourcesFor(utah).find(({ id }) => id.startsWith('nws'));
  expect(nws).toBeDefined();
  asked.length = 0;
  const answers = await nws!.fetch({ sites: [site], fromUtc: '2027-05-14T00:00:00Z', toUtc: '2027-05-15T00:00:00Z' });
  expect(answers.get('u')).toEqual({ ok: false, error: { kind: 'not-fetched' } });
  expect(asked).toEqual([]);
});

test('those that stand by cover the place too, are not asked, and are whole without their companions', () => {
  for (const place of [alps, utah]) {
    const asked = new Set(sourcesFor(place).map(({ id }) => id));
    const standBys = sourcesFor(place, 'standBy');
    expect(standBys.length).toBeGreaterThan(0);
    for (const source of standBys) {
      expect(asked).not.toContain(source.id);
      expect(source.id).not.toMatch(/^open-meteo-mixed-layer:/);
      expect(source.covers(place)).toBe(true);
    }
  }
});
