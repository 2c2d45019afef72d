/** The shape of a site as a GeoJSON Feature (RFC 7946), strict: what is not named here is an error. */
import * as z from 'zod/mini';
import { fields, list, number, once, oneOf, trueOrFalse, wholeNumber } from './fields.ts';
import { elevationRange, position, positionMaybeHigh } from './place.ts';
import { kebabId, line } from './text.ts';
import { zone } from './zone.ts';

const directionRange = { min: 0, max: 360, unit: '°, clockwise from north' };
const roughnessRange = { min: 0.0002, max: 2, unit: 'm of roughness length' };

/** Further apart a launch and its landing are no glide; nearer they are one place. */
export const distanceRange = { min: 5, max: 50_000, unit: 'm' };

function commonShape() {
  return {
    name: line(80),
    timeZone: zone(),
    headingReference: z._default(oneOf(['true', 'magnetic']), 'true'),
    daylight: z._default(fields({
      rule: oneOf(['sunrise-sunset', 'civil-twilight']),
      beforeMin: z._default(number({ min: -180, max: 60, unit: 'min' }), 0),
      afterMin: z._default(number({ min: -180, max: 60, unit: 'min' }), 0),
    }), { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 }),
    sectors: z._default(list(
      fields({
        fromDeg: number(directionRange),
        toDeg: number(directionRange),
        maxMps: number({ min: 0, max: 30, unit: 'm/s' }),
        why: line(120),
      }),
      { min: 0, max: 36 },
    ), []),
    localWind: z._default(list(
      fields({
        fromHour: wholeNumber({ min: 0, max: 23, unit: 'o\'clock, local' }),
        toHour: wholeNumber({ min: 1, max: 24, unit: 'o\'clock, local' }),
        speedMps: number({ min: 0, max: 40, unit: 'm/s' }),
        fromDeg: number(directionRange),
      }),
      { min: 0, max: 24 },
    ), []),
    pressureStep: z.nullish(fields({ a: referencePoint(), b: referencePoint() })),
    localRules: z._default(z.nullable(line(300)), null),
    notes: z._default(list(line(300), { min: 0, max: 20 }), []),
  };
}

function referencePoint() {
  return fields({ name: line(80), coordinates: positionMaybeHigh() });
}

function feature<S extends z.core.$ZodLooseShape>(properties: z.ZodMiniObject<S, z.core.$strict>) {
  return fields({
    type: oneOf(['Feature']),
    id: kebabId(),
    geometry: fields({ type: oneOf(['Point']), coordinates: position() }),
    properties,
  });
}

export const launchSchema = once(() =>
  feature(
    fields({
      kind: oneOf(['launch']),
      ...commonShape(),
      facingDeg: number(directionRange),
      slopeDeg: number({ min: 0, max: 60, unit: '°' }),
      hill: fields({
        form: oneOf(['ridge', 'escarpment', 'cone', 'flat']),
        heightM: number({ min: 0, max: 3000, unit: 'm' }),
        halfLengthM: number({ min: 10, max: 10_000, unit: 'm from the crest upwind to half the height' }),
      }),
      summitElevationM: z.nullish(number(elevationRange)),
      landing: fields({ coordinates: position(), roughnessM: number(roughnessRange) }),
      trackDeg: z.nullish(number(directionRange)),
      distanceM: z.nullish(number(distanceRange)),
    }),
  ),
);

export const stripSchema = once(() =>
  feature(
    fields({
      kind: oneOf(['strip']),
      ...commonShape(),
      headingDeg: number(directionRange),
      usableBothWays: z._default(trueOrFalse(), false),
      lineLengthM: number({ min: 100, max: 3000, unit: 'm' }),
      roughnessM: number(roughnessRange),
      lineTensionRatio: z._default(number({ min: 0.1, max: 1.5, unit: 'of all-up weight' }), 0.8),
      releaseAngleDeg: z._default(number({ min: 30, max: 85, unit: '° below the horizon at the wing' }), 70),
      lineClearM: z.nullish(number({ min: 1, max: 2000, unit: 'm' })),
    }),
  ),
);

export type LaunchFeature = z.output<ReturnType<typeof launchSchema>>;
export type StripFeature = z.output<ReturnType<typeof stripSchema>>;
