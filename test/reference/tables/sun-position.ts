/** Where the sun stands, refraction included. */
import { sunAt } from '../../../lib/sky/sun.ts';
import { table, type Table } from '../../accuracy/table.ts';

type Row = readonly [name: string, latDeg: number, lonDeg: number, utc: string, altitudeDeg: number, azimuthDeg: number];

// JPL Horizons, apparent and refracted, printed to 0.000001°; as fetched on 17 June 2026 into the test fixtures of
// mourner/suncalc @886bda4. Every hour of theirs on three days at five places at which the sun stands 2° high or more.
const horizons: readonly Row[] = [
  ['Tromsø', 69.6489, 18.95508, '2026-03-20T06:00:00Z', 5.86878, 106.117269],
  ['Tromsø', 69.6489, 18.95508, '2026-03-20T12:00:00Z', 19.414529, 198.156859],
  ['Tromsø', 69.6489, 18.95508, '2026-06-21T00:00:00Z', 4.221784, 16.994657],
  ['Tromsø', 69.6489, 18.95508, '2026-06-21T06:00:00Z', 28.339575, 98.809694],
  ['Tromsø', 69.6489, 18.95508, '2026-06-21T12:00:00Z', 42.510709, 203.256573],
  ['Tromsø', 69.6489, 18.95508, '2026-06-21T18:00:00Z', 15.823824, 295.288396],
  ['Istanbul', 41.01384, 28.94966, '2026-03-20T06:00:00Z', 20.027281, 108.65225],
  ['Istanbul', 41.01384, 28.94966, '2026-03-20T12:00:00Z', 42.180069, 217.907069],
  ['Istanbul', 41.01384, 28.94966, '2026-06-21T06:00:00Z', 36.281327, 89.094224],
  ['Istanbul', 41.01384, 28.94966, '2026-06-21T12:00:00Z', 60.403174, 242.380255],
  ['Istanbul', 41.01384, 28.94966, '2026-12-21T06:00:00Z', 4.732029, 126.738675],
  ['Istanbul', 41.01384, 28.94966, '2026-12-21T12:00:00Z', 20.03775, 208.672011],
  ['Shanghai', 31.22222, 121.45806, '2026-03-20T00:00:00Z', 24.850205, 106.604187],
  ['Shanghai', 31.22222, 121.45806, '2026-03-20T06:00:00Z', 47.949372, 227.461885],
  ['Shanghai', 31.22222, 121.45806, '2026-06-21T00:00:00Z', 37.656044, 83.11207],
  ['Shanghai', 31.22222, 121.45806, '2026-06-21T06:00:00Z', 61.481435, 261.8818],
  ['Shanghai', 31.22222, 121.45806, '2026-12-21T00:00:00Z', 12.176913, 127.273543],
  ['Shanghai', 31.22222, 121.45806, '2026-12-21T06:00:00Z', 27.380234, 213.16021],
  ['Bogotá', 4.60971, -74.08175, '2026-03-20T12:00:00Z', 14.072348, 91.199723],
  ['Bogotá', 4.60971, -74.08175, '2026-03-20T18:00:00Z', 75.221851, 252.428624],
  ['Bogotá', 4.60971, -74.08175, '2026-06-21T12:00:00Z', 16.065308, 66.920288],
  ['Bogotá', 4.60971, -74.08175, '2026-06-21T18:00:00Z', 65.992353, 323.087135],
  ['Bogotá', 4.60971, -74.08175, '2026-12-21T12:00:00Z', 13.145889, 115.365116],
  ['Bogotá', 4.60971, -74.08175, '2026-12-21T18:00:00Z', 57.732989, 208.965264],
  ['Melbourne', -37.814, 144.96332, '2026-03-20T00:00:00Z', 39.37084, 50.991355],
  ['Melbourne', -37.814, 144.96332, '2026-03-20T06:00:00Z', 28.455433, 294.611185],
  ['Melbourne', -37.814, 144.96332, '2026-06-21T00:00:00Z', 20.316145, 34.574164],
  ['Melbourne', -37.814, 144.96332, '2026-06-21T06:00:00Z', 10.270287, 310.613761],
  ['Melbourne', -37.814, 144.96332, '2026-12-21T00:00:00Z', 57.282758, 73.951166],
  ['Melbourne', -37.814, 144.96332, '2026-12-21T06:00:00Z', 40.908464, 270.347659],
];

// Reda & Andreas, worked example: Golden, Colorado; zenith 50.11162°, azimuth 194.34024°. Transcribed in the tests of
// pvlib-python @6382338. Their air is 820 hPa, which refracts 0.003° less than at the sea.
const golden: readonly Row[] = [['Golden', 39.742476, -105.1786, '2003-10-17T19:30:30Z', 39.88838, 194.34024]];

const says = ([name, , , utc]: Row): string => `${name}, ${utc}`;
const at = ([, latDeg, lonDeg, utc]: Row): ReturnType<typeof sunAt> => sunAt(Date.parse(utc), { latDeg, lonDeg });
const altitude = { says, expected: (row: Row): number => row[4], ours: (row: Row): number => at(row).altitudeDeg };
const azimuth = { says, expected: (row: Row): number => row[5], ours: (row: Row): number => at(row).azimuthDeg };

const height = { topic: 'Height of the sun', unit: '°', standing: 'published', evidence: 'number', tolerance: 0.02, wider: 'a short ephemeris, 0.01°, and refraction of a standard air' } as const;
const bearing = { topic: 'Bearing of the sun', unit: '°', standing: 'published', evidence: 'number', compared: 'around the circle', tolerance: 0.02, wider: 'a short ephemeris, 0.01°' } as const;
const jpl = { source: 'JPL Horizons', rounding: 'to 0.000001°', count: 30 } as const;
const nrel = { source: 'NREL/TP-560-34302 (2008), worked example', rounding: 'to 0.00001°', count: 1 } as const;

export const sunPosition: readonly Table[] = [
  table({ ...height, ...jpl }, horizons, altitude),
  table({ ...height, ...nrel }, golden, altitude),
  table({ ...bearing, ...jpl }, horizons, azimuth),
  table({ ...bearing, ...nrel }, golden, azimuth),
];
