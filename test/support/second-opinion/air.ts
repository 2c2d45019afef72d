// flight-model.md section 2: the air column. NaN is unknown.
import { UNKNOWN, known, read } from './numbers.ts';
import type { Conditions } from './types.ts';

export const g = 9.80665;
const Rd = 287.05287;
const Rv = 461.5;
export const cp = 1005;

// A pressure level of this hour at a place in the order of heights. A level that cannot be used is a hole: it keeps its place, with
// unknown values, so that nothing is interpolated across it (section "One rule stands above all formulas").
export type Level = {
  altitudeM: number;
  pressureHpa: number;
  speedMps: number;
  fromDeg: number;
  temperatureC: number;
  relativeHumidityPct: number;
};

// Section 2: "Site heights are geometric; the ISA wants geopotential: convert."
function geopotentialM(geometricM: number): number {
  return (6356766 * geometricM) / (6356766 + geometricM);
}

// ISO 2533 troposphere, air-and-flight.md a.
export function standardPressureHpa(geometricAltitudeM: number): number {
  return 1013.25 * ((288.15 - 0.0065 * geopotentialM(geometricAltitudeM)) / 288.15) ** 5.25588;
}

export function standardAltitudeM(pressureHpa: number): number {
  return (288.15 / 0.0065) * (1 - (pressureHpa / 1013.25) ** 0.190263);
}

// Bolton (1980) eq. 10, Pa.
function vapourPressurePa(dewPointC: number): number {
  return 611.2 * Math.exp((17.67 * dewPointC) / (dewPointC + 243.5));
}

// Bolton eq. 10 solved for the temperature. No dew point exists at 0 % (ln 0): unknown.
function dewPointFromHumidityC(temperatureC: number, relativeHumidityPct: number): number {
  const logarithm = Math.log(((relativeHumidityPct / 100) * vapourPressurePa(temperatureC)) / 611.2);
  if (!known(logarithm)) return UNKNOWN;
  return (243.5 * logarithm) / (17.67 - logarithm);
}

// rho = (p - e)/(Rd T) + e/(Rv T)
function moistDensity(pressurePa: number, temperatureC: number, dewPointC: number): number {
  const e = vapourPressurePa(dewPointC);
  const T = temperatureC + 273.15;
  return (pressurePa - e) / (Rd * T) + e / (Rv * T);
}

// data-shapes.md: "level altitude rising as pressure falls and within 900 m of the standard atmosphere for its pressure".
export function readLevels(hour: Conditions): Level[] {
  const rows = (hour.levels ?? []).map((row) => ({
    altitudeM: read.anyFinite(row.altitudeM),
    pressureHpa: read.pressureHpa(row.pressureHpa),
    speedMps: read.windMps(row.speedMps),
    fromDeg: read.directionDeg(row.fromDeg),
    temperatureC: read.temperatureC(row.temperatureC),
    relativeHumidityPct: read.percent(row.relativeHumidityPct),
  }));
  for (const row of rows) {
    if (Math.abs(row.altitudeM - standardAltitudeM(row.pressureHpa)) > 900) row.altitudeM = UNKNOWN;
  }
  const outOfOrder = new Set<Level>();
  for (const one of rows) {
    for (const other of rows) {
      if (one === other) continue;
      // Known on both sides and not rising while the pressure falls: nobody can say which of the two is wrong.
      if ((one.pressureHpa - other.pressureHpa) * (one.altitudeM - other.altitudeM) >= 0) outOfOrder.add(one);
    }
  }
  for (const row of outOfOrder) row.altitudeM = UNKNOWN;

  const placed: Level[] = [];
  for (const row of rows) {
    if (known(row.altitudeM) && known(row.pressureHpa)) placed.push(row);
  }
  const good = [...placed];
  for (const row of rows) {
    if (good.includes(row)) continue;
    const hole = { ...row, speedMps: UNKNOWN, fromDeg: UNKNOWN, temperatureC: UNKNOWN, relativeHumidityPct: UNKNOWN };
    if (known(row.altitudeM)) {
      placed.push({ ...hole, pressureHpa: UNKNOWN });
    } else if (known(row.pressureHpa)) {
      // Somewhere below the next good level above it: directly under that one, so that the whole gap is unknown.
      let above = 100_000;
      for (const other of good) {
        if (other.pressureHpa <= row.pressureHpa && other.altitudeM < above) above = other.altitudeM;
      }
      placed.push({ ...hole, altitudeM: above - 0.001, pressureHpa: UNKNOWN });
    } else {
      // It could be anywhere: no level of this hour can be trusted to have no neighbour.
      return [{ ...hole, altitudeM: 100_000, pressureHpa: UNKNOWN }];
    }
  }
  placed.sort((one, other) => one.altitudeM - other.altitudeM);
  return placed;
}

