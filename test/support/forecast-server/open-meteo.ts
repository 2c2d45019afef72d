// Open-Meteo as its own source describes it: /v1/forecast, /v1/ensemble and /data/<domain>/static/meta.json. Models and
// what they have are copied from the service's tables into this file by hand, on purpose not from config/.
import { airAt, altitudeOfM, weatherAt, type Spot, type Weather } from './weather.ts';

interface Model {
  readonly gridDeg: number;
  readonly levels: readonly number[];
  readonly heights: readonly number[];
  /** Variables without data: 200, nulls, unit "undefined". */
  readonly lacks: readonly string[];
  readonly box?: { readonly south: number; readonly north: number; readonly west: number; readonly east: number };
  /** Columns of an ensemble, member 0 included. */
  readonly members?: number;
}

const iconLevels = [1000, 950, 925, 900, 850, 800, 700, 600, 500];
const frenchLevels = [1000, 950, 925, 900, 850, 800, 750, 700, 650, 600, 550, 500];
const gfsLevels = Array.from({ length: 21 }, (_, i) => 1000 - 25 * i);
const iconHeights = [80, 120, 180];

const models: Readonly<Record<string, Model>> = {
  icon_d2: { gridDeg: 0.02, levels: [1000, 975, 950, 850, 700, 600, 500], heights: iconHeights, lacks: ['boundary_layer_height'], box: { south: 43.2, north: 58, west: -3.9, east: 20.3 } },
  icon_eu: { gridDeg: 0.0625, levels: iconLevels, heights: iconHeights, lacks: ['boundary_layer_height'], box: { south: 29.5, north: 70.5, west: -23.5, east: 62.5 } },
  icon_global: { gridDeg: 0.125, levels: iconLevels, heights: iconHeights, lacks: ['boundary_layer_height', 'visibility'] },
  ecmwf_ifs: { gridDeg: 0.08, levels: [], heights: iconHeights, lacks: [] },
  ecmwf_ifs025: { gridDeg: 0.25, levels: [1000, 925, 850, 700, 600, 500], heights: [], lacks: ['boundary_layer_height', 'visibility'] },
  gfs_global: { gridDeg: 0.11, levels: gfsLevels, heights: [80, 120], lacks: [] },
  gfs_hrrr: { gridDeg: 0.03, levels: gfsLevels, heights: [80], lacks: [], box: { south: 21, north: 53, west: -134, east: -60 } },
  meteofrance_arome_france: { gridDeg: 0.025, levels: frenchLevels, heights: [20, 50, 100, 150, 200], lacks: ['boundary_layer_height'], box: { south: 37.5, north: 55.4, west: -12, east: 16 } },
  meteofrance_arpege_europe: { gridDeg: 0.1, levels: frenchLevels, heights: [20, 50, 100, 150, 200], lacks: ['boundary_layer_height'], box: { south: 20, north: 72, west: -32, east: 42 } },
  geosphere_arome_austria: { gridDeg: 0.022, levels: [], heights: [], lacks: ['boundary_layer_height'], box: { south: 42.98, north: 51.82, west: 5.5, east: 22.1 } },
  metno_nordic: { gridDeg: 0.01, levels: [], heights: [], lacks: ['boundary_layer_height', 'visibility', 'cape'], box: { south: 52, north: 73, west: -12, east: 42 } },
};

const ensembles: Readonly<Record<string, Model>> = {
  icon_d2_eps: { ...models['icon_d2']!, members: 20 },
  icon_eu_eps: { ...models['icon_eu']!, members: 40 },
  ncep_gefs025: { ...models['gfs_global']!, gridDeg: 0.25, members: 31 },
  ecmwf_ifs025_ensemble: { ...models['ecmwf_ifs025']!, members: 51 },
};

const short = 'm/s';
interface Variable {
  readonly unit: string;
  readonly decimals: number;
  readonly read: (weather: Weather) => number;
}

const surface: Readonly<Record<string, Variable>> = {
  wind_speed_10m: { unit: short, decimals: 2, read: (w) => w.windMps },
  wind_direction_10m: { unit: '°', decimals: 0, read: (w) => w.fromDeg },
  wind_gusts_10m: { unit: short, decimals: 2, read: (w) => w.gustMps },
  temperature_2m: { unit: '°C', decimals: 1, read: (w) => w.temperatureC },
  dew_point_2m: { unit: '°C', decimals: 1, read: (w) => w.dewPointC },
  relative_humidity_2m: { unit: '%', decimals: 0, read: (w) => w.humidityPct },
  surface_pressure: { unit: 'hPa', decimals: 1, read: (w) => w.surfacePressureHpa },
  pressure_msl: { unit: 'hPa', decimals: 1, read: (w) => w.seaLevelPressureHpa },
  cape: { unit: 'J/kg', decimals: 1, read: (w) => w.capeJkg },
  precipitation: { unit: 'mm', decimals: 2, read: (w) => w.precipitationMm },
  precipitation_probability: { unit: '%', decimals: 0, read: (w) => w.precipitationProbabilityPct },
  weather_code: { unit: 'wmo code', decimals: 0, read: (w) => w.weatherCode },
  visibility: { unit: 'm', decimals: 2, read: (w) => w.visibilityM },
  cloud_cover_low: { unit: '%', decimals: 0, read: (w) => w.lowCloudPct },
  shortwave_radiation: { unit: 'W/m²', decimals: 1, read: (w) => w.shortwaveWm2 },
  boundary_layer_height: { unit: 'm', decimals: 2, read: (w) => w.mixedLayerM },
};

