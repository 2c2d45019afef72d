// Typed from the pages: wing classes and close bands from data-shapes.md, the eight sheets from flight-model.md section 8.
import type { Limits, Sheet, WingClass } from './types.ts';

export const wingClasses: Record<WingClass, { trimKmh: number; glideAtTrim: number; minSinkMps: number }> = {
  'EN A': { trimKmh: 36, glideAtTrim: 8.2, minSinkMps: 1.15 },
  'EN B': { trimKmh: 38, glideAtTrim: 9.0, minSinkMps: 1.1 },
  'EN C': { trimKmh: 39, glideAtTrim: 9.6, minSinkMps: 1.05 },
  'EN D': { trimKmh: 40, glideAtTrim: 10.4, minSinkMps: 1.0 },
  tandem: { trimKmh: 38, glideAtTrim: 8.6, minSinkMps: 1.15 },
};

const none = null;
const columns = [
  'ground-handling',
  'first-hops',
  'descent-new',
  'descent-experienced',
  'ridge-soaring',
  'thermal-flight',
  'solo-tow',
  'tandem-tow',
] as const;

// Row by row as printed; none stands for the page's dash.
const rows: Record<string, (number | null)[]> = {
  maxMeanMps: [6, 4, 5.36, 6.71, 7.5, 6.71, 6, 6],
  maxGustMps: [8, 5.5, 6.71, 8.05, 9, 8.05, 8, 7.5],
  maxGustSpreadMps: [3.5, 2.5, 3, 4, 3.5, 4.5, 3.5, 3],
  maxCrossMps: [none, 2, 2.5, 3, 3, 3.5, 2.5, 2],
  maxTailMps: [none, 0.5, 0.5, 0.8, 0.5, 0.8, 0.5, 0.5],
  maxOffAxisDeg: [none, 25, 25, 45, 30, 45, 25, 25],
  lightWindMps: [1.34, 1.34, 1.34, 1.34, 1.34, 1.34, 1.34, 1.34],
  minForwardMps: [none, 3, 2.5, 2, 1.5, 2, none, none],
  minForwardAloftMps: [none, 3, 2.5, 1.5, 1.5, 1, 2, 2],
  bandM: [none, 50, 200, 300, 150, 1000, none, none],
  minArrivalM: [none, 0, 60, 50, 50, 50, none, none],
  sinkMps: [none, 0.2, 0.5, 0.5, 0.3, 0.5, none, none],
  sinkPerThermal: [none, 0.25, 0.25, 0.25, 0.25, 0.25, none, none],
  minLandingReserveMps: [none, 0.8, 0.6, 0.3, 0.3, 0.3, 0.5, 0.5],
  maxRunMps: [none, 7.5, 8, 8.8, 8.8, 8.8, none, none],
  slopeBufferDeg: [none, 2, 4, 3, 3, 3, none, none],
  minSlopeDeg: [none, none, 14.04, none, none, none, none, none],
  maxThermalMps: [2, 1.2, 1.5, 2.6, 2, 3.2, 2.6, 2],
  maxBackMps: [none, 2, 2.5, 3.5, 3, 3.5, none, none],
  maxUpperMps: [none, 10, 8, 11, 14, 11, none, none],
  maxClimbShearMps: [none, none, none, none, none, none, 5, 4],
  minCloudBaseM: [none, 150, 200, 150, 150, 500, 150, 200],
  maxCapeJkg: [800, 500, 500, 800, 500, 1000, 800, 500],
  maxRainMm: [0.2, 0.2, 0.2, 0.2, 0.2, 0.2, 0.2, 0.2],
  maxRainChancePct: [40, 30, 30, 40, 40, 40, 30, 30],
  minVisibilityM: [1500, 1500, 5000, 5000, 3000, 5000, 3000, 5000],
  maxPressureStepHpa: [none, 4, 4, 4, 4, 4, 4, 4],
  minLiftMps: [none, none, none, none, 0, none, none, none],
  minAgreement: [0.8, 0.8, 0.8, 0.7, 0.8, 0.7, 0.8, 0.8],
  minReleaseM: [none, none, none, none, none, none, 150, 200],
};

function sheetOf(column: number, id: string): Sheet {
  const limits: Limits = {};
  for (const [name, cells] of Object.entries(rows)) {
    const cell = cells[column];
    if (typeof cell === 'number') limits[name] = cell;
  }
  const sheet: Sheet = { id, kind: id.endsWith('-tow') ? 'strip' : 'launch', limits };
  if (id === 'first-hops') sheet.closeBands = { arrival: 5 };
  return sheet;
}

export const sheets: Sheet[] = columns.map((id, column) => sheetOf(column, id));

// data-shapes.md, "Default close bands": by unit, with its three named exceptions.
export function defaultCloseBand(id: string, unit: string): number {
  if (id === 'cloudBase') return 100;
  if (id === 'slope') return 1;
  if (id === 'visibility') return 500;
  if (id === 'agreement') return 0.05;
  if (unit === 'm/s') return 0.5;
  if (unit === 'm') return 30;
  if (unit === '°') return 5;
  if (unit === 'min') return 15;
  if (unit === 'J/kg') return 100;
  if (unit === 'mm') return 0.1;
  if (unit === '%') return 10;
  if (unit === 'hPa') return 0.5;
  throw new Error(`No close band for margin "${id}" in unit "${unit}".`);
}
