// The limit sheets as they ship, against the table of the flight model, section 8, copied by hand column by column. A number
// with a star is a figure of USHPA SOP 12-02, operating limitations; the others are starting values, common practice,
// no source.
import { describe, expect, test } from 'vitest';
import { parseSheets } from '../../lib/config/sheet.ts';
import sheetsJson from '../../config/sheets.json' with { type: 'json' };
import { valueOf } from '../lib/config/fixtures.ts';

const sheets = valueOf(parseSheets(sheetsJson, { basis: 'required' }));

const columns = ['ground-handling', 'first-hops', 'descent-new', 'descent-experienced', 'ridge-soaring', 'thermal-flight', 'solo-tow', 'tandem-tow'];

const table = `
maxMeanMps           6    4    5.36* 6.71* 7.5  6.71* 6    6
maxGustMps           8    5.5  6.71* 8.05* 9    8.05* 8    7.5
maxGustSpreadMps     3.5  2.5  3     4     3.5  4.5   3.5  3
maxCrossMps          -    2    2.5   3     3    3.5   2.5  2
maxTailMps           -    0.5  0.5   0.8   0.5  0.8   0.5  0.5
maxOffAxisDeg        -    25*  25*   45    30   45    25*  25*
lightWindMps         1.34* 1.34* 1.34* 1.34* 1.34* 1.34* 1.34* 1.34*
minForwardMps        -    3    2.5   2     1.5  2     -    -
minForwardAloftMps   -    3    2.5   1.5   1.5  1     2    2
bandM                -    50   200   300   150  1000  -    -
minArrivalM          -    0    60    50    50   50    -    -
sinkMps              -    0.2  0.5   0.5   0.3  0.5   -    -
sinkPerThermal       -    0.25 0.25  0.25  0.25 0.25  -    -
minLandingReserveMps -    0.8  0.6   0.3   0.3  0.3   0.5  0.5
maxRunMps            -    7.5  8     8.8   8.8  8.8   -    -
slopeBufferDeg       -    2    4     3     3    3     -    -
minSlopeDeg          -    -    14.04* -    -    -     -    -
maxThermalMps        2    1.2  1.5   2.6   2    3.2   2.6  2
maxBackMps           -    2    2.5   3.5   3    3.5   -    -
maxUpperMps          -    10   8     11    14   11    -    -
maxClimbShearMps     -    -    -     -     -    -     5    4
minCloudBaseM        -    150  200   150   150  500   150  200
maxCapeJkg           800  500  500   800   500  1000  800  500
maxRainMm            0.2  0.2  0.2   0.2   0.2  0.2   0.2  0.2
maxRainChancePct     40   30   30    40    40   40    30   30
minVisibilityM       1500 1500 5000  5000  3000 5000  3000 5000
maxPressureStepHpa   -    4    4     4     4    4     4    4
minLiftMps           -    -    -     -     0    -     -    -
minAgreement         0.8  0.8  0.8   0.7   0.8  0.7   0.8  0.8
minReleaseM          -    -    -     -     -    -     150  200
`;

const rows = table.trim().split('\n').map((row) => row.split(/\s+/));

test('eight sheets, in the order of the table', () => {
  expect(sheets.map(({ id }) => id)).toEqual(columns);
});

test('thirty rows of eight columns', () => {
  expect(rows).toHaveLength(30);
  expect(rows.map((row) => row.length)).toEqual(rows.map(() => 9));
});

describe.each(columns.map((id, index) => ({ id, index })))('$id', ({ id, index }) => {
  const sheet = sheetsJson[index] as { limits: Record<string, number>; basis: Record<string, string>; closeBands?: Record<string, number>; for: string };
  const cells = rows.map((row) => [row[0]!, row[index + 1]!] as const).filter(([, cell]) => cell !== '-');

  test('has exactly the numbers of its column', () => {
    expect(sheet.limits).toEqual(Object.fromEntries(cells.map(([name, cell]) => [name, Number(cell.replace('*', ''))])));
  });

  test('names the basis of every number, the association only where the table has a star', () => {
    const expected = cells.map(([name, cell]) => [name, cell.endsWith('*') ? 'USHPA SOP 12-02 operating limitations' : 'starting value; common practice, no source']);
    expect(sheet.basis).toEqual(Object.fromEntries(expected));
  });

  test('says whom it is for, and that local rules, site rules and a person on the spot come first', () => {
    expect(sheet.for).toMatch(/local rules and site rules come first/i);
    expect(sheet.for).toMatch(/(instructor|tow master)'s word/);
  });

  test(id === 'first-hops' ? 'is close to its arrival limit within 5 m' : 'has no close bands of its own', () => {
    expect(sheet.closeBands).toEqual(id === 'first-hops' ? { arrival: 5 } : undefined);
  });
});

// Miles an hour of the operating limitations, exactly 0.44704 m/s each, rounded down: 12, 15, 18 mph and 3 mph; a slope of 4:1.
test('the figures with a star are those of the operating limitations', () => {
  const down = (mph: number): number => Math.floor(mph * 0.44704 * 100) / 100;
  expect([down(12), down(15), down(3)]).toEqual([5.36, 6.7, 1.34]);
  expect(Math.round(15 * 0.44704 * 100) / 100).toBe(6.71);
  expect(Math.round(18 * 0.44704 * 100) / 100).toBe(8.05);
  expect((Math.atan(1 / 4) * 180) / Math.PI).toBeCloseTo(14.04, 2);
});

test('no sheet claims more than the trade does: strips for tows, launches for the rest', () => {
  expect(sheets.map(({ kind }) => kind)).toEqual(['launch', 'launch', 'launch', 'launch', 'launch', 'launch', 'strip', 'strip']);
});
