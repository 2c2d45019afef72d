/** From where on a caution is printed (config/thresholds.json): starting values, common practice without a source, the operator's to change. */
import type * as z from 'zod/mini';
import type { CautionThresholds } from '../brief/thresholds.ts';
import { success, type Issue, type Result } from '../result.ts';
import { check } from './check.ts';
import { fields, number, once, type Range } from './fields.ts';
import type { Path } from './path.ts';
import { line } from './text.ts';

const ranges: Readonly<Record<keyof CautionThresholds, Range>> = {
  stormCapeJkg: { min: 0, max: 5000, unit: 'J/kg' },
  thermalMps: { min: 0, max: 10, unit: 'm/s' },
  windAloftMps: { min: 0, max: 40, unit: 'm/s' },
  landingGradientMps: { min: 0, max: 20, unit: 'm/s' },
  windRisingMps: { min: 0, max: 20, unit: 'm/s' },
  windTurningDeg: { min: 0, max: 180, unit: '°' },
  frontFallHpa: { min: 0, max: 20, unit: 'hPa in 3 h' },
  frontVeerDeg: { min: 0, max: 180, unit: '° in 2 h' },
  foehnStepHpa: { min: 0, max: 30, unit: 'hPa' },
  lowCloudM: { min: 0, max: 3000, unit: 'm above the launch' },
  fogVisibilityM: { min: 0, max: 10_000, unit: 'm' },
  rainNearMm: { min: 0, max: 10, unit: 'mm in the hour' },
  dewSpreadK: { min: 0, max: 10, unit: 'K' },
  thinAirM: { min: 0, max: 5000, unit: 'm above the true height' },
  lightWindMps: { min: 0, max: 5, unit: 'm/s' },
  disagreeMps: { min: 0, max: 20, unit: 'm/s' },
  oldForecastH: { min: 1, max: 18, unit: 'h since the run' },
  windChillC: { min: -60, max: 20, unit: '°C' },
  lowSunDeg: { min: 0, max: 90, unit: '° above the horizon' },
  lowSunOffAxisDeg: { min: 0, max: 180, unit: '°' },
  lastLightMin: { min: 0, max: 180, unit: 'min' },
};

const thresholdsSchema = once(() => {
  const numbers = Object.fromEntries(Object.entries(ranges).map(([name, range]) => [name, number(range)]));
  return fields({ basis: line(200), ...(numbers as Record<keyof CautionThresholds, z.ZodMiniNumber>) });
});

export function parseThresholds(json: unknown, path: Path = []): Result<CautionThresholds, Issue[]> {
  const shape = check(thresholdsSchema(), json, path);
  if (!shape.ok) return shape;
  const { basis: _basis, ...numbers } = shape.value;
  return success(numbers);
}
