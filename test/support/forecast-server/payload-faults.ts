// Faults of the content: an answer that is well-formed and wrong. Each edits a copy of a clean Open-Meteo location; the
// other two services have the few that fit their shape. Names are those of the README beside this file.
import type { Location, Meta } from './open-meteo.ts';
import type { MetAnswer } from './met-norway.ts';
import type { NwsAnswer, NwsLayer } from './nws.ts';

const HOUR_S = 3600;
type Column = (number | string | null)[];

function columns(edit: (column: Column, name: string, location: Location) => Column, only: RegExp = /./): (location: Location) => void {
  return (location) => {
    for (const [name, column] of Object.entries(location.hourly)) {
      if (name !== 'time' && only.test(name)) location.hourly[name] = edit(column, name, location);
    }
  };
}

function units(edit: (unit: string, name: string) => string | undefined, only: RegExp): (location: Location) => void {
  return ({ hourly_units }) => {
    for (const name of Object.keys(hourly_units).filter((one) => only.test(one))) {
      const unit = edit(hourly_units[name] ?? '', name);
      if (unit === undefined) delete hourly_units[name];
      else hourly_units[name] = unit;
    }
  };
}

function times(edit: (stamps: Column) => Column): (location: Location) => void {
  return ({ hourly }) => {
    hourly['time'] = edit(hourly['time'] ?? []);
  };
}

/** Every column and the times cut or picked in the same way. */
function rows(pick: (column: Column) => Column): (location: Location) => void {
  return ({ hourly }) => {
    for (const name of Object.keys(hourly)) hourly[name] = pick(hourly[name] ?? []);
  };
}

const shiftS = (seconds: number) => times((stamps) => stamps.map((stamp) => Number(stamp) + seconds));
const gusts = /^wind_gusts_10m/;
const wind = /^wind_(speed|gusts)/;
const middle = (column: Column) => Math.floor(column.length / 2);
const at = (index: (column: Column) => number, value: number | string | null) => columns((column) => column.with(index(column), value));

