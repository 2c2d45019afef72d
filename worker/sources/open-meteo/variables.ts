/**
 * What is asked of the Open-Meteo interface and in which unit it must come back. Names and unit strings as the service
 * writes them; a wind in anything but m/s is a fault of the frame, not a thing to convert.
 */
import type { ConditionField } from '../../../lib/forecast/conditions.ts';

/** Unit strings the service is known to write; any other is called 'other', so that nothing of theirs is kept. */
export const KNOWN_UNITS = [
  'm/s', 'km/h', 'mp/h', 'kn', '°', '°C', '°F', '%', 'hPa', 'm', 'mm', 'cm', 'inch', 'ft', 'J/kg', 'W/m²', 'wmo code', '', 'iso8601', 'unixtime',
  'seconds', 'undefined',
] as const;

export type UnitWord = (typeof KNOWN_UNITS)[number] | 'other';

/** Fields that are one column each. */
export const SIMPLE_FIELDS = {
  temperature2mC: { variable: 'temperature_2m', unit: '°C' },
  dewPoint2mC: { variable: 'dew_point_2m', unit: '°C' },
  surfacePressureHpa: { variable: 'surface_pressure', unit: 'hPa' },
  seaLevelPressureHpa: { variable: 'pressure_msl', unit: 'hPa' },
  mixedLayerM: { variable: 'boundary_layer_height', unit: 'm' },
  shortwaveWm2: { variable: 'shortwave_radiation', unit: 'W/m²' },
  capeJkg: { variable: 'cape', unit: 'J/kg' },
  weatherCode: { variable: 'weather_code', unit: 'wmo code' },
  visibilityM: { variable: 'visibility', unit: 'm' },
  lowCloudPct: { variable: 'cloud_cover_low', unit: '%' },
} as const satisfies Partial<Record<ConditionField, { variable: string; unit: UnitWord }>>;

/** Sums and maxima of the hour before the stamp: an instant is touched by two of them. */
export const HOURLY_FIELDS = {
  gustMps: { variable: 'wind_gusts_10m', unit: 'm/s' },
  precipitationMm: { variable: 'precipitation', unit: 'mm' },
  precipitationProbabilityPct: { variable: 'precipitation_probability', unit: '%' },
} as const satisfies Partial<Record<ConditionField, { variable: string; unit: UnitWord }>>;

export type SimpleField = keyof typeof SIMPLE_FIELDS;
export type HourlyField = keyof typeof HOURLY_FIELDS;

export interface Wanted {
  readonly declares: readonly ConditionField[];
  readonly mayGive?: readonly ConditionField[];
  readonly nearGroundM: readonly number[];
  readonly levelsHpa: readonly number[];
}

/** Every column to ask for, with the unit it must have. */
export function columnsFor({ declares: surely, mayGive = [], nearGroundM, levelsHpa }: Wanted): ReadonlyMap<string, UnitWord> {
  const declares = [...surely, ...mayGive];
  const columns = new Map<string, UnitWord>();
  const wind = (place: string) => columns.set(`wind_speed_${place}`, 'm/s').set(`wind_direction_${place}`, '°');
  if (declares.includes('wind10m')) wind('10m');
  if (declares.includes('nearGround')) for (const heightM of nearGroundM) wind(`${heightM}m`);
  if (declares.includes('levels')) {
    for (const hpa of levelsHpa) {
      wind(`${hpa}hPa`);
      columns.set(`geopotential_height_${hpa}hPa`, 'm').set(`temperature_${hpa}hPa`, '°C').set(`relative_humidity_${hpa}hPa`, '%');
    }
  }
  for (const [field, { variable, unit }] of Object.entries({ ...HOURLY_FIELDS, ...SIMPLE_FIELDS })) {
    if (declares.includes(field as ConditionField)) columns.set(variable, unit);
  }
  return columns;
}

/** Member 0 has the bare name, the others a suffix of two digits. */
export function memberColumn(variable: string, member: number): string {
  return member === 0 ? variable : `${variable}_member${String(member).padStart(2, '0')}`;
}
