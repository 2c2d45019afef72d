/** From where on a caution is printed (config/thresholds.json): starting values, common practice without a source, the operator's to change. */
import * as z from 'zod';
import { success, type Issue, type Result } from '../result.ts';
import { check } from './check.ts';
import { fields, number, once, type Range } from './fields.ts';
import type { Path } from './path.ts';
import { line } from './text.ts';

const ranges = {
  /** CAPE that makes the day one of storms. */
  capeHighJkg: { min: 0, max: 5000, unit: 'J/kg' },
  /** Share of the sheet's thermal limit from which thermals are called strong for it. */
  strongThermalShare: { min: 0, max: 1, unit: '(share of maxThermalMps)' },
  /** Wind from behind or across above the launch. */
  windAloftMps: { min: 0, max: 40, unit: 'm/s' },
  /** Loss of wind between 10 m and 2 m over the landing. */
  landingGradientMps: { min: 0, max: 20, unit: 'm/s' },
  /** Rise of the mean wind within two hours after a window. */
  windRisingMps: { min: 0, max: 20, unit: 'm/s' },
  /** Turn of the wind within two hours after a window. */
  windTurningDeg: { min: 0, max: 180, unit: '°' },
  /** Fall of the sea-level pressure in three hours, or turn of the wind in two, that is called a front. */
  frontFallHpa: { min: 0, max: 20, unit: 'hPa in 3 h' },
  frontTurnDeg: { min: 0, max: 180, unit: '° in 2 h' },
  foehnStepHpa: { min: 0, max: 30, unit: 'hPa' },
  lowCloudPct: { min: 0, max: 100, unit: '%' },
  lowCloudBaseM: { min: 0, max: 3000, unit: 'm above the launch' },
  fogVisibilityM: { min: 0, max: 10_000, unit: 'm' },
  /** Rain within two hours of a window, or in the two hours before it. */
  rainNearMm: { min: 0, max: 10, unit: 'mm in the hour' },
  /** Temperature above dew point at dawn, under which slope and wing are wet. */
  dewSpreadK: { min: 0, max: 10, unit: 'K' },
  /** Density altitude above the true height. */
  thinAirM: { min: 0, max: 5000, unit: 'm' },
  /** Two sources' winds apart. */
  disagreeMps: { min: 0, max: 20, unit: 'm/s' },
  windChillC: { min: -60, max: 20, unit: '°C' },
  lowSunElevationDeg: { min: 0, max: 90, unit: '°' },
  lowSunOffAxisDeg: { min: 0, max: 180, unit: '°' },
  lastLightMin: { min: 0, max: 180, unit: 'min' },
} as const satisfies Readonly<Record<string, Range>>;

export type Thresholds = Readonly<Record<keyof typeof ranges, number>>;

const thresholdsSchema = once(() => {
  const numbers = Object.fromEntries(Object.entries(ranges).map(([name, range]) => [name, number(range)]));
  return fields({ basis: line(200), ...(numbers as Record<keyof typeof ranges, z.ZodNumber>) });
});

export function parseThresholds(json: unknown, path: Path = []): Result<Thresholds, Issue[]> {
  const shape = check(thresholdsSchema(), json, path);
  if (!shape.ok) return shape;
  const { basis: _basis, ...numbers } = shape.value;
  return success(numbers);
}