export const openMeteoFaults: Readonly<Record<string, (location: Location) => void>> = {
  'all-null-gusts': columns((column) => column.map(() => null), gusts),
  'undefined-gusts': (location) => {
    columns((column) => column.map(() => null), gusts)(location);
    units(() => 'undefined', gusts)(location);
  },
  'no-gusts': (location) => {
    delete location.hourly['wind_gusts_10m'];
    delete location.hourly_units['wind_gusts_10m'];
  },
  'all-null': columns((column) => column.map(() => null)),
  'null-hour': at(middle, null),
  'last-three-null': columns((column) => column.map((value, i) => (i >= column.length - 3 ? null : value))),
  kmh: (location) => {
    columns((column) => column.map((value) => (value === null ? null : Number((Number(value) * 3.6).toFixed(1)))), wind)(location);
    units(() => 'km/h', wind)(location);
  },
  'kmh-labels-only': units(() => 'km/h', wind),
  'unit-missing': units(() => undefined, gusts),
  inch: units(() => 'inch', /^precipitation$/),
  kelvin: columns((column) => column.map((value) => Number(value) + 273.1), /^temperature_2m$/),
  strings: columns((column) => column.map((value) => (value === null ? null : String(value)))),
  'odd-types': columns((column) => column.map((_, i) => (['', [], [5], {}, true][i % 5] ?? null) as null)),
  sentinels: columns((column) => column.map((_, i) => [-999, -9999, 9999, 32767, 65535, 9.96921e36][i % 6]!)),
  infinite: columns((column) => column.map((_, i) => (i % 2 === 0 ? Infinity : -Infinity))),
  'negative-wind': columns((column) => column.map((_, i) => -3 - i), /^wind_speed_10m/),
  'absurd-wind': columns((column) => column.map((_, i) => 111 + i), /^wind_speed_10m/),
  'absurd-gusts': columns((column) => column.map((_, i) => 30 + i), gusts),
  'third-of-wind': columns((column) => column.map((value) => Number((Number(value) / 3.6).toFixed(2))), wind),
  'absurd-direction': columns((column) => column.map((_, i) => [361, -10, 720][i % 3]!), /^wind_direction/),
  'short-columns': columns((column) => column.slice(0, -1)),
  'long-columns': columns((column) => [...column, 1]),
  'missing-columns': (location) => {
    location.hourly = { time: location.hourly['time'] ?? [] };
  },
  'no-hourly': (location) => {
    delete (location as Partial<Location>).hourly;
  },
  'hourly-null': (location) => {
    (location as { hourly: unknown }).hourly = null;
  },
  'hourly-list': (location) => {
    (location as { hourly: unknown }).hourly = [];
  },
  'no-time': (location) => {
    delete location.hourly['time'];
  },
  'nothing-in-it': rows(() => []),
  unsorted: times((stamps) => stamps.map((stamp, i) => (i === 3 ? stamps[4]! : i === 4 ? stamps[3]! : stamp))),
  'same-hour-twice': times((stamps) => stamps.with(4, stamps[3]!)),
  'hour-missing': rows((column) => column.filter((_, i) => i !== middle(column))),
  'three-hourly': rows((column) => column.filter((_, i) => i % 3 === 0)),
  'half-day': rows((column) => column.slice(0, middle(column))),
  'local-times': (location) => {
    location.hourly_units['time'] = 'iso8601';
    times((stamps) => stamps.map((stamp) => new Date(Number(stamp) * 1000).toISOString().slice(0, 16)))(location);
  },
  milliseconds: times((stamps) => stamps.map((stamp) => Number(stamp) * 1000)),
  offset: (location) => {
    location.utc_offset_seconds = HOUR_S;
    shiftS(-HOUR_S)(location);
  },
  yesterday: shiftS(-26 * HOUR_S),
  'two-days-old': shiftS(-50 * HOUR_S),
  'constant-wind': columns((column) => column.map(() => 2.22), /^wind_speed_10m$/),
  'constant-gusts': columns((column) => column.map(() => 4.44), gusts),
  'constant-temperature': columns((column) => column.map(() => 14.5), /^temperature_2m$/),
  'all-zero': columns((column) => column.map(() => 0)),
  'gust-below-mean': (location) => columns((_, __, { hourly }) => (hourly['wind_speed_10m'] ?? []).map((value) => Number(value) - 1.5), gusts)(location),
  'gust-just-below-mean': (location) => columns((_, __, { hourly }) => (hourly['wind_speed_10m'] ?? []).map((value) => Number(value) - 0.5), gusts)(location),
  'tiny-numbers': columns((column) => column.map((value, i) => (i % 2 === 0 ? -0 : value === 0 ? 1e-320 : value)), /^precipitation$/),
  'direction-360': columns((column) => column.map(() => 360), /^wind_direction/),
  'humidity-130': columns((column) => column.map(() => 130), /^relative_humidity/),
  'probability-minus-1': columns((column) => column.map(() => -1), /^precipitation_probability$/),
  knots: units(() => 'kn', wind),
  'far-300-km': (location) => {
    location.latitude += 2.7;
  },
  'far-60-km': (location) => {
    location.latitude += 0.54;
  },
  'far-40-km': (location) => {
    location.latitude += 0.36;
  },
  swapped: (location) => {
    [location.latitude, location.longitude] = [location.longitude, location.latitude];
  },
  'no-place': (location) => {
    delete (location as Partial<Location>).latitude;
  },
  'no-elevation': (location) => {
    delete location.elevation;
  },
  'elevation-null': (location) => {
    (location as { elevation: unknown }).elevation = null;
  },
  'moved-ground': (location) => {
    location.elevation = (location.elevation ?? 0) + 250;
  },
  'hostile-text': (location) => {
    location.timezone = '<script>alert(1)</script>\r\nBEGIN:VEVENT';
    location.timezone_abbreviation = '\u202Eevil';
    location.hourly_units['wind_gusts_10m'] = '<b>m/s</b>';
  },
};

const spanS = (meta: Meta, seconds: number) => {
  if (typeof meta.last_run_initialisation_time !== 'number') return;
  meta.last_run_initialisation_time += seconds;
  meta.last_run_modification_time += seconds;
  meta.last_run_availability_time += seconds;
};

/** Faults of meta.json; `nowS` is the server's clock. */
export const metaFaults: Readonly<Record<string, (meta: Meta, nowS: number) => void>> = {
  'old-run': (meta) => spanS(meta, -24 * HOUR_S),
  'no-run': (meta) => {
    delete meta.last_run_initialisation_time;
  },
  'run-null': (meta) => {
    meta.last_run_initialisation_time = null;
  },
  'future-run': (meta, nowS) => spanS(meta, nowS + 3 * HOUR_S - (meta.last_run_initialisation_time ?? 0)),
  'just-available': (meta, nowS) => {
    meta.last_run_availability_time = nowS - 300;
  },
};

function details(edit: (details: Record<string, number | string | null>, index: number) => void): (answer: MetAnswer) => void {
  return (answer) => answer.properties.timeseries.forEach((entry, i) => edit(entry.data.instant.details, i));
}

function metTimes(edit: (ms: number) => string): (answer: MetAnswer) => void {
  return (answer) => {
    for (const entry of answer.properties.timeseries) entry.time = edit(Date.parse(entry.time));
  };
}

const iso = (ms: number) => new Date(ms).toISOString().replace('.000Z', 'Z');

