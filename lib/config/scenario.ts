/** The demo's invented weather (config/demo.json): regions, what each demo site gets of them, and the invented sources. */
import * as z from 'zod/mini';
import type { Scenario } from '../forecast/invented/scenario.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import { check, issue, issuesIn } from './check.ts';
import { closestWord } from './closest-word.ts';
import { fields, list, number, once, oneOf, trueOrFalse, wholeNumber } from './fields.ts';
import { valueAt, type Path } from './path.ts';
import { elevationRange } from './place.ts';
import { repeatedIds } from './sites.ts';
import { kebabId } from './text.ts';

const share = { min: 0, max: 1, unit: '(share)' };

function wind() {
  return fields({ speedMps: number({ min: 0, max: 40, unit: 'm/s' }), fromDeg: number({ min: 0, max: 360, unit: '°' }) });
}

function region() {
  return fields({
    id: kebabId(),
    seaLevelPressureHpa: number({ min: 980, max: 1045, unit: 'hPa' }),
    meanTemperatureC: number({ min: -20, max: 30, unit: '°C' }),
    seasonalSwingK: number({ min: 0, max: 25, unit: 'K' }),
    lapseKpkm: number({ min: 2, max: 9, unit: 'K/km' }),
    dryAtDawnK: number({ min: 0, max: 20, unit: 'K' }),
    mixedLayerTopM: number({ min: 200, max: 4000, unit: 'm above the ground' }),
    cloudShare: number(share),
    freeWind: wind(),
    pressureStepHpa: number({ min: -15, max: 15, unit: 'hPa' }),
    front: z.nullable(fields({
      dayShare: number(share),
      wind: wind(),
      rainMm: number({ min: 0, max: 50, unit: 'mm' }),
      fallHpa: number({ min: 0, max: 20, unit: 'hPa' }),
      thunderFromC: number({ min: -20, max: 60, unit: '°C' }),
    })),
  });
}

function site() {
  return fields({
    site: kebabId(),
    withheld: z._default(trueOrFalse(), false),
    region: kebabId(),
    fineGroundM: number(elevationRange),
    coarseGroundM: number(elevationRange),
    breeze: wind(),
    drainageMps: number({ min: 0, max: 5, unit: 'm/s' }),
    roughnessM: number({ min: 0.0002, max: 2, unit: 'm' }),
    fogHours: z._default(number({ min: 0, max: 12, unit: 'h after sunrise' }), 0),
  });
}

function source() {
  const form = (): string => '"invented:" and a word';
  return fields({
    id: z.string({ error: form }).check(z.regex(/^invented:[a-z]+$/, { error: form })),
    kind: oneOf(['deterministic', 'ensemble']),
    grid: oneOf(['fine', 'coarse']),
    members: z._default(wholeNumber({ min: 1, max: 100, unit: 'members' }), 1),
    breezeFactor: z._default(number({ min: 0, max: 3, unit: '' }), 1),
    windFactor: z._default(number({ min: 0, max: 3, unit: '' }), 1),
    frontShiftHours: z._default(number({ min: -6, max: 6, unit: 'h' }), 0),
    levelsHpa: z._default(list(wholeNumber({ min: 300, max: 1000, unit: 'hPa' }), { min: 0, max: 40 }), []),
    nearGroundM: z._default(list(wholeNumber({ min: 20, max: 300, unit: 'm' }), { min: 0, max: 8 }), []),
    speedSpread: z._default(number(share), 0),
    turnSpreadDeg: z._default(number({ min: 0, max: 60, unit: '°' }), 0),
    shiftedMembers: z._default(wholeNumber({ min: 0, max: 50, unit: 'members' }), 0),
  });
}

const scenarioSchema = once(() =>
  fields({
    regions: list(region(), { min: 1, max: 20 }),
    sites: list(site(), { min: 1, max: 100 }),
    sources: list(source(), { min: 1, max: 10 }),
  }),
);

export function parseScenario(json: unknown, path: Path = []): Result<Scenario, Issue[]> {
  const shape = check(scenarioSchema(), json, path);
  const issues = [
    ...issuesIn(shape),
    ...['regions', 'sources'].flatMap((name) => repeatedIds(listAt(json, name), [...path, name])),
    ...regionIssues(json, path),
  ];
  return shape.ok && issues.length === 0 ? success(shape.value) : failure(issues);
}

function listAt(json: unknown, name: string): readonly unknown[] {
  const value = valueAt(json, [name]);
  return Array.isArray(value) ? value : [];
}

function regionIssues(json: unknown, path: Path): Issue[] {
  const ids = listAt(json, 'regions').flatMap((item) => {
    const id = valueAt(item, ['id']);
    return typeof id === 'string' ? [id] : [];
  });
  return listAt(json, 'sites').flatMap((item, index) => {
    const id = valueAt(item, ['region']);
    if (typeof id !== 'string' || ids.includes(id)) return [];
    const near = closestWord(id, ids);
    const problem = `no region has this id${near === undefined ? '' : `; did you mean "${near}"?`}`;
    return [issue([...path, 'sites', index, 'region'], id, { problem, allowed: `one of ${ids.join(', ')}` })];
  });
}