const levelVariables: Readonly<Record<string, { unit: string; decimals: number }>> = {
  wind_speed: { unit: short, decimals: 2 }, wind_direction: { unit: '°', decimals: 0 }, geopotential_height: { unit: 'm', decimals: 2 },
  temperature: { unit: '°C', decimals: 1 }, relative_humidity: { unit: '%', decimals: 0 },
};

export interface Section {
  [name: string]: (number | string | null)[];
}

export interface Location {
  latitude: number;
  longitude: number;
  generationtime_ms: number;
  utc_offset_seconds: number;
  timezone: string;
  timezone_abbreviation: string;
  elevation?: number;
  location_id?: number;
  hourly_units: Record<string, string>;
  hourly: Section;
}

export type OpenMeteoReply = { readonly status: number; readonly body: Location | Location[] | { error: true; reason: string } };

function refuse(reason: string): OpenMeteoReply {
  return { status: 400, body: { error: true, reason } };
}

function numbers(text: string | null): number[] {
  return (text ?? '').split(',').map(Number);
}

/** YYYY-MM-DDThh:mm in GMT; no Z, no offset, no fractions. */
function hourMs(text: string | null): number {
  return text !== null && /^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}$/.test(text) ? Date.parse(`${text}Z`) : NaN;
}

export interface Terrain {
  readonly groundAtM: (latDeg: number, lonDeg: number) => number;
}

export function openMeteo(url: URL, terrain: Terrain): OpenMeteoReply {
  const table = url.pathname === '/v1/ensemble' ? ensembles : models;
  const query = url.searchParams;
  const name = query.get('models') ?? '';
  const model = table[name];
  if (model === undefined) return refuse(`Data corrupted at path ''. Cannot initialize MultiDomains from invalid String value ${name}.`);
  const [lats, lons, elevations] = [numbers(query.get('latitude')), numbers(query.get('longitude')), (query.get('elevation') ?? '').split(',')];
  if (lats.length !== lons.length || elevations.length !== lats.length) return refuse('Parameter "latitude", "longitude" and "elevation" must have the same number of elements');
  const [fromMs, toMs] = [hourMs(query.get('start_hour')), hourMs(query.get('end_hour'))];
  if (Number.isNaN(fromMs) || Number.isNaN(toMs)) return refuse('Invalid date format. Make sure to use YYYY-MM-DDThh:mm');
  if (query.get('timezone') !== 'GMT' || query.get('timeformat') !== 'unixtime') return refuse('this server speaks GMT and unixtime only');
  const wanted = (query.get('hourly') ?? '').split(',');
  const odd = wanted.find((variable) => surface[variable] === undefined && partsOf(variable) === null);
  if (odd !== undefined) return refuse(`Data corrupted at path ''. Cannot initialize VariableAndPreviousDay from invalid String value ${odd}.`);
  const places = lats.map((latDeg, i) => ({ latDeg, lonDeg: lons[i] ?? NaN }));
  if (places.some((place) => isOutside(place, model))) return refuse('No data is available for this location');
  const unit = query.get('wind_speed_unit') ?? 'kmh';
  const locations = places.map((place, i) => locationOf(place, i, { model, wanted, fromMs, toMs, unit, terrain }));
  return { status: 200, body: locations.length === 1 ? locations[0]! : locations };
}

function isOutside({ latDeg, lonDeg }: { latDeg: number; lonDeg: number }, { box }: Model): boolean {
  return box !== undefined && (latDeg < box.south || latDeg > box.north || lonDeg < box.west || lonDeg > box.east);
}

/** `wind_speed_850hPa` and `wind_speed_120m` taken apart; null for anything that is neither. */
function partsOf(variable: string): { kind: string; hpa: number } | { kind: string; heightM: number } | null {
  const level = /^(.+)_(\d+)hPa$/.exec(variable);
  if (level !== null && levelVariables[level[1]!] !== undefined) return { kind: level[1]!, hpa: Number(level[2]) };
  const height = /^(wind_speed|wind_direction)_(\d+)m$/.exec(variable);
  return height === null ? null : { kind: height[1]!, heightM: Number(height[2]) };
}

