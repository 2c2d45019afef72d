// Unknown is NaN throughout the second opinion: it runs through every sum, product, minimum and maximum by itself, and only
// `known` may end it. Ranges are the "Plausible ranges" of data-shapes.md: outside, that value is unknown.

export const UNKNOWN = Number.NaN;

export function known(value: number): boolean {
  return Number.isFinite(value);
}

function inRange(value: unknown, lowest: number, highest: number): number {
  if (typeof value !== 'number') return UNKNOWN;
  if (!Number.isFinite(value)) return UNKNOWN;
  if (value < lowest) return UNKNOWN;
  if (value > highest) return UNKNOWN;
  return value;
}

export const read = {
  windMps: (value: unknown) => inRange(value, 0, 75),
  gustMps: (value: unknown) => inRange(value, 0, 100),
  directionDeg: (value: unknown) => inRange(value, 0, 360),
  temperatureC: (value: unknown) => inRange(value, -60, 55),
  pressureHpa: (value: unknown) => inRange(value, 400, 1085),
  seaLevelPressureHpa: (value: unknown) => inRange(value, 870, 1085),
  capeJkg: (value: unknown) => inRange(value, 0, 8000),
  precipitationMm: (value: unknown) => inRange(value, 0, 150),
  percent: (value: unknown) => inRange(value, 0, 100),
  visibilityM: (value: unknown) => inRange(value, 0, 300_000),
  mixedLayerM: (value: unknown) => inRange(value, 0, 6000),
  shortwaveWm2: (value: unknown) => inRange(value, -5, 1400),
  heatFluxWm2: (value: unknown) => inRange(value, -400, 800),
  weatherCode: (value: unknown) => (Number.isInteger(value) ? inRange(value, 0, 99) : UNKNOWN),
  anyFinite: (value: unknown) => inRange(value, -1e9, 1e9),
};

export function degToRad(deg: number): number {
  return (deg * Math.PI) / 180;
}

export function radToDeg(rad: number): number {
  return (rad * 180) / Math.PI;
}

// The angle between two directions, 0 to 180.
export function angleBetweenDeg(oneDeg: number, otherDeg: number): number {
  const turned = (((oneDeg - otherDeg) % 360) + 360) % 360;
  return turned > 180 ? 360 - turned : turned;
}

export function largest(values: number[]): number {
  if (values.length === 0) return UNKNOWN;
  let result = -Infinity;
  for (const value of values) result = Math.max(result, value); // Math.max hands NaN on
  return result;
}

export function least(values: number[]): number {
  if (values.length === 0) return UNKNOWN;
  let result = Infinity;
  for (const value of values) result = Math.min(result, value);
  return result;
}