export type Column = {
  groundM: number;
  temperatureC: (altitudeM: number) => number;
  dewPointC: (altitudeM: number) => number;
  pressurePa: (altitudeM: number) => number;
  density: (altitudeM: number) => number;
  keptLevels: Level[];
  levelsMissing: boolean;
};

// Linear between neighbouring nodes, unknown above the last one.
function between(nodes: { altitudeM: number; value: number }[], altitudeM: number): number {
  for (const node of nodes) {
    if (node.altitudeM === altitudeM) return node.value;
  }
  for (let i = 0; i + 1 < nodes.length; i++) {
    const below = nodes[i];
    const above = nodes[i + 1];
    if (below === undefined || above === undefined) continue;
    if (below.altitudeM < altitudeM && altitudeM < above.altitudeM) {
      const part = (altitudeM - below.altitudeM) / (above.altitudeM - below.altitudeM);
      return below.value + part * (above.value - below.value);
    }
  }
  return UNKNOWN;
}

export function airColumn(hour: Conditions, declared: Set<string>): Column {
  const groundM = hour.gridElevationM;
  const groundTemperatureC = read.temperatureC(hour.temperature2mC);
  // data-shapes.md: "dew point not above temperature by more than 0.5 °C".
  let groundDewPointC = read.temperatureC(hour.dewPoint2mC);
  if (groundDewPointC > groundTemperatureC + 0.5) groundDewPointC = UNKNOWN;
  // "surfacePressureHpa more than 60 hPa from the ISA at gridElevationM is refused (unknown)."
  let groundPressurePa = read.pressureHpa(hour.surfacePressureHpa) * 100;
  if (Math.abs(groundPressurePa / 100 - standardPressureHpa(groundM)) > 60) groundPressurePa = UNKNOWN;

  // "the pressure levels more than 10 m above it (levels at or below the model's ground are dropped)"
  const keptLevels = readLevels(hour).filter((level) => level.altitudeM > groundM + 10);
  const levelsMissing = declared.has('levels') && (hour.levels ?? []).length === 0;

  const temperatures = [{ altitudeM: groundM, value: groundTemperatureC }];
  const dewPoints = [{ altitudeM: groundM, value: groundDewPointC }];
  const logPressures = [{ altitudeM: groundM, value: Math.log(groundPressurePa) }];
  for (const level of keptLevels) {
    temperatures.push({ altitudeM: level.altitudeM, value: level.temperatureC });
    dewPoints.push({
      altitudeM: level.altitudeM,
      value: dewPointFromHumidityC(level.temperatureC, level.relativeHumidityPct),
    });
    logPressures.push({ altitudeM: level.altitudeM, value: Math.log(level.pressureHpa * 100) });
  }

  // "Without levels the column reaches 150 m above the ground"; a declared level row that is missing is no "without".
  const withoutLevels = keptLevels.length === 0 && !levelsMissing;
  const reachedWithoutLevels = (altitudeM: number) => withoutLevels && altitudeM <= groundM + 150;

  function temperatureC(altitudeM: number): number {
    if (altitudeM <= groundM) return groundTemperatureC + 0.0065 * (groundM - altitudeM); // "+6.5 K/km"
    if (reachedWithoutLevels(altitudeM)) return groundTemperatureC - 0.0065 * (altitudeM - groundM);
    return between(temperatures, altitudeM);
  }
  function dewPointC(altitudeM: number): number {
    if (altitudeM <= groundM) return groundDewPointC; // "dew point unchanged"
    if (reachedWithoutLevels(altitudeM)) return groundDewPointC - 0.0018 * (altitudeM - groundM); // "-1.8 K/km"
    return between(dewPoints, altitudeM);
  }
  // "pressure hydrostatic": dp = -rho g dz with the moist density of this page, in steps of a metre or less, midpoint rule.
  function hydrostaticPa(altitudeM: number): number {
    const steps = Math.max(1, Math.ceil(Math.abs(altitudeM - groundM)));
    const dz = (altitudeM - groundM) / steps;
    let p = groundPressurePa;
    for (let i = 0; i < steps; i++) {
      const z = groundM + i * dz;
      const half = p - (moistDensity(p, temperatureC(z), dewPointC(z)) * g * dz) / 2;
      p -= moistDensity(half, temperatureC(z + dz / 2), dewPointC(z + dz / 2)) * g * dz;
    }
    return p;
  }
  function pressurePa(altitudeM: number): number {
    if (altitudeM === groundM) return groundPressurePa;
    if (altitudeM < groundM) return hydrostaticPa(altitudeM);
    if (reachedWithoutLevels(altitudeM)) return hydrostaticPa(altitudeM);
    return Math.exp(between(logPressures, altitudeM)); // "pressure log-linear"
  }
  const densities = new Map<number, number>();
  function density(altitudeM: number): number {
    let value = densities.get(altitudeM);
    if (value === undefined) {
      value = moistDensity(pressurePa(altitudeM), temperatureC(altitudeM), dewPointC(altitudeM));
      densities.set(altitudeM, value);
    }
    return value;
  }
  return { groundM, temperatureC, dewPointC, pressurePa, density, keptLevels, levelsMissing };
}

