// Shipped sheets and wing classes against the pages of the contract (flight model, section 8; data shapes, wing), typed
// from there. Starting values of common practice: agreement says that the shipped data is what was agreed on. The
// starred numbers are an association's published limits and are checked against it as well.
import { describe, expect, test } from 'vitest';
import sheets from '../../config/sheets.json' with { type: 'json' };
import classes from '../../config/wing-classes.json' with { type: 'json' };
import { holds } from './holds.ts';
import { limits } from './tables/limits.ts';

const IDS = ['ground-handling', 'first-hops', 'descent-new', 'descent-experienced', 'ridge-soaring', 'thermal-flight', 'solo-tow', 'tandem-tow'];

// '-' is not judged, '*' is USHPA SOP 12-02.
const PAGE = `
maxMeanMps           | 6     | 4     | 5.36*  | 6.71* | 7.5   | 6.71* | 6     | 6
maxGustMps           | 8     | 5.5   | 6.71*  | 8.05* | 9     | 8.05* | 8     | 7.5
maxGustSpreadMps     | 3.5   | 2.5   | 3      | 4     | 3.5   | 4.5   | 3.5   | 3
maxCrossMps          | -     | 2     | 2.5    | 3     | 3     | 3.5   | 2.5   | 2
maxTailMps           | -     | 0.5   | 0.5    | 0.8   | 0.5   | 0.8   | 0.5   | 0.5
maxOffAxisDeg        | -     | 25*   | 25*    | 45    | 30    | 45    | 25*   | 25*
lightWindMps         | 1.34* | 1.34* | 1.34*  | 1.34* | 1.34* | 1.34* | 1.34* | 1.34*
minForwardMps        | -     | 3     | 2.5    | 2     | 1.5   | 2     | -     | -
minForwardAloftMps   | -     | 3     | 2.5    | 1.5   | 1.5   | 1     | 2     | 2
bandM                | -     | 50    | 200    | 300   | 150   | 1000  | -     | -
minArrivalM          | -     | 0     | 60     | 50    | 50    | 50    | -     | -
sinkMps              | -     | 0.2   | 0.5    | 0.5   | 0.3   | 0.5   | -     | -
sinkPerThermal       | -     | 0.25  | 0.25   | 0.25  | 0.25  | 0.25  | -     | -
minLandingReserveMps | -     | 0.8   | 0.6    | 0.3   | 0.3   | 0.3   | 0.5   | 0.5
maxRunMps            | -     | 7.5   | 8      | 8.8   | 8.8   | 8.8   | -     | -
slopeBufferDeg       | -     | 2     | 4      | 3     | 3     | 3     | -     | -
minSlopeDeg          | -     | -     | 14.04* | -     | -     | -     | -     | -
maxThermalMps        | 2     | 1.2   | 1.5    | 2.6   | 2     | 3.2   | 2.6   | 2
maxBackMps           | -     | 2     | 2.5    | 3.5   | 3     | 3.5   | -     | -
maxUpperMps          | -     | 10    | 8      | 11    | 14    | 11    | -     | -
maxClimbShearMps     | -     | -     | -      | -     | -     | -     | 5     | 4
minCloudBaseM        | -     | 150   | 200    | 150   | 150   | 500   | 150   | 200
maxCapeJkg           | 800   | 500   | 500    | 800   | 500   | 1000  | 800   | 500
maxRainMm            | 0.2   | 0.2   | 0.2    | 0.2   | 0.2   | 0.2   | 0.2   | 0.2
maxRainChancePct     | 40    | 30    | 30     | 40    | 40    | 40    | 30    | 30
minVisibilityM       | 1500  | 1500  | 5000   | 5000  | 3000  | 5000  | 3000  | 5000
maxPressureStepHpa   | -     | 4     | 4      | 4     | 4     | 4     | 4     | 4
minLiftMps           | -     | -     | -      | -     | 0     | -     | -     | -
minAgreement         | 0.8   | 0.8   | 0.8    | 0.7   | 0.8   | 0.7   | 0.8   | 0.8
minReleaseM          | -     | -     | -      | -     | -     | -     | 150   | 200`;

const rows = PAGE.trim().split('\n').map((line) => line.split('|').map((cell) => cell.trim()));

interface Cell {
  readonly field: string;
  readonly value: number;
  readonly isStarred: boolean;
}

/** What the page gives a sheet: its column without the dashes. */
function pageOf(id: string): readonly Cell[] {
  const column = IDS.indexOf(id) + 1;
  return rows.flatMap((cells) => {
    const text = cells[column] ?? '';
    return text === '-' ? [] : [{ field: cells[0] ?? '', value: Number(text.replace('*', '')), isStarred: text.endsWith('*') }];
  });
}

describe('the page', () => {
  test('has thirty lines of eight sheets, 180 numbers of them', () => {
    expect(rows.map((cells) => cells.length)).toEqual(Array.from({ length: 30 }, () => 9));
    expect(IDS.flatMap(pageOf)).toHaveLength(180);
  });

  test('stars 19 numbers', () => {
    expect(IDS.flatMap(pageOf).filter(({ isStarred }) => isStarred)).toHaveLength(19);
  });
});

test('eight sheets ship, in the order of the page', () => {
  expect(sheets.map(({ id }) => id)).toEqual(IDS);
});

describe.each(sheets)('the sheet $id', (sheet) => {
  test('has the limits of the page and no other', () => {
    expect(sheet.limits).toEqual(Object.fromEntries(pageOf(sheet.id).map(({ field, value }) => [field, value])));
  });

  test('gives a basis for every number, the association for the starred ones', () => {
    const basis: Readonly<Record<string, string>> = { ...sheet.basis };
    expect(Object.keys(basis).sort()).toEqual(Object.keys(sheet.limits).sort());
    for (const { field, isStarred } of pageOf(sheet.id)) {
      expect(`${field}: ${basis[field]}`).toBe(`${field}: ${isStarred ? 'USHPA SOP 12-02 operating limitations' : 'starting value; common practice, no source'}`);
    }
  });

  test('has a close band of its own only for the arrival of first hops', () => {
    expect('closeBands' in sheet ? sheet.closeBands : undefined).toEqual(sheet.id === 'first-hops' ? { arrival: 5 } : undefined);
  });

  test('is for a strip when it has a height of release, else for a launch', () => {
    expect(sheet.kind).toBe('minReleaseM' in sheet.limits ? 'strip' : 'launch');
  });
});

holds(limits);

// km/h, glide at trim, m/s: typical figures, common practice, no source.
test('the wing classes are those of the page', () => {
  const shipped = Object.entries(classes).map(([name, { trimKmh, glideAtTrim, minSinkMps }]) => [name, trimKmh, glideAtTrim, minSinkMps]);
  expect(shipped).toEqual([
    ['EN A', 36, 8.2, 1.15],
    ['EN B', 38, 9, 1.1],
    ['EN C', 39, 9.6, 1.05],
    ['EN D', 40, 10.4, 1],
    ['tandem', 38, 8.6, 1.15],
  ]);
});
