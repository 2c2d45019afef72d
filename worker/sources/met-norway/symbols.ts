/**
 * MET Norway's weather symbols in WMO code 4677 terms, by a table of ours. Only what we know is mapped; anything else is
 * missing. Every symbol with thunder is 95: what matters here is that it thunders, not how hard it rains with it.
 */
const plain: Readonly<Record<string, number>> = {
  clearsky: 0, fair: 1, partlycloudy: 2, cloudy: 3, fog: 45,
  lightrain: 61, rain: 63, heavyrain: 65, lightrainshowers: 80, rainshowers: 81, heavyrainshowers: 82,
  lightsleet: 68, sleet: 69, heavysleet: 69, lightsleetshowers: 83, sleetshowers: 84, heavysleetshowers: 84,
  lightsnow: 71, snow: 73, heavysnow: 75, lightsnowshowers: 85, snowshowers: 86, heavysnowshowers: 86,
};

const THUNDER = 95;

export function weatherCodeOf(symbol: unknown): number | null {
  if (typeof symbol !== 'string') return null;
  const bare = symbol.replace(/_(?:day|night|polartwilight)$/, '');
  // The service spells two of its thunder symbols with a doubled s: "lightssleetshowersandthunder".
  const wet = /^(?<wet>[a-z]+)andthunder$/.exec(bare)?.groups?.['wet']?.replace(/^lightss/, 'lights');
  const code = plainCode(wet ?? bare);
  return wet === undefined ? code : code === null ? null : THUNDER;
}

function plainCode(name: string): number | null {
  return Object.hasOwn(plain, name) ? (plain[name] ?? null) : null;
}
