/** Geodesics on three ellipsoids. */
import { geodesicBetween, type Ellipsoid } from '../../../lib/numeric/geodesic.ts';
import { table, type Table } from '../../accuracy/table.ts';

export function dms(degreesPart: number, minutes = 0, seconds = 0): number {
  return degreesPart + minutes / 60 + seconds / 3600;
}

const GRS80: Ellipsoid = { semiMajorM: 6378137, flattening: 1 / 298.257222101 };
const bessel: Ellipsoid = { semiMajorM: 6377397.155, flattening: 1 / 299.1528128 };
const international: Ellipsoid = { semiMajorM: 6378388, flattening: 1 / 297 };

export interface Line {
  readonly name: string;
  readonly ellipsoid: Ellipsoid;
  readonly from: { readonly latDeg: number; readonly lonDeg: number };
  readonly to: { readonly latDeg: number; readonly lonDeg: number };
  readonly trackDeg: number;
  readonly distanceM: number;
}

function vincentyLine(name: string, ellipsoid: Ellipsoid, latDeg: number, trackDeg: number, lat2Deg: number, lonDeg: number, distanceM: number): Line {
  return { name: `line ${name}`, ellipsoid, from: { latDeg, lonDeg: 0 }, to: { latDeg: lat2Deg, lonDeg }, trackDeg, distanceM };
}

/** Latitude, azimuth, latitude, longitude difference, metres; printed to 0.00001" and 1 mm. Confirmed by another library in geodesic.test.ts. */
export const vincentyLines: readonly Line[] = [
  vincentyLine('a', bessel, dms(55, 45), dms(96, 36, 8.7996), -dms(33, 26), dms(108, 13), 14110526.17),
  vincentyLine('b', international, dms(37, 19, 54.95367), dms(95, 27, 59.63089), dms(26, 7, 42.83946), dms(41, 28, 35.50729), 4085966.703),
  vincentyLine('c', international, dms(35, 16, 11.24862), dms(15, 44, 23.7485), dms(67, 22, 14.77638), dms(137, 47, 28.31435), 8084823.839),
  vincentyLine('d', international, dms(1), dms(89), -dms(0, 59, 53.83076), dms(179, 17, 48.02997), 19960000),
  vincentyLine('e', international, dms(1), dms(4, 59, 59.99995), dms(1, 1, 15.18952), dms(179, 46, 17.84244), 19780006.558),
];

/** Worked example of the GDA technical manual, on GDA94 (GRS80): millimetres and hundredths of a second. */
export const flindersPeak: Line = {
  name: 'Flinders Peak to Buninyong', ellipsoid: GRS80,
  from: { latDeg: -dms(37, 57, 3.7203), lonDeg: dms(144, 25, 29.5244) },
  to: { latDeg: -dms(37, 39, 10.1561), lonDeg: dms(143, 55, 35.3839) },
  trackDeg: dms(306, 52, 5.37), distanceM: 54972.271,
};

const vincenty = { source: 'Vincenty (1975) Survey Review 23(176), table II', standing: 'memory', evidence: 'number', count: 5 } as const;
const manual = { source: 'Geoscience Australia, GDA technical manual, worked example', standing: 'memory', evidence: 'number', count: 1 } as const;
const distance = { topic: 'Distance on the ellipsoid', unit: 'm' } as const;
const track = { topic: 'Track on the ellipsoid', unit: '″' } as const;
const says = ({ name }: Line): string => name;
const distances = { says, expected: ({ distanceM }: Line): number => distanceM, ours: ({ from, to, ellipsoid }: Line): number => geodesicBetween(from, to, ellipsoid).distanceM };
const tracks = { says, expected: ({ trackDeg }: Line): number => 3600 * trackDeg, ours: ({ from, to, ellipsoid }: Line): number => 3600 * geodesicBetween(from, to, ellipsoid).trackDeg };

export const geodesic: readonly Table[] = [
  table({ ...distance, ...vincenty, rounding: 'to 0.001 m', tolerance: 0.001, wider: 'latitudes printed to 0.00001″, which is 0.3 mm of meridian at either end' }, vincentyLines, distances),
  table({ ...distance, ...manual, rounding: 'to 0.001 m', tolerance: 0.0005 }, [flindersPeak], distances),
  table({ ...track, ...vincenty, rounding: 'to 0.00001″', tolerance: 0.002, wider: '0.00001″ of printed latitude turns lines d and e, which run almost to the antipode, by up to 0.001″' }, vincentyLines, tracks),
  table({ ...track, ...manual, rounding: 'to 0.01″', tolerance: 0.005 }, [flindersPeak], tracks),
];
