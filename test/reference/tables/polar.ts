/** The polar, speed to fly, glide over the ground and the scaling of a wing: identities of a quadratic polar. */
import { standardAir } from '../../../lib/air/standard-atmosphere.ts';
import { flyGlide } from '../../../lib/wing/glide.ts';
import { groundSpeedMps } from '../../../lib/wing/ground-speed.ts';
import { polarFrom, sinkMps, type Polar } from '../../../lib/wing/polar.ts';
import { speedFactor } from '../../../lib/wing/scaling.ts';
import { speedToFlyMps } from '../../../lib/wing/speed-to-fly.ts';
import { M_PER_FT } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

const identity = { standing: 'memory', evidence: 'formula' } as const;
const quadratic = { ...identity, source: 'quadratic polar, closed form' } as const;

/** w = 0.05 V² - 0.85 V + 4.7, stated the way a pilot states a wing: best glide 8.3657 at 9.6954 m/s, least sink 1.0875. */
const TRIM = Math.sqrt(4.7 / 0.05);
const GLIDE = 1 / (2 * Math.sqrt(0.05 * 4.7) - 0.85);
function sample(): Polar {
  const polar = polarFrom({ trimMps: TRIM, glideAtTrim: GLIDE, minSinkMps: 1.0875, stallMps: 6, topMps: 15 });
  if (!polar.ok) throw new Error(polar.error);
  return polar.value;
}
const wing = sample();

const shape = table(
  { topic: 'Polar of three figures', unit: 'm/s', ...quadratic, rounding: 'to 0.0001 m/s', tolerance: 0.00005, count: 4 },
  [
    ['airspeed of least sink', 8.5, wing.minSinkSpeedMps], ['sink there', 1.0875, sinkMps(wing, 8.5)],
    ['sink at 10.5 m/s', 1.2875, sinkMps(wing, 10.5)], ['sink at 14 m/s', 2.6, sinkMps(wing, 14)],
  ] as const,
  { says: ([what]) => what, expected: ([, mps]) => mps, ours: ([, , mps]) => mps },
);

// head wind, sink of the air, best airspeed, glide over the ground there
const best = [
  [3, 0, 10.2111, 5.8442], [5, 0, 10.831, 4.2901], [8, 0, 12.6904, 2.3864], [-3, 0, 9.4097, 10.993],
  [0, 1, 10.6771, 4.5933], [0, 2, 11.5758, 3.2511], [5, 1, 12.3485, 2.5984], [5, 2, 13.6023, 1.9599],
] as const;
const inAir = (headMps: number, sink: number): string => `in ${headMps} m/s of headwind and air sinking at ${sink} m/s`;
const speedToFly = table(
  { topic: 'Speed to fly', unit: 'm/s', ...quadratic, rounding: 'to 0.0001 m/s', tolerance: 0.00005, count: 8 },
  best,
  { says: ([head, sink]) => inAir(head, sink), expected: ([, , mps]) => mps, ours: ([headMps, sink]) => speedToFlyMps(wing, { headMps, sinkMps: sink }) },
);
const macCready = table(
  { topic: 'Speed to fly', unit: 'm/s', ...quadratic, rounding: 'to 0.0001 m/s', tolerance: 0.00005, count: 3 },
  [[1, 10.6771], [2, 11.5758], [3, 12.4097]] as const,
  { says: ([setting]) => `ring set to ${setting} m/s in still air`, expected: ([, mps]) => mps, ours: ([setting]) => speedToFlyMps(wing, { headMps: 0, sinkMps: setting }) },
);

function glideOverGround(airspeedMps: number, headMps: number, airSink: number): number {
  return (groundSpeedMps(airspeedMps, { headMps, crossMps: 0 }) ?? NaN) / (sinkMps(wing, airspeedMps) + airSink);
}
const glideTopic = { topic: 'Glide over the ground', unit: '', ...quadratic, rounding: 'to 0.0001', tolerance: 0.00005 } as const;
const bestGlide = table(
  { ...glideTopic, count: 8 },
  best,
  { says: ([head, sink]) => `at the speed to fly ${inAir(head, sink)}`, expected: ([, , , glide]) => glide, ours: ([head, sink]) => glideOverGround(speedToFlyMps(wing, { headMps: head, sinkMps: sink }), head, sink) },
);
const trimGlide = table(
  { ...glideTopic, count: 6 },
  [[-5, 12.0388], [0, 8.1553], [3, 5.8252], [5, 4.2718], [8, 1.9417], [10, 0.3883]] as const,
  { says: ([head]) => `at 10.5 m/s in ${head} m/s of headwind`, expected: ([, glide]) => glide, ours: ([head]) => glideOverGround(10.5, head, 0) },
);

/** Height left after a distance against a steady headwind along a northward track. */
function heightUsedM(glide: { readonly airspeedMps: number; readonly totalSinkMps: number; readonly headMps: number; readonly distanceM: number }): number {
  const profile = { altitudeM: [0, 20_000], uMps: [0, 0], vMps: [-glide.headMps, -glide.headMps] };
  const end = flyGlide({ profile, trackDeg: 0, launchM: 10_000, ...glide });
  return end.kind === 'arrives' ? 10_000 - end.altitudeM : NaN;
}
const reach = table(
  { topic: 'Height a glide uses', unit: 'm', ...identity, source: 'height = distance × sink / ground speed', rounding: 'distance to 0.01 m', tolerance: 0.005, count: 1 },
  [[923.08, 10.5, 5, 0.5, 300]] as const,
  {
    says: ([distanceM, speed, head, sink]) => `for ${distanceM} m at ${speed} m/s against ${head} m/s, air sinking at ${sink} m/s`,
    expected: ([, , , , heightM]) => heightM,
    ours: ([distanceM, airspeedMps, headMps, sink]) => heightUsedM({ airspeedMps, totalSinkMps: sinkMps(wing, airspeedMps) + sink, headMps, distanceM }),
  },
);
const M_PER_MILE = 1609.344;
const anderson = table(
  { topic: 'Height a glide uses', unit: 'm', source: 'Anderson, Introduction to Flight, ch. 6, gliding example', standing: 'memory', evidence: 'number', rounding: 'range to 0.01 mile, 0.6 m of height', tolerance: 0.6, count: 1 },
  [[25.76, 13.6, 10_000]] as const,
  {
    says: ([miles, glide]) => `for ${miles} miles at a glide of ${glide}`,
    expected: ([, , ft]) => ft * M_PER_FT,
    ours: ([miles, glide]) => heightUsedM({ airspeedMps: 30, totalSinkMps: 30 / glide, headMps: 0, distanceM: miles * M_PER_MILE }),
  },
);

const scaling = table(
  { topic: 'Speed of a loaded wing in thin air', unit: '', ...identity, source: 'square root of mass over density', rounding: 'to 0.00001', tolerance: 0.000005, count: 2 },
  [
    ['108 kg under a wing stated for 90 kg', 1.09545, { densityKgm3: 1.225, allUpMassKg: 108, referenceMassKg: 90 }],
    ['2000 m up in the standard atmosphere', 1.10322, { densityKgm3: standardAir(2000).densityKgm3, allUpMassKg: null, referenceMassKg: null }],
  ] as const,
  { says: ([what]) => what, expected: ([, factor]) => factor, ours: ([, , state]) => speedFactor(state) },
);

export const polar: readonly Table[] = [shape, speedToFly, macCready, bestGlide, trimGlide, reach, anderson, scaling];