export const metNorwayFaults: Readonly<Record<string, (answer: MetAnswer) => void>> = {
  thunder: (answer) => {
    for (const { data } of answer.properties.timeseries) if (data.next_1_hours?.summary) data.next_1_hours.summary.symbol_code = 'lightrainshowersandthunder_day';
  },
  'odd-symbol': (answer) => {
    for (const { data } of answer.properties.timeseries) if (data.next_1_hours?.summary) data.next_1_hours.summary.symbol_code = '<script>';
  },
  kmh: (answer) => {
    answer.properties.meta.units['wind_speed'] = 'km/h';
  },
  'no-units': (answer) => {
    answer.properties.meta.units = {};
  },
  strings: details((one) => Object.keys(one).forEach((key) => (one[key] = String(one[key])))),
  sentinels: details((one, i) => Object.keys(one).forEach((key) => (one[key] = [-999, 9999, 32767, 9.96921e36][i % 4]!))),
  'all-null': details((one) => Object.keys(one).forEach((key) => (one[key] = null))),
  'no-wind': details((one) => delete one['wind_speed']),
  'constant-wind': details((one) => (one['wind_speed'] = 2.2)),
  'old-run': (answer) => {
    answer.properties.meta.updated_at = iso(Date.parse(answer.properties.meta.updated_at ?? '') - 24 * 3_600_000);
  },
  'future-run': (answer) => {
    answer.properties.meta.updated_at = iso(Date.parse(answer.properties.meta.updated_at ?? '') + 4 * 3_600_000);
  },
  'no-run': (answer) => {
    delete answer.properties.meta.updated_at;
  },
  'two-days-old': metTimes((ms) => iso(ms - 7 * 24 * 3_600_000)),
  'local-times': metTimes((ms) => iso(ms).slice(0, -1)),
  unsorted: (answer) => void answer.properties.timeseries.reverse(),
  'far-300-km': (answer) => {
    answer.geometry.coordinates[1]! += 2.7;
  },
  swapped: ({ geometry }) => {
    geometry.coordinates = [geometry.coordinates[1]!, geometry.coordinates[0]!, geometry.coordinates[2]!];
  },
  'no-elevation': (answer) => void answer.geometry.coordinates.pop(),
  'no-series': (answer) => {
    answer.properties.timeseries = [];
  },
};

function layers(edit: (layer: NwsLayer, name: string) => void, only: RegExp): (answer: NwsAnswer) => void {
  return ({ properties }) => {
    for (const name of Object.keys(properties).filter((one) => only.test(one))) edit(properties[name] as NwsLayer, name);
  };
}

const windLayers = /^wind(Speed|Gust)$/;

export const nwsFaults: Readonly<Record<string, (answer: NwsAnswer) => void>> = {
  thunder: layers((layer) => {
    layer.values = layer.values.map(({ validTime }) => ({ validTime, value: [{ coverage: 'isolated', weather: 'thunderstorms', intensity: null }] }));
  }, /^weather$/),
  'odd-unit': layers((layer) => {
    layer.uom = 'wmoUnit:furlong_fortnight-1';
  }, windLayers),
  'unit-missing': layers((layer) => {
    delete layer.uom;
  }, windLayers),
  'empty-gusts': layers((layer) => {
    layer.values = [];
    delete layer.uom;
  }, /^windGust$/),
  strings: layers((layer) => {
    layer.values = layer.values.map(({ validTime, value }) => ({ validTime, value: String(value) }));
  }, windLayers),
  sentinels: layers((layer) => {
    layer.values = layer.values.map(({ validTime }, i) => ({ validTime, value: [-999, 9999, 32767][i % 3] }));
  }, windLayers),
  'odd-durations': layers((layer) => {
    layer.values = layer.values.map(({ validTime, value }) => ({ validTime: validTime.replace(/\/.*/, '/P1M'), value }));
  }, windLayers),
  'overlapping': layers((layer) => {
    layer.values = layer.values.map(({ validTime, value }) => ({ validTime: validTime.replace(/\/.*/, '/PT9H'), value }));
  }, windLayers),
  'old-run': (answer) => {
    answer.properties.updateTime = iso(Date.parse(answer.properties.updateTime ?? '') - 24 * 3_600_000);
  },
  'no-run': (answer) => {
    delete answer.properties.updateTime;
  },
  'future-run': (answer) => {
    answer.properties.updateTime = iso(Date.parse(answer.properties.updateTime ?? '') + 4 * 3_600_000);
  },
  'no-elevation': (answer) => {
    delete answer.properties.elevation;
  },
  'elevation-in-feet': (answer) => {
    answer.properties.elevation = { unitCode: 'wmoUnit:ft', value: 1800 };
  },
  'far-300-km': (answer) => {
    const polygon = answer.geometry as { coordinates: number[][][] };
    for (const corner of polygon.coordinates[0]!) corner[1]! += 2.7;
  },
};
