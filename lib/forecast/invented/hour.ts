/** One hour of invented conditions, rounded as a service would round it. */
import { isoUtc } from '../../time.ts';
import type { ConditionField, Conditions } from '../conditions.ts';
import { altitudeOfM, dewPointC, pressureHpa, relativeHumidityPct, seaLevelPressureHpa, temperature2mC, temperatureC, type AirParts } from './air.ts';
import { dateShare } from './date-share.ts';
import type { InventedRegion, InventedSite, InventedSource } from './scenario.ts';
import { hourlyGustMps, speedAndDirection, windAt, type Heating, type Twist } from './weather.ts';

export interface HourParts {
  readonly region: InventedRegion;
  readonly site: InventedSite;
  readonly heat: Heating;
  readonly twist: Twist;
  readonly latDeg: number;
}

/** What an invented source gives: the coarse one has no vote on some margins, as coarse services have not. */
export function declaredBy(source: InventedSource): ConditionField[] {
  if (source.kind === 'ensemble') return ['wind10m', 'gustMps'];
  const everyone: ConditionField[] = [
    'wind10m', 'gustMps', 'levels', 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa', 'seaLevelPressureHpa',
    'referencePressureHpa', 'shortwaveWm2', 'capeJkg', 'precipitationMm', 'weatherCode',
  ];
  return source.grid === 'coarse' ? everyone : [...everyone, 'nearGround', 'mixedLayerM', 'precipitationProbabilityPct', 'visibilityM', 'lowCloudPct'];
}

/** To a multiple of the step, without the dust of binary fractions; never minus zero. */
function rounded(value: number, step: number): number {
  const digits = step < 1 ? Math.round(-Math.log10(step)) : 0;
  return Number((Math.round(value / step) * step).toFixed(digits)) + 0;
}

export function windOnlyHour(parts: HourParts, atMs: number): Conditions {
  return {
    validAt: isoUtc(atMs),
    gridElevationM: parts.twist.groundM,
    wind10m: speedAndDirection(windAt(parts, 10, atMs)),
    gustMps: rounded(hourlyGustMps(parts, atMs), 0.01),
  };
}

export function fullHour(parts: HourParts, source: InventedSource, atMs: number): Conditions {
  const { region, heat, twist, latDeg } = parts;
  const air: AirParts = { region, heat, latDeg, groundM: twist.groundM };
  const pressure = rounded(seaLevelPressureHpa(air, atMs), 0.1);
  const sky = skyAt(parts, air, atMs);
  const hour: Conditions = {
    ...windOnlyHour(parts, atMs),
    levels: source.levelsHpa.map((levelHpa) => levelAt(parts, air, levelHpa, atMs)),
    temperature2mC: rounded(temperature2mC(air, atMs), 0.1),
    dewPoint2mC: rounded(Math.min(temperature2mC(air, atMs), dewPointC(air, twist.groundM, atMs)), 0.1),
    surfacePressureHpa: rounded(pressureHpa(air, twist.groundM, atMs), 0.1),
    seaLevelPressureHpa: pressure,
    referencePressureHpa: { a: rounded(pressure + region.pressureStepHpa / 2, 0.1), b: rounded(pressure - region.pressureStepHpa / 2, 0.1) },
    shortwaveWm2: rounded(heat.shortwaveWm2(atMs), 1),
    capeJkg: sky.capeJkg,
    precipitationMm: rounded(heat.front.rainMm(atMs), 0.1),
    weatherCode: sky.weatherCode,
  };
  if (source.grid === 'coarse') return hour;
  return {
    ...hour,
    nearGround: source.nearGroundM.map((heightAglM) => ({ heightAglM, ...speedAndDirection(windAt(parts, heightAglM, atMs)) })),
    mixedLayerM: rounded(heat.mixedLayerM(atMs), 1),
    precipitationProbabilityPct: sky.rainChancePct,
    visibilityM: sky.visibilityM,
    lowCloudPct: rounded(100 * heat.cloudShare(atMs) * 0.6, 1),
  };
}

function levelAt(parts: HourParts, air: AirParts, levelHpa: number, atMs: number) {
  const altitudeM = altitudeOfM(air, levelHpa, atMs);
  const airC = temperatureC(air, altitudeM, atMs);
  return {
    pressureHpa: levelHpa,
    altitudeM: rounded(altitudeM, 1),
    ...speedAndDirection(windAt(parts, altitudeM - air.groundM, atMs)),
    temperatureC: rounded(airC, 0.1),
    relativeHumidityPct: rounded(relativeHumidityPct(airC, dewPointC(air, altitudeM, atMs)), 1),
  };
}

/** Code by WMO table 4677: clear to overcast, fog, rain by its strength, thunderstorm. */
function skyAt({ region, heat }: HourParts, air: AirParts, atMs: number) {
  const warmC = temperature2mC(air, atMs);
  const rainMm = heat.front.rainMm(atMs);
  const isThundery = region.front !== null && temperature2mC(air, (heat.day.riseMs + heat.day.setMs) / 2) >= region.front.thunderFromC;
  const cloud = heat.cloudShare(atMs);
  const isFoggy = atMs < heat.fogUntilMs;
  const fairCode = cloud < 0.2 ? 0 : cloud < 0.45 ? 1 : cloud < 0.8 ? 2 : 3;
  const wetCode = isThundery && rainMm >= 1 ? 95 : rainMm >= 2 ? 63 : 61;
  const stormy = isThundery ? 600 * heat.front.behind(atMs) : 0;
  return {
    weatherCode: isFoggy ? 45 : heat.front.isWet(atMs) ? wetCode : fairCode,
    capeJkg: rounded(Math.min(350, Math.max(0, 18 * (warmC - 8))) * (0.3 + 0.7 * Math.min(1, heat.breezeShare(atMs))) + stormy, 1),
    rainChancePct: rounded(heat.front.isWet(atMs) ? 80 : 4 + 12 * heat.front.ahead(atMs), 1),
    visibilityM: isFoggy ? rounded(250 + 150 * dateShare(heat.day.date, 'fog'), 10) : heat.front.isWet(atMs) ? 6000 : rounded(32_000 - 14_000 * cloud, 100),
  };
}
