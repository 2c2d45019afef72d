// Source order, scenario, published pairs, thresholds, subscribers, and all of config/ at once.
import { describe, expect, test } from 'vitest';
import { loadConfig, type ConfigFiles } from '../../../lib/config/load.ts';
import { publishedPairs } from '../../../lib/config/published.ts';
import { coversPlace, sourcesFor } from '../../../lib/config/source-order.ts';
import demo from '../../../config/demo.json' with { type: 'json' };
import planDemo from '../../../config/plan-demo.json' with { type: 'json' };
import published from '../../../config/published.json' with { type: 'json' };
import sheets from '../../../config/sheets.json' with { type: 'json' };
import sites from '../../../config/sites.json' with { type: 'json' };
import sources from '../../../config/sources.json' with { type: 'json' };
import subscribers from '../../../config/subscribers.json' with { type: 'json' };
import thresholds from '../../../config/thresholds.json' with { type: 'json' };
import wingClasses from '../../../config/wing-classes.json' with { type: 'json' };
import { issuesOf, NOW_MS, valueOf, withValue, type Json } from './fixtures.ts';

const files = { demo, planDemo, published, sheets, sites, sources, subscribers, thresholds, wingClasses };
const config = valueOf(loadConfig(files, { nowMs: NOW_MS }));

/** Paths of what is wrong when one value of one file is replaced. */
function paths(file: keyof ConfigFiles, at: readonly (string | number)[], value: unknown): string[] {
  const changed = { ...files, [file]: at.length === 0 ? value : withValue(files[file] as unknown as Json, at, value) };
  return issuesOf(loadConfig(changed, { nowMs: NOW_MS })).map(({ path }) => path);
}

describe('the shipped configuration', () => {
  test('is right', () => {
    expect(loadConfig(files, { nowMs: NOW_MS }).ok).toBe(true);
  });

  test.each(Object.keys(files) as (keyof ConfigFiles)[])('without %s is refused by that name', (file) => {
    const found = paths(file, [], undefined);
    expect(found.length).toBeGreaterThan(0);
    expect(found.every((path) => path.startsWith(`$.${file}`))).toBe(true);
  });

  test('wrong in several files is reported for all of them', () => {
    const result = loadConfig({ ...files, demo: {}, thresholds: {}, sites: null }, { nowMs: NOW_MS });
    const named = new Set(issuesOf(result).map(({ path }) => path.split('.')[1]));
    expect(named).toEqual(new Set(['demo', 'sites', 'thresholds']));
  });
});

describe('the worked training day', () => {
  test.each<[readonly (string | number)[], unknown, string]>([
    [['groups', 0, 'sheet'], 'first-hop', '$.planDemo.groups[0].sheet'],
    [['groups', 1, 'sites', 0], 'wennet-meadow', '$.planDemo.groups[1].sites[0]'],
    [['groups', 2, 'wishHours'], 0, '$.planDemo.groups[2].wishHours'],
    [['sites', 3, 'id'], 'maddle-bowls', '$.planDemo.sites[3].id'],
    [['moves', 0, 'minutes'], '15', '$.planDemo.moves[0].minutes'],
    [['instructers'], 4, '$.planDemo.instructers'],
  ])('%j as %j is refused by its path', (at, value, path) => {
    expect(paths('planDemo', at, value)).toContain(path);
  });
});

describe('the source order', () => {
  test.each<[readonly (string | number)[], unknown, string]>([
    [['sources', 0, 'id'], 'icon_d2', '$.sources.sources[0].id'],
    [['sources', 0, 'kind'], 'determinstic', '$.sources.sources[0].kind'],
    [['sources', 0, 'declares', 0], 'wind10', '$.sources.sources[0].declares[0]'],
    [['sources', 0, 'levelsHpa', 0], 9999, '$.sources.sources[0].levelsHpa[0]'],
    [['sources', 0, 'model'], 'icon d2&x=1', '$.sources.sources[0].model'],
    [['sources', 0, 'runTimeNames'], [], '$.sources.sources[0].runTimeNames'],
    [['sources', 0, 'regions', 0, 'eastDeg'], -10, '$.sources.sources[0].regions[0].eastDeg'],
    [['sources', 1, 'id'], 'open-meteo:icon_d2', '$.sources.sources[1].id'],
    [['sources', 0, 'provider'], 'somebody', '$.sources.sources[0].provider'],
    [['perSite', 'deterministic'], 0, '$.sources.perSite.deterministic'],
    [['credits', 'nws', 'url'], 'javascript:alert(1)', '$.sources.credits.nws.url'],
  ])('%j as %j is refused', (at, value, path) => {
    expect(paths('sources', at, value)).toContain(path);
  });

  const idsAt = (lonDeg: number, latDeg: number): string[] => sourcesFor(config.sources, { lonDeg, latDeg }).map(({ id }) => id);

  test('gives the models that hold a place, in order, as many as wanted, the ensemble last', () => {
    expect(idsAt(11.4, 47.2)).toEqual(['open-meteo:icon_d2', 'open-meteo:meteofrance_arome_france', 'open-meteo:icon_eu', 'open-meteo:icon_d2_eps']);
    expect(idsAt(10.7, 59.9)).toEqual(['open-meteo:icon_eu', 'met-norway:locationforecast', 'open-meteo:gfs_global', 'open-meteo:icon_eu_eps']);
    expect(idsAt(-105, 40)).toEqual(['open-meteo:gfs_global', 'nws:gridpoints', 'open-meteo:ecmwf_ifs025', 'open-meteo:ecmwf_ifs025_ensemble']);
  });

  test('leaves no place on earth without two models and an ensemble', () => {
    for (let lonDeg = -180; lonDeg <= 180; lonDeg += 15) {
      for (let latDeg = -90; latDeg <= 90; latDeg += 15) {
        expect(idsAt(lonDeg, latDeg).length).toBeGreaterThanOrEqual(3);
      }
    }
  });

  test('counts the edge of a region as inside, and no region as the whole world', () => {
    const regions = [{ westDeg: 0, southDeg: 40, eastDeg: 10, northDeg: 50 }];
    expect(coversPlace({ regions }, { lonDeg: 10, latDeg: 50 })).toBe(true);
    expect(coversPlace({ regions }, { lonDeg: 10.001, latDeg: 50 })).toBe(false);
    expect(coversPlace({ regions: [] }, { lonDeg: -170, latDeg: -80 })).toBe(true);
  });

  test('never asks for a mixture of models', () => {
    for (const source of config.sources.sources) if (source.provider === 'open-meteo') expect(source.model).not.toMatch(/seamless|best_match/);
  });
});

