// Seeded random sites, wings, sheets and hours for holding two implementations of flight-model.md against each other. Everything here is
// valid JSON of data-shapes.md; the values are ordinary in most cases and awkward in the rest. The same seed gives the same case.
import { standardAltitudeM, standardPressureHpa } from './air.ts';
import { degToRad } from './numbers.ts';
import { sheets } from './tables.ts';
import type { Conditions, Hill, LaunchSite, LevelRow, Limits, NearGround, Sheet, Site, StripSite, Wing, WingClass } from './types.ts';

export type Case = {
  seed: number;
  site: Site;
  wing: Wing;
  sheet: Sheet;
  hours: Conditions[];
  declares?: string[];
  tags: string[]; // what is awkward about it, in words, for the failure message
};

export type Dice = {
  unit: () => number;
  within: (low: number, high: number) => number;
  whole: (low: number, high: number) => number;
  chance: (probability: number) => boolean;
  pick: <T>(from: readonly T[]) => T;
};

// A 32-bit counter through a multiply-and-shift mixer.
export function dice(seed: number): Dice {
  let state = (Math.imul(seed, 0x9e3779b1) + 0x7f4a7c15) >>> 0;
  function unit(): number {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = state;
    mixed = Math.imul(mixed ^ (mixed >>> 15), mixed | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
  }
  const within = (low: number, high: number) => low + (high - low) * unit();
  const whole = (low: number, high: number) => Math.floor(within(low, high + 1));
  return {
    unit,
    within,
    whole,
    chance: (probability) => unit() < probability,
    pick: (from) => from[whole(0, from.length - 1)] as (typeof from)[number],
  };
}

function rounded(value: number, decimals: number): number {
  const factor = 10 ** decimals;
  return Math.round(value * factor) / factor;
}

const places = [
  { timeZone: 'Europe/Vienna', lonDeg: 11.4, latDeg: 47.2 },
  { timeZone: 'America/Denver', lonDeg: -105.3, latDeg: 39.9 },
  { timeZone: 'America/Argentina/Mendoza', lonDeg: -68.9, latDeg: -32.8 },
  { timeZone: 'Pacific/Auckland', lonDeg: 172.6, latDeg: -43.5 },
  { timeZone: 'Asia/Kathmandu', lonDeg: 83.9, latDeg: 28.2 },
  { timeZone: 'Asia/Tokyo', lonDeg: 138.5, latDeg: 35.4 },
  { timeZone: 'Pacific/Honolulu', lonDeg: -157.7, latDeg: 21.3 },
  { timeZone: 'Africa/Nairobi', lonDeg: 35.5, latDeg: 0.6 },
  { timeZone: 'Europe/Oslo', lonDeg: 18.9, latDeg: 69.6 },
  { timeZone: 'Europe/Helsinki', lonDeg: 24.8, latDeg: 64.5 },
  { timeZone: 'Europe/London', lonDeg: -3.4, latDeg: 51.9 },
] as const;

// A gentle world is one in which most hours come out within or close: without it hardly a window would ever be compared.
type World = { random: Dice; gridElevationM: number; place: (typeof places)[number]; gentle: boolean; tags: string[] };

function randomSectors({ random }: World) {
  const count = random.whole(1, 3);
  const sectors = [];
  for (let i = 0; i < count; i++) {
    const fromDeg = random.whole(0, 359);
    sectors.push({ fromDeg, toDeg: (fromDeg + random.whole(10, 120)) % 360, maxMps: random.whole(0, 6), why: 'trees' });
  }
  return sectors;
}

function common(world: World, kind: string) {
  const { random, place, gentle } = world;
  return {
    name: `Invented ${kind}`,
    timeZone: place.timeZone,
    headingReference: 'true' as const,
    daylight: {
      rule: random.pick(['sunrise-sunset', 'sunrise-sunset', 'civil-twilight'] as const),
      beforeMin: random.pick([0, 0, 30]),
      afterMin: random.pick([0, 0, 30]),
    },
    ...(random.chance(gentle ? 0.1 : 0.3) ? { sectors: randomSectors(world) } : {}),
    ...(random.chance(0.3)
      ? {
          pressureStep: {
            a: { name: 'South', coordinates: [place.lonDeg, place.latDeg - 0.8] },
            b: { name: 'North', coordinates: [place.lonDeg, place.latDeg + 0.8] },
          },
        }
      : {}),
  };
}

function randomHill({ random }: World): Hill {
  const form = random.pick(['ridge', 'escarpment', 'cone', 'flat'] as const);
  if (form === 'flat') return { form, heightM: random.pick([0, 0, 20]), halfLengthM: 1000 };
  return { form, heightM: random.pick([0, 40, 120, 180, 300, 420, 900]), halfLengthM: random.pick([10, 60, 200, 320, 700, 2500]) };
}

function randomLaunch(world: World): LaunchSite {
  const { random, gridElevationM, place, gentle, tags } = world;
  const where = gentle
    ? random.pick(['near', 'high'] as const)
    : random.pick(['near', 'near', 'near', 'at', 'high', 'high', 'farHigh', 'below'] as const);
  const above = {
    near: random.whole(1, 149),
    at: random.pick([0, 10, 150, 400, -150]),
    high: random.whole(150, 900),
    farHigh: random.whole(900, 2600),
    below: -random.whole(1, 500),
  }[where];
  const launchM = Math.max(-400, Math.min(8500, gridElevationM + above));
  if (where !== 'near') tags.push(`launch ${above} m above the model's ground`);
  const dropM = random.pick(gentle ? [120, 300, 500, 800] : [0, 40, 120, 300, 500, 800, 1100]);
  let landingM = random.chance(gentle ? 0 : 0.4) ? Math.min(launchM, gridElevationM + random.whole(-149, 149)) : launchM - dropM;
  // Out of the last hundred and fifty metres below the model's ground nearly every gentle landing would be unknown.
  if (gentle && random.chance(0.8)) landingM = Math.max(gridElevationM - 149, landingM);
  landingM = Math.max(-480, Math.min(launchM, landingM));
  if (landingM < gridElevationM) tags.push(`landing ${gridElevationM - landingM} m below the model's ground`);
  const facingDeg = random.pick([0, 360, 90, 180, 270, random.whole(0, 359), rounded(random.within(0, 359), 1)]);
  const trackDeg = (facingDeg + random.whole(-30, 30) + 360) % 360;
  const distanceM = Math.max(150, Math.round((launchM - landingM) * random.within(1.5, gentle ? 4.5 : 8)));
  const lat = place.latDeg + (distanceM * Math.cos(degToRad(trackDeg))) / 111_200;
  const lon = place.lonDeg + (distanceM * Math.sin(degToRad(trackDeg))) / (111_200 * Math.cos(degToRad(place.latDeg)));
  const given = random.pick(['both', 'none', 'none', 'track', 'distance'] as const);
  return {
    type: 'Feature',
    id: 'invented-launch',
    geometry: { type: 'Point', coordinates: [place.lonDeg, place.latDeg, launchM] },
    properties: {
      kind: 'launch',
      ...common(world, 'launch'),
      facingDeg,
      slopeDeg: random.pick(gentle ? [18, 24, 30] : [0, 12, 18, 24, 30, 40]),
      hill: randomHill(world),
      ...(random.chance(0.4) ? { summitElevationM: Math.min(8800, launchM + random.pick([0, 80, 400, 1300])) } : {}),
      landing: { coordinates: [rounded(lon, 5), rounded(lat, 5), landingM], roughnessM: random.pick([0.0002, 0.01, 0.03, 0.1, 0.5, 2]) },
      ...(given === 'both' || given === 'track' ? { trackDeg } : {}),
      ...(given === 'both' || given === 'distance' ? { distanceM } : {}),
    },
  };
}

function randomStrip(world: World): StripSite {
  const { random, gridElevationM, place, tags } = world;
  const above = random.pick(world.gentle ? [0, 20, -60] : [0, 0, 20, -60, 150, -150, 151, 300, -250]);
  if (Math.abs(above) > 150) tags.push(`strip ${above} m above the model's ground`);
  const stripM = Math.max(-400, gridElevationM + above);
  return {
    type: 'Feature',
    id: 'invented-strip',
    geometry: { type: 'Point', coordinates: [place.lonDeg, place.latDeg, stripM] },
    properties: {
      kind: 'strip',
      ...common(world, 'strip'),
      headingDeg: random.pick([0, 45, 90, 180, 275, random.whole(0, 359)]),
      usableBothWays: random.chance(0.7),
      lineLengthM: random.pick(world.gentle ? [800, 1000, 1500] : [100, 400, 800, 1000, 1500]),
      roughnessM: random.pick([0.0002, 0.01, 0.03, 0.1, 0.5]),
      ...(random.chance(0.6) ? { lineTensionRatio: random.pick([0.5, 0.7, 0.8, 0.9]) } : {}),
      ...(random.chance(0.6) ? { releaseAngleDeg: random.pick([55, 65, 70]) } : {}),
    },
  };
}

function randomWing({ random }: World): Wing {
  const kind = random.pick(['class', 'class', 'class', 'mass', 'own'] as const);
  const named = random.pick(['EN A', 'EN B', 'EN C', 'EN D', 'tandem'] as const satisfies readonly WingClass[]);
  if (kind === 'class') return { class: named };
  if (kind === 'mass') return { class: named, referenceMassKg: 90, allUpMassKg: random.whole(75, 105) };
  // Own figures with the minimum-sink speed between stall and trim: minSink from the wanted Vms.
  const trimMps = rounded(random.within(9, 12), 2);
  const glideAtTrim = rounded(random.within(7, 11), 1);
  const vms = trimMps * random.within(0.75, 0.93);
  return {
    trimMps,
    glideAtTrim,
    minSinkMps: rounded((trimMps + vms) / (2 * glideAtTrim), 3),
    ...(random.chance(0.5) ? { stallMps: rounded(0.6 * trimMps, 2) } : {}),
    ...(random.chance(0.5) ? { topMps: rounded(1.4 * trimMps, 2) } : {}),
  };
}

function randomSheet({ random, tags }: World, kind: 'launch' | 'strip'): Sheet {
  const shipped = random.pick(sheets.filter((sheet) => sheet.kind === kind));
  if (random.chance(0.7)) return shipped;
  tags.push('a sheet of its own');
  const limits: Limits = {};
  for (const [name, value] of Object.entries(shipped.limits)) {
    if (random.chance(0.7)) limits[name] = rounded(value * random.pick([0.5, 0.8, 1, 1, 1.3, 2]), 2);
  }
  if (limits.minAgreement !== undefined) limits.minAgreement = Math.min(1, limits.minAgreement);
  if (limits.maxRainChancePct !== undefined) limits.maxRainChancePct = Math.min(100, limits.maxRainChancePct);
  if (limits.maxMeanMps !== undefined && limits.maxGustMps !== undefined) {
    limits.maxGustMps = Math.max(limits.maxGustMps, limits.maxMeanMps);
  }
  if (kind === 'launch' && random.chance(0.4)) limits.minLiftMps = random.pick([-0.5, 0, 0.3]);
  if (random.chance(0.2)) limits.lightWindMps = 0;
  if (Object.keys(limits).length === 0) limits.maxMeanMps = 6;
  return {
    id: 'own-sheet',
    kind,
    limits,
    ...(random.chance(0.3) ? { closeBands: { meanWind: 1, arrival: 20, stripWind: 1, daylight: 40, cloudBase: 300 } } : {}),
  };
}

const pressures = [1000, 975, 950, 925, 900, 850, 800, 750, 700, 650, 600, 550, 500];

type Weather = {
  windMps: number;
  windFromDeg: number;
  upperMps: number;
  upperFromDeg: number;
  temperatureC: number;
  spreadK: number;
  lapseKPerKm: number;
  pressureOffsetHpa: number;
  gustFactor: number;
  withLevels: boolean;
  withNearGround: boolean;
  withHeatFlux: boolean;
  withMixedLayer: boolean;
};

function randomWeather({ random, gridElevationM, gentle }: World, axisDeg: number): Weather {
  const mild = random.chance(gentle ? 1 : 0.5);
  return {
    windMps: gentle ? random.within(0.5, 3.5) : mild ? random.within(0, 4) : random.pick([0, 1, 3, 5, 8, 12, 20, 35]) * random.within(0.8, 1.2),
    windFromDeg: (axisDeg + (random.chance(gentle ? 1 : 0.6) ? random.within(-20, 20) : random.within(-180, 180)) + 720) % 360,
    upperMps: mild ? random.within(0, 7) : random.within(0, 35),
    upperFromDeg: (axisDeg + (mild ? random.within(-40, 40) : random.within(-180, 180)) + 720) % 360,
    temperatureC: Math.max(-40, Math.min(38, 15 - 0.0065 * gridElevationM + random.within(-12, 15))),
    spreadK: gentle ? random.within(6, 14) : random.pick([0, 0.5, 2, 6, 8, 12, 20]) * random.within(0.8, 1.2),
    lapseKPerKm: random.within(3, 9.5),
    pressureOffsetHpa: random.within(-20, 20),
    gustFactor: random.within(1.05, gentle ? 1.4 : 1.9),
    withLevels: random.chance(0.85),
    withNearGround: random.chance(0.7),
    withHeatFlux: random.chance(0.3),
    withMixedLayer: random.chance(0.8),
  };
}

function ordinaryHour(world: World, weather: Weather, validAtMs: number): Conditions {
  const { random, gridElevationM } = world;
  const speedMps = rounded(weather.windMps * random.within(0.8, 1.2), 1);
  const fromDeg = Math.round(weather.windFromDeg + random.within(-15, 15) + 720) % 360;
  const temperature2mC = rounded(weather.temperatureC + random.within(-2, 2), 1);
  const { gentle } = world;
  const hour: Conditions = {
    validAt: `${new Date(validAtMs).toISOString().slice(0, 19)}Z`,
    gridElevationM,
    wind10m: { speedMps, fromDeg },
    gustMps: rounded(speedMps * weather.gustFactor + random.within(0, 1), 1),
    temperature2mC,
    dewPoint2mC: rounded(Math.max(-58, temperature2mC - weather.spreadK), 1),
    surfacePressureHpa: rounded(standardPressureHpa(gridElevationM) + weather.pressureOffsetHpa, 1),
    seaLevelPressureHpa: rounded(1013.25 + weather.pressureOffsetHpa, 1),
    referencePressureHpa: { a: rounded(1013 + random.within(-3, 3), 1), b: rounded(1013 + random.within(-3, 3), 1) },
    shortwaveWm2: rounded(random.pick(gentle ? [0, 40, 120] : [0, -2, 40, 200, 450, 800]) * random.within(0.8, 1.1), 0),
    capeJkg: rounded(random.pick(gentle ? [0, 0, 20, 300] : [0, 0, 20, 300, 480, 900]) * random.within(0.9, 1.1), 0),
    precipitationMm: random.pick(gentle ? [0, 0, 0, 0.1] : [0, 0, 0, 0, 0.1, 0.2, 1.5]),
    precipitationProbabilityPct: random.pick(gentle ? [0, 5, 15, 22] : [0, 0, 5, 15, 22, 30, 60]),
    weatherCode: random.pick([0, 0, 1, 2, 3, 45, 61, 80]),
    visibilityM: random.pick(gentle ? [30_000, 24_000, 5200] : [30_000, 24_000, 20_000, 5200, 5000, 2500]),
    lowCloudPct: random.whole(0, 100),
  };
  if (weather.withMixedLayer) hour.mixedLayerM = rounded(random.pick(gentle ? [0, 60, 400] : [0, 60, 400, 1200, 2200]) * random.within(0.9, 1.1), 0);
  if (weather.withHeatFlux) hour.sensibleHeatWm2 = rounded(random.pick(gentle ? [-30, 0, 10, 60] : [-30, 0, 10, 60, 150, 300]) * random.within(0.9, 1.1), 0);
  if (weather.withNearGround) {
    hour.nearGround = [80, 120, 180].map(
      (heightAglM): NearGround => ({
        heightAglM,
        speedMps: rounded(speedMps * (1 + heightAglM / 400) + random.within(0, 0.5), 1),
        fromDeg: (fromDeg + Math.round(heightAglM / 20)) % 360,
      }),
    );
  }
  if (weather.withLevels) {
    const shiftM = weather.pressureOffsetHpa * 8;
    hour.levels = pressures.map((pressureHpa): LevelRow => {
      const altitudeM = rounded(standardAltitudeM(pressureHpa) + shiftM, 0);
      const part = Math.max(0, Math.min(1, (altitudeM - gridElevationM) / 3000));
      const turn = ((weather.upperFromDeg - weather.windFromDeg + 540) % 360) - 180;
      const temperatureC = temperature2mC - (weather.lapseKPerKm * (altitudeM - gridElevationM)) / 1000;
      return {
        pressureHpa,
        altitudeM,
        speedMps: rounded(Math.max(0, speedMps + part * (weather.upperMps - speedMps) + random.within(-0.5, 1)), 1),
        fromDeg: Math.round(weather.windFromDeg + part * turn + 720) % 360,
        temperatureC: rounded(Math.max(-59, Math.min(54, temperatureC)), 1),
        relativeHumidityPct: random.chance(gentle ? 0.01 : 0.08) ? random.whole(94, 100) : random.whole(10, 93),
      };
    });
  }
  return hour;
}

type Trick = { name: string; play: (hour: Conditions, random: Dice, limits: Limits) => void };

function anyOf<T>(rows: T[] | null | undefined, random: Dice, change: (row: T) => void): void {
  if (rows === null || rows === undefined || rows.length === 0) return;
  change(random.pick(rows));
}

const optionalFields = [
  'wind10m', 'gustMps', 'nearGround', 'levels', 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa', 'referencePressureHpa',
  'mixedLayerM', 'shortwaveWm2', 'sensibleHeatWm2', 'capeJkg', 'precipitationMm', 'precipitationProbabilityPct', 'weatherCode',
  'visibilityM',
] as const;

// One awkward thing each. Exported so that a test can play a single one.
export const tricks: Trick[] = [
  { name: 'a field is null', play: (hour, random) => { hour[random.pick(optionalFields)] = null; } },
  { name: 'a field is absent', play: (hour, random) => { delete hour[random.pick(optionalFields)]; } },
  { name: 'calm, no direction', play: (hour) => { hour.wind10m = { speedMps: 0, fromDeg: null }; } },
  { name: 'just calm', play: (hour, random) => { hour.wind10m = { speedMps: 0.29, fromDeg: random.whole(0, 360) }; } },
  { name: 'just not calm', play: (hour, random) => { hour.wind10m = { speedMps: 0.3, fromDeg: random.whole(0, 360) }; } },
  { name: 'calm with a gust', play: (hour, random) => {
    hour.wind10m = { speedMps: random.pick([0, 0.2]), fromDeg: null };
    hour.gustMps = rounded(random.within(0, 9), 1);
  } },
  { name: 'wind without direction', play: (hour) => { if (hour.wind10m) hour.wind10m.fromDeg = null; } },
  { name: 'direction 0', play: (hour) => { if (hour.wind10m) hour.wind10m.fromDeg = 0; } },
  { name: 'direction 360', play: (hour) => { if (hour.wind10m) hour.wind10m.fromDeg = 360; } },
  { name: 'direction 361', play: (hour) => { if (hour.wind10m) hour.wind10m.fromDeg = 361; } },
  { name: 'gust a little below the mean', play: (hour, random) => { hour.gustMps = Math.max(0, rounded((hour.wind10m?.speedMps ?? 3) - random.within(0, 0.95), 2)); } },
  { name: 'gust far below the mean', play: (hour, random) => {
    hour.wind10m = { speedMps: rounded(random.within(3, 9), 1), fromDeg: random.whole(0, 359) };
    hour.gustMps = rounded(random.within(0, 1.5), 1);
  } },
  { name: 'gust equal to the mean', play: (hour) => { hour.gustMps = hour.wind10m?.speedMps ?? 0; } },
  { name: 'wind out of range', play: (hour, random) => { hour.wind10m = { speedMps: random.pick([-3, 76, 400]), fromDeg: 200 }; } },
  { name: 'gust out of range', play: (hour, random) => { hour.gustMps = random.pick([-1, 101, 9999]); } },
  { name: 'temperature out of range', play: (hour, random) => { hour.temperature2mC = random.pick([250, -999]); } },
  { name: 'dew point a little above temperature', play: (hour, random) => { hour.dewPoint2mC = rounded((hour.temperature2mC ?? 0) + random.within(0.1, 0.5), 2); } },
  { name: 'dew point far above temperature', play: (hour) => { hour.dewPoint2mC = rounded((hour.temperature2mC ?? 0) + 2, 1); } },
  { name: 'saturated', play: (hour) => { hour.dewPoint2mC = hour.temperature2mC ?? null; } },
  { name: 'surface pressure refused', play: (hour, random) => { hour.surfacePressureHpa = (hour.surfacePressureHpa ?? 900) + random.pick([-95, 95]); } },
  { name: 'surface pressure is sea-level pressure', play: (hour) => { hour.surfacePressureHpa = 1018; } },
  { name: 'no levels in one hour', play: (hour) => { hour.levels = []; } },
  { name: 'only levels below the ground', play: (hour) => { if (hour.levels) hour.levels = hour.levels.filter((row) => (row.altitudeM ?? 0) <= hour.gridElevationM); } },
  { name: 'few levels', play: (hour, random) => { if (hour.levels) hour.levels = hour.levels.filter(() => random.chance(0.4)); } },
  { name: 'level without speed', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.speedMps = null; }) },
  { name: 'level without direction', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.fromDeg = null; }) },
  { name: 'level without temperature', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.temperatureC = null; }) },
  { name: 'level without humidity', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.relativeHumidityPct = null; }) },
  { name: 'level without altitude', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.altitudeM = null; }) },
  { name: 'level at a wrong altitude', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.altitudeM = (row.altitudeM ?? 0) + random.pick([-1500, 1500]); }) },
  { name: 'level out of order', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.altitudeM = (row.altitudeM ?? 0) + random.pick([-700, 700]); }) },
  { name: 'level humidity 0 or 130', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.relativeHumidityPct = random.pick([0, 130]); }) },
  { name: 'levels in another order', play: (hour) => { hour.levels?.reverse(); } },
  { name: 'level in cloud', play: (hour, random) => anyOf(hour.levels, random, (row) => { row.relativeHumidityPct = 95; }) },
  { name: 'near-ground wind without speed', play: (hour, random) => anyOf(hour.nearGround, random, (row) => { row.speedMps = null; }) },
  { name: 'near-ground rows missing', play: (hour) => { hour.nearGround = []; } },
  { name: 'strong wind aloft', play: (hour) => { for (const row of hour.levels ?? []) row.speedMps = Math.min(75, (row.speedMps ?? 0) + 12); } },
  { name: 'rain chance out of range', play: (hour) => { hour.precipitationProbabilityPct = 101; } },
  { name: 'CAPE 0', play: (hour) => { hour.capeJkg = 0; } },
  { name: 'CAPE far out of range', play: (hour) => { hour.capeJkg = 32767; } },
  { name: 'thunderstorm code', play: (hour, random) => { hour.weatherCode = random.pick([95, 96, 99]); } },
  { name: 'heat flux negative', play: (hour) => { hour.sensibleHeatWm2 = -25; } },
  { name: 'heat flux out of range', play: (hour) => { hour.sensibleHeatWm2 = 900; } },
  { name: 'no heat, no sun', play: (hour) => { hour.sensibleHeatWm2 = null; hour.shortwaveWm2 = null; } },
  { name: 'mixed layer 0', play: (hour) => { hour.mixedLayerM = 0; } },
  { name: 'mixed layer out of range', play: (hour) => { hour.mixedLayerM = 6500; } },
  { name: 'values exactly on the limits', play: (hour, _random, limits) => {
    if (limits.maxRainMm !== undefined) hour.precipitationMm = limits.maxRainMm;
    if (limits.maxCapeJkg !== undefined) hour.capeJkg = limits.maxCapeJkg;
    if (limits.minVisibilityM !== undefined) hour.visibilityM = limits.minVisibilityM;
    if (limits.maxRainChancePct !== undefined) hour.precipitationProbabilityPct = limits.maxRainChancePct;
  } },
];

