/** The shape of a site as a GeoJSON Feature (RFC 7946), strict: what is not named here is an error. */
import type * as z from 'zod';
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
    headingReference: oneOf(['true', 'magnetic']).default('true'),
    daylight: fields({
      rule: oneOf(['sunrise-sunset', 'civil-twilight']),
      beforeMin: number({ min: -180, max: 60, unit: 'min' }).default(0),
      afterMin: number({ min: -180, max: 60, unit: 'min' }).default(0),
    }).default({ rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 }),
    sectors: list(
      fields({
        fromDeg: number(directionRange),
        toDeg: number(directionRange),
        maxMps: number({ min: 0, max: 30, unit: 'm/s' }),
        why: line(120),
      }),
      { min: 0, max: 36 },
    ).default([]),
    localWind: list(
      fields({
        fromHour: wholeNumber({ min: 0, max: 23, unit: 'o\'clock, local' }),
        toHour: wholeNumber({ min: 1, max: 24, unit: 'o\'clock, local' }),
        speedMps: number({ min: 0, max: 40, unit: 'm/s' }),
        fromDeg: number(directionRange),
      }),
      { min: 0, max: 24 },
    ).default([]),
    pressureStep: fields({ a: referencePoint(), b: referencePoint() }).nullish(),
    localRules: line(300).nullable().default(null),
    notes: list(line(300), { min: 0, max: 20 }).default([]),
  };
}

function referencePoint() {
  return fields({ name: line(80), coordinates: positionMaybeHigh() });
}

function feature<S extends z.core.$ZodLooseShape>(properties: z.ZodObject<S, z.core.$strict>) {
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
      summitElevationM: number(elevationRange).nullish(),
      landing: fields({ coordinates: position(), roughnessM: number(roughnessRange) }),
      trackDeg: number(directionRange).nullish(),
      distanceM: number(distanceRange).nullish(),
    }),
  ),
);

export const stripSchema = once(() =>
  feature(
    fields({
      kind: oneOf(['strip']),
      ...commonShape(),
      headingDeg: number(directionRange),
      usableBothWays: trueOrFalse().default(false),
      lineLengthM: number({ min: 100, max: 3000, unit: 'm' }),
      roughnessM: number(roughnessRange),
      lineTensionRatio: number({ min: 0.1, max: 1.5, unit: 'of all-up weight' }).default(0.8),
      releaseAngleDeg: number({ min: 30, max: 85, unit: '° below the horizon at the wing' }).default(70),
      lineClearM: number({ min: 1, max: 2000, unit: 'm' }).nullish(),
    }),
  ),
);

export type LaunchFeature = z.output<ReturnType<typeof launchSchema>>;
export type StripFeature = z.output<ReturnType<typeof stripSchema>>;