describe('the published pairs', () => {
  test('are EN B on descent-new for a launch and on solo-tow for a strip, where nobody chose', () => {
    expect(publishedPairs(config.published, { id: 'elsewhere', kind: 'launch' })).toEqual([{ wing: 'EN B', sheet: 'descent-new' }]);
    expect(publishedPairs(config.published, { id: 'elsewhere', kind: 'strip' })).toEqual([{ wing: 'EN B', sheet: 'solo-tow' }]);
  });

  test('may be chosen for one site', () => {
    expect(publishedPairs(config.published, { id: 'wennet-meadow', kind: 'launch' })).toEqual([{ wing: 'EN A', sheet: 'first-hops' }]);
  });

  test.each<[readonly (string | number)[], unknown, string]>([
    [['launch', 0, 'sheet'], 'descent-nwe', '$.published.launch[0].sheet'],
    [['launch', 0, 'sheet'], 'solo-tow', '$.published.launch[0].sheet'],
    [['strip', 0, 'sheet'], 'descent-new', '$.published.strip[0].sheet'],
    [['strip', 0, 'wing'], 'EN F', '$.published.strip[0].wing'],
    [['sites', 0, 'site'], 'wennet', '$.published.sites[0].site'],
    [['sites', 0, 'pairs', 0, 'sheet'], 'solo-tow', '$.published.sites[0].pairs[0].sheet'],
    [['launch'], [], '$.published.launch'],
  ])('%j as %j is refused', (at, value, path) => {
    expect(paths('published', at, value)).toEqual([path]);
  });
});

describe('thresholds', () => {
  test.each(Object.keys(thresholds))('%s has to be there', (name) => {
    expect(paths('thresholds', [name], undefined)).toEqual([`$.thresholds.${name}`]);
  });

  test.each([['thinAirM', -1], ['oldForecastH', 48], ['lowSunDeg', '15'], ['lowSunDegree', 15]])('%s as %j is refused', (name, value) => {
    expect(paths('thresholds', [name], value)).toEqual([`$.thresholds.${name}`]);
  });
});

describe('subscribers', () => {
  test('of the demo: this terminal, for all sites, at half past five', () => {
    expect(config.subscribers).toEqual([
      { id: 'this-terminal', timeZone: 'Europe/Vienna', deliverMinute: 330, sites: config.sites.map(({ id }) => id), channels: [{ kind: 'terminal' }] },
    ]);
  });

  test.each<[readonly (string | number)[], unknown, string]>([
    [[0, 'deliverAt'], '25:00', '$.subscribers[0].deliverAt'],
    [[0, 'deliverAt'], '8:5', '$.subscribers[0].deliverAt'],
    [[0, 'deliverAt'], '08:00:60', '$.subscribers[0].deliverAt'],
    [[0, 'timeZone'], 'CET', '$.subscribers[0].timeZone'],
    [[0, 'sites'], ['orlask-sholder'], '$.subscribers[0].sites[0]'],
    [[0, 'channels'], [], '$.subscribers[0].channels'],
    [[0, 'channels', 0, 'kind'], 'pigeon', '$.subscribers[0].channels[0].kind'],
    [[1, 'channels', 0, 'url'], 'javascript:alert(1)', '$.subscribers[1].channels[0].url'],
    [[1, 'id'], 'this-terminal', '$.subscribers[1].id'],
    [[0, 'role'], 'admin', '$.subscribers[0].role'],
  ])('%j as %j is refused', (at, value, path) => {
    expect(paths('subscribers', at, value)).toEqual([path]);
  });
});

describe('the scenario', () => {
  test.each<[readonly (string | number)[], unknown, string]>([
    [['regions', 0, 'cloudShare'], 30, '$.demo.regions[0].cloudShare'],
    [['regions', 1, 'id'], 'wennet-valley', '$.demo.regions[1].id'],
    [['sites', 0, 'region'], 'wennet-vally', '$.demo.sites[0].region'],
    [['sites', 0, 'breeze', 'fromDeg'], null, '$.demo.sites[0].breeze.fromDeg'],
    [['sources', 0, 'id'], 'open-meteo:icon_d2', '$.demo.sources[0].id'],
    [['sources', 2, 'members'], 0, '$.demo.sources[2].members'],
    [['seed'], 7, '$.demo.seed'],
  ])('%j as %j is refused', (at, value, path) => {
    expect(paths('demo', at, value)).toContain(path);
  });
});