export function randomCase(seed: number): Case {
  const random = dice(seed);
  const tags: string[] = [];
  const gentle = random.chance(0.4);
  const gridElevationM = random.pick([0, random.whole(0, 300), random.whole(300, 1200), random.whole(1200, 2300)]);
  const world: World = { random, gridElevationM, place: random.pick(places), gentle, tags };
  const site: Site = random.chance(0.7) ? randomLaunch(world) : randomStrip(world);
  const axisDeg = site.properties.kind === 'launch' ? site.properties.facingDeg : site.properties.headingDeg;
  const wing = randomWing(world);
  const sheet = randomSheet(world, site.properties.kind);
  const weather = randomWeather(world, axisDeg);

  // Mostly daytime where the site is, any day of two years.
  const startDay = Date.UTC(2027, 0, 1) + random.whole(0, 729) * 86_400_000;
  const localHour = random.chance(0.8) ? random.whole(7, 13) : random.whole(0, 23);
  const startMs = startDay + ((localHour - Math.round(world.place.lonDeg / 15) + 48) % 24) * 3_600_000;
  const count = random.pick(gentle ? [4, 6, 9, 14] : [1, 3, 4, 6, 9, 14]);
  let hours: Conditions[] = [];
  for (let i = 0; i < count; i++) hours.push(ordinaryHour(world, weather, startMs + i * 3_600_000));
  if (count > 4 && random.chance(0.1)) {
    tags.push('an hour is not there');
    hours = hours.filter((_, index) => index !== 2);
  }
  if (random.chance(gentle ? 0.4 : 0.65)) {
    for (const hour of hours) {
      if (!random.chance(gentle ? 0.2 : 0.4)) continue;
      const plays = random.pick([1, 1, 1, 2, 3]);
      for (let i = 0; i < plays; i++) {
        const trick = random.pick(tricks);
        trick.play(hour, random, sheet.limits);
        tags.push(`${hour.validAt}: ${trick.name}`);
      }
    }
  }
  const result: Case = { seed, site, wing, sheet, hours, tags };
  if (random.chance(0.1)) {
    // A source that declares more than these hours hold.
    result.declares = [...new Set([...hours.flatMap((hour) => Object.keys(hour)), random.pick(optionalFields)])];
    tags.push('declares given');
  }
  return result;
}
