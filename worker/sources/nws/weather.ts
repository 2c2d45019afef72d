/**
 * The grid's weather words in WMO code 4677 terms, by a table of ours. Thunder counts however unlikely the words make it.
 * "No weather" is known too: then the code only tells that nothing falls (2, "sky on the whole unchanged").
 */
import { fieldOf, listOf } from '../values.ts';

const codes: Readonly<Record<string, number>> = {
  thunderstorms: 95, water_spouts: 19, rain: 63, rain_showers: 81, drizzle: 53, freezing_rain: 67, freezing_drizzle: 57, freezing_spray: 57,
  sleet: 79, snow: 73, snow_showers: 86, hail: 96, ice_pellets: 79, ice_crystals: 76, fog: 45, freezing_fog: 48, ice_fog: 48,
  haze: 5, smoke: 4, blowing_dust: 7, blowing_sand: 7, blowing_snow: 38, volcanic_ash: 4, frost: 2,
};

const NO_WEATHER = 2;

/** The worst of the words of an hour; null when there are none or one that we do not know. */
export function weatherCodeOf(value: unknown): number | null {
  const entries = listOf(value);
  if (entries === null || entries.length === 0) return null;
  const found = entries.map((entry) => codeOf(fieldOf(entry, 'weather')));
  if (found.includes(codes['thunderstorms'] ?? null)) return codes['thunderstorms'] ?? null;
  return found.reduce((worst, code) => (worst === null || code === null ? null : Math.max(worst, code)));
}

function codeOf(word: unknown): number | null {
  if (word === null) return NO_WEATHER;
  return typeof word === 'string' && Object.hasOwn(codes, word) ? (codes[word] ?? null) : null;
}