interface Ask {
  readonly model: Model;
  readonly wanted: readonly string[];
  readonly fromMs: number;
  readonly toMs: number;
  readonly unit: string;
  readonly terrain: Terrain;
}

function locationOf(place: { latDeg: number; lonDeg: number }, index: number, ask: Ask): Location {
  const snap = (deg: number) => Math.fround(Math.round(deg / ask.model.gridDeg) * ask.model.gridDeg);
  const [latitude, longitude] = [snap(place.latDeg), snap(place.lonDeg)];
  const spot = { latDeg: latitude, lonDeg: longitude, groundM: ask.terrain.groundAtM(latitude, longitude) };
  const stamps: number[] = [];
  for (let at = ask.fromMs; at <= ask.toMs; at += 3_600_000) stamps.push(at);
  const hourly: Section = { time: stamps.map((at) => at / 1000) };
  const units: Record<string, string> = { time: 'unixtime' };
  for (const variable of ask.wanted) {
    for (let member = 0; member < (ask.model.members ?? 1); member += 1) {
      const name = member === 0 ? variable : `${variable}_member${String(member).padStart(2, '0')}`;
      const column = columnOf(variable, member, spot, stamps, ask);
      units[name] = column?.unit ?? 'undefined';
      hourly[name] = column?.values ?? stamps.map(() => null);
    }
  }
  return {
    latitude, longitude, generationtime_ms: 0.42, utc_offset_seconds: 0, timezone: 'GMT', timezone_abbreviation: 'GMT',
    elevation: spot.groundM, ...(index > 0 ? { location_id: index } : {}), hourly_units: units, hourly,
  };
}

function columnOf(variable: string, member: number, spot: Spot, stamps: readonly number[], ask: Ask): { unit: string; values: number[] } | null {
  const known = surface[variable];
  const read = known === undefined ? upperAir(variable, spot, ask.model) : { ...known, at: (at: number) => known.read(weatherAt(spot, at)) };
  if (read === null || ask.model.lacks.includes(variable)) return null;
  const isSpeed = read.unit === short;
  const factor = isSpeed && ask.unit === 'kmh' ? 3.6 : 1;
  const spread = isSpeed ? 0.03 * (member % 7) : 0;
  const unit = isSpeed && ask.unit === 'kmh' ? 'km/h' : read.unit;
  return { unit, values: stamps.map((at) => Number(((read.at(at) + spread) * factor).toFixed(read.decimals))) };
}

function upperAir(variable: string, spot: Spot, model: Model): { unit: string; decimals: number; at: (at: number) => number } | null {
  const parts = partsOf(variable);
  if (parts === null) return null;
  const shape = levelVariables[parts.kind];
  const isThere = 'hpa' in parts ? model.levels.includes(parts.hpa) : model.heights.includes(parts.heightM);
  if (shape === undefined || !isThere) return null;
  const altitudeM = (at: number) => ('hpa' in parts ? altitudeOfM(parts.hpa, spot, at) : spot.groundM + parts.heightM);
  const value = (at: number): number => {
    const air = airAt(altitudeM(at), spot, at);
    switch (parts.kind) {
      case 'wind_speed': return air.windMps;
      case 'wind_direction': return air.fromDeg;
      case 'geopotential_height': return altitudeM(at);
      case 'temperature': return air.temperatureC;
      default: return air.humidityPct;
    }
  };
  return { ...shape, at: value };
}

const domains: ReadonlySet<string> = new Set([
  'dwd_icon_d2', 'dwd_icon_eu', 'dwd_icon', 'ecmwf_ifs', 'ecmwf_ifs025', 'ncep_gfs013', 'ncep_gfs025', 'ncep_hrrr_conus', 'meteofrance_arome_france0025',
  'meteofrance_arpege_europe', 'geosphere_arome_austria', 'metno_nordic_pp', 'dwd_icon_d2_eps', 'dwd_icon_eu_eps', 'ncep_gefs025', 'ecmwf_ifs025_ensemble',
]);

export interface Meta {
  last_run_initialisation_time?: number | null;
  last_run_modification_time: number;
  last_run_availability_time: number;
  temporal_resolution_seconds: number;
  data_end_time: number;
  update_interval_seconds: number;
}

/** The newest run began on the last full three hours at least two hours ago and has been available for half an hour at least. */
export function metaOf(domain: string, nowMs: number): Meta | null {
  if (!domains.has(domain)) return null;
  const run = Math.floor((nowMs / 1000 - 9000) / 10_800) * 10_800;
  return {
    last_run_initialisation_time: run, last_run_modification_time: run + 6900, last_run_availability_time: run + 7200,
    temporal_resolution_seconds: 3600, data_end_time: run + 48 * 3600, update_interval_seconds: 10_800,
  };
}
