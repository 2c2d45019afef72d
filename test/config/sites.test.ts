// The demo's sites: what the demo is to show, and that nobody can take them for places.
import { describe, expect, test } from 'vitest';
import { parseScenario } from '../../lib/config/scenario.ts';
import { parseSites } from '../../lib/config/sites.ts';
import demoJson from '../../config/demo.json' with { type: 'json' };
import sitesJson from '../../config/sites.json' with { type: 'json' };
import { NOW_MS, valueOf } from '../lib/config/fixtures.ts';

const sites = valueOf(parseSites(sitesJson, { nowMs: NOW_MS }));
const scenario = valueOf(parseScenario(demoJson));

function launch(id: string) {
  const site = sites.find((each) => each.id === id);
  if (site?.kind !== 'launch') throw new Error(`no launch "${id}"`);
  return site;
}

test('a training slope, a mountain launch, a strip, a withheld one and a soaring ridge, in two time zones', () => {
  expect(sites.map(({ id, kind }) => [id, kind])).toEqual([
    ['wennet-meadow', 'launch'], ['orlask-shoulder', 'launch'], ['tivvern-strip', 'strip'], ['maddle-bowl', 'launch'], ['quorrin-edge', 'launch'],
  ]);
  expect(new Set(sites.map(({ timeZone }) => timeZone)).size).toBe(2);
});

test('one on either half of the globe, none near a pole', () => {
  expect(sites.some(({ latDeg }) => latDeg < 0)).toBe(true);
  for (const { latDeg } of sites) expect(Math.abs(latDeg)).toBeLessThan(50);
});

test('the mountain launch stands far above the ground of every model', () => {
  const site = launch('orlask-shoulder');
  const own = scenario.sites.find((each) => each.site === site.id);
  expect(site.elevationM - Math.max(own?.fineGroundM ?? NaN, own?.coarseGroundM ?? NaN)).toBeGreaterThan(1000);
});

test('the training slope falls as gently as its landing suggests', () => {
  const site = launch('wennet-meadow');
  const fallDeg = (Math.atan((site.elevationM - site.landing.elevationM) / site.distanceM) * 180) / Math.PI;
  expect(Math.abs(fallDeg - site.slopeDeg)).toBeLessThan(3);
});

describe.each(sites.map((site) => ({ site })))('$site.name', ({ site }) => {
  test('has its weather in the scenario', () => {
    expect(scenario.sites.filter((each) => each.site === site.id)).toHaveLength(1);
  });

  test('says that it is invented', () => {
    expect(site.notes.join(' ')).toContain('Invented: there is no such place.');
    expect(site.localRules).not.toBeNull();
  });
});

test('exactly one is withheld', () => {
  expect(scenario.sites.filter(({ withheld }) => withheld).map((each) => each.site)).toEqual(['maddle-bowl']);
});

test('reference points for the foehn step lie low enough', () => {
  const { pressureStep } = launch('orlask-shoulder');
  expect(pressureStep?.a.name).toBe('Southgate of the valley');
});