// Section 2, "Cloud base above the launch". `landingM` is the lower end of what must be free of cloud (for a strip the strip itself).
export function cloudBaseAboveM(column: Column, launchM: number, landingM: number): number {
  // "Such a level between landing and launch ... makes it 0 (in cloud)"
  for (const level of column.keptLevels) {
    if (level.altitudeM >= landingM && level.altitudeM <= launchM && level.relativeHumidityPct >= 95) return 0;
  }
  const T = column.temperatureC(launchM) + 273.15;
  const Td = column.dewPointC(launchM) + 273.15;
  if (!known(T) || !known(Td)) return UNKNOWN;
  // "saturated air at launch, makes it 0"
  if (Td >= T) return 0;
  const lclK = 1 / (1 / (Td - 56) + Math.log(T / Td) / 800) + 56; // Bolton (1980) eq. 15
  let baseM = (T - lclK) / (g / cp);
  // "the lowest of this and the first level above launch with humidity >= 95 %"
  for (const level of column.keptLevels) {
    if (level.altitudeM > launchM && level.relativeHumidityPct >= 95) baseM = Math.min(baseM, level.altitudeM - launchM);
  }
  // A level whose humidity should be there and is not could hide cloud anywhere from the landing to the base found so far.
  if (column.levelsMissing) return UNKNOWN;
  let belowM = column.groundM;
  for (const level of column.keptLevels) {
    // A hole without a height of its own may lie anywhere above the level before it.
    const fromM = known(level.pressureHpa) ? level.altitudeM : belowM;
    belowM = level.altitudeM;
    if (known(level.relativeHumidityPct)) continue;
    if (level.altitudeM >= landingM && fromM < launchM + baseM) return UNKNOWN;
  }
  return baseM;
}
