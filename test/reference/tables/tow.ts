/** The static tow: balance of forces, height of release, and what clubs say they get. */
import { degrees } from '../../../lib/angles.ts';
import { flyTow, towBalance } from '../../../lib/wing/tow.ts';
import { table, type Table } from '../../accuracy/table.ts';

const balance = { source: 'balance of forces on a straight weightless line, worked out again', standing: 'memory', evidence: 'formula' } as const;
const wing = { trimMps: 10.5, glideAtTrim: 8 };
const onLine = { ...wing, tensionRatio: 0.8 };

// line angle below the horizon, flight-path angle, load factor; tension 0.8 of the weight, glide 8
const angles = [[0, 31.535, 1.2707], [20, 23.426, 1.4675], [45, 12.74, 1.6519], [60, 6.17, 1.726], [70, 1.753, 1.7593], [80, -2.682, 1.7794]] as const;

const climbTopic = { topic: 'Path angle on tow and in free glide', unit: '°' } as const;
const climb = table(
  { ...climbTopic, ...balance, rounding: 'to 0.001°', tolerance: 0.0005, count: 6 },
  angles,
  { says: ([lineDeg]) => `line at ${lineDeg}°, pulling 0.8 of the weight`, expected: ([, deg]) => deg, ours: ([lineDeg]) => degrees(towBalance(onLine, lineDeg).gammaRad) },
);
const slack = table(
  { ...climbTopic, ...balance, rounding: 'to 0.001°', tolerance: 0.0005, count: 1 },
  [[8, -7.125]] as const,
  { says: ([glide]) => `no tension, glide ${glide}`, expected: ([, deg]) => deg, ours: ([glideAtTrim]) => degrees(towBalance({ ...wing, glideAtTrim, tensionRatio: 0 }, 30).gammaRad) },
);
const anderson = table(
  { ...climbTopic, source: 'Anderson, Introduction to Flight, ch. 6, gliding example', standing: 'memory', evidence: 'number', rounding: 'to 0.1°', tolerance: 0.05, count: 1 },
  [[13.6, -4.2]] as const,
  { says: ([glide]) => `no tension, glide ${glide}`, expected: ([, deg]) => deg, ours: ([glideAtTrim]) => degrees(towBalance({ ...wing, glideAtTrim, tensionRatio: 0 }, 30).gammaRad) },
);

/** Lift over weight: the airspeed goes with its square root, and in free glide lift is weight times cos(atan(1/glide)). */
const load = table(
  { topic: 'Load factor on tow', unit: '', ...balance, rounding: 'to 0.0001', tolerance: 0.00005, count: 6 },
  angles,
  {
    says: ([lineDeg]) => `line at ${lineDeg}°, pulling 0.8 of the weight`,
    expected: ([, , factor]) => factor,
    ours: ([lineDeg]) => (towBalance(onLine, lineDeg).airspeedMps / wing.trimMps) ** 2 * Math.cos(Math.atan(1 / wing.glideAtTrim)),
  },
);

function releaseM(headMps: number): number {
  return flyTow({ ...onLine, lineLengthM: 800, releaseAngleDeg: 70, headwindMps: () => headMps }).releaseM;
}
const says = (headMps: number): string => `800 m of line, 70° at release, ${headMps} m/s of headwind`;
const release = table(
  {
    topic: 'Height of release', unit: 'm', source: 'same balance integrated by Euler steps of 0.01 s', standing: 'memory', evidence: 'formula', rounding: 'to 0.1 m', tolerance: 0.1, count: 4,
    wider: 'Euler steps of 0.01 s run a tenth of a metre off',
  },
  [[0, 269.2], [2, 305.8], [4, 354.7], [6, 423.7]] as const,
  { says: ([headMps]) => says(headMps), expected: ([, heightM]) => heightM, ours: ([headMps]) => releaseM(headMps) },
);

// A French club's page: about 300 to 400 m of height from 800 m of cable; another's: release before the line stands at
// 70°. No page names the wind; 2 to 5 m/s is what a tow is flown in. The band is its middle with half its width.
const clubs = table(
  {
    topic: 'Height of release as clubs tell it', unit: 'm', source: 'two French clubs, 300 to 400 m from 800 m of cable', standing: 'published', evidence: 'nature', rounding: 'a band of 100 m', tolerance: 50, count: 4,
    wider: 'told for no wind in particular; the model leaves the band in no wind (269 m) and from 5.5 m/s on',
  },
  [[2, 350], [3, 350], [4, 350], [5, 350]] as const,
  { says: ([headMps]) => says(headMps), expected: ([, heightM]) => heightM, ours: ([headMps]) => releaseM(headMps) },
);

export const tow: readonly Table[] = [climb, slack, anderson, load, release, clubs];
