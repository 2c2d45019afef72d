/** Vapour, dew point, density and the condensation level. */
import { condensationHeightM, condensationTemperatureK, dewPointC, moistDensityKgm3, saturationPressureHpa } from '../../../lib/air/moist-air.ts';
import { ZERO_CELSIUS_K } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

const metpy = { source: 'Unidata MetPy @01eb78e, tests of thermodynamics', standing: 'published', evidence: 'number' } as const;

const vapour = { topic: 'Saturation vapour pressure over water', unit: 'hPa' } as const;
const saturation = table(
  { ...vapour, ...metpy, rounding: 'to 0.01 hPa', tolerance: 0.005, count: 4 },
  [[5, 8.72], [10, 12.27], [18, 20.63], [25, 31.67]] as const,
  { says: ([celsius]) => `at ${celsius} °C`, expected: ([, hpa]) => hpa, ours: ([celsius]) => saturationPressureHpa(celsius) },
);
const saturationFao = table(
  { ...vapour, source: 'FAO-56 (1998), example 3, p. 69', standing: 'published', evidence: 'number', rounding: 'to 0.01 kPa', tolerance: 0.05, count: 1 },
  [[24.5, 15, 23.9]] as const,
  {
    says: ([highC, lowC]) => `mean of a day between ${lowC} and ${highC} °C`,
    expected: ([, , hpa]) => hpa,
    ours: ([highC, lowC]) => (saturationPressureHpa(highC) + saturationPressureHpa(lowC)) / 2,
  },
);

const smithsonian = table(
  {
    topic: 'Saturation vapour pressure, -35 to 35 °C', unit: '%', source: 'Smithsonian Meteorological Tables, 6th ed. (1951), table 94', standing: 'memory', evidence: 'number',
    compared: 'in percent', rounding: 'to four or five figures', tolerance: 0.35, count: 15,
    wider: 'Bolton (1980) claims 0.3 % for his formula, of another vapour pressure (Wexler 1976) than this table (Goff & Gratch 1946)',
  },
  [
    [-35, 0.3139], [-30, 0.5088], [-25, 0.807], [-20, 1.254], [-15, 1.9118], [-10, 2.8627], [-5, 4.2148], [0, 6.1078],
    [5, 8.7192], [10, 12.272], [15, 17.044], [20, 23.373], [25, 31.671], [30, 42.43], [35, 56.236],
  ] as const,
  { says: ([celsius]) => `at ${celsius} °C`, expected: ([, hpa]) => hpa, ours: ([celsius]) => saturationPressureHpa(celsius) },
);

const humidity = table(
  { topic: 'Relative humidity from dew point', unit: '%', ...metpy, rounding: 'to 0.01 %', tolerance: 0.02, count: 1, wider: 'MetPy has read the vapour pressure from another formula since; the two differ by 0.01 %' },
  [[25, 15, 53.8]] as const,
  {
    says: ([celsius, dewC]) => `at ${celsius} °C with a dew point of ${dewC} °C`,
    expected: ([, , pct]) => pct,
    ours: ([celsius, dewC]) => (100 * saturationPressureHpa(dewC)) / saturationPressureHpa(celsius),
  },
);
const dewPoint = table(
  { topic: 'Dew point from relative humidity', unit: '°C', ...metpy, rounding: 'humidity to 0.02 %, 0.006 °C', tolerance: 0.006, count: 1 },
  [[25, 53.8, 15]] as const,
  { says: ([celsius, pct]) => `at ${celsius} °C and ${pct} %`, expected: ([, , dewC]) => dewC, ours: ([celsius, pct]) => dewPointC(celsius, pct) },
);

const densityTopic = { topic: 'Density of air', unit: 'kg/m³' } as const;
/** Dew point of a vapour pressure, by way of the humidity over water at 0 °C. */
function dewOfVapourC(vapourHpa: number): number {
  return dewPointC(0, (100 * vapourHpa) / saturationPressureHpa(0));
}
const ashraeDensity = table(
  {
    ...densityTopic, source: 'ASHRAE Handbook Fundamentals 2017, ch. 1, eq. 11', standing: 'published', evidence: 'number', rounding: 'to 0.00000001 kg/m³', tolerance: 0.0003, count: 1,
    wider: 'ASHRAE takes other gas constants (287.042 for air, 0.621945 for the ratio): 0.01 % of density',
  },
  [[30, 0.02, 95461, 1.08411986]] as const,
  {
    says: ([celsius, ratio, pa]) => `moist, ${celsius} °C, ${ratio} kg of vapour to a kg of air, ${pa} Pa`,
    expected: ([, , , rho]) => rho,
    ours: ([temperatureC, ratio, pa]) => moistDensityKgm3({ temperatureC, pressureHpa: pa / 100, dewPointC: dewOfVapourC((ratio * pa) / 100 / (0.621945 + ratio)) }),
  },
);
const dryDensity = table(
  {
    ...densityTopic, source: 'wind-python/windpowerlib @191d8ca, test of density', standing: 'published', evidence: 'number', rounding: 'to 0.00000001 kg/m³', tolerance: 0.00003, count: 1,
    wider: 'its gas constant is 287.058 against 287.05287: 0.002 % of density',
  },
  [[998.75, 267, 1.30309439]] as const,
  {
    says: ([hpa, kelvin]) => `dry, ${hpa} hPa, ${kelvin} K`,
    expected: ([, , rho]) => rho,
    ours: ([pressureHpa, kelvin]) => moistDensityKgm3({ temperatureC: kelvin - ZERO_CELSIUS_K, dewPointC: -90, pressureHpa }),
  },
);

const condensationTemperature = table(
  {
    topic: 'Condensation level, temperature', unit: 'K', source: 'Unidata MetPy, test of the lifting condensation level', standing: 'published', evidence: 'number', rounding: 'to 0.001 K', tolerance: 0.1, count: 2,
    wider: 'Bolton (1980) claims 0.1 K for his eq. 15; MetPy iterates',
  },
  [[303.15, 293.15, 290.826], [273.09723, 264.5351, 262.827]] as const,
  {
    says: ([airK, dewK]) => `of air at ${airK} K with a dew point of ${dewK} K`,
    expected: ([, , kelvin]) => kelvin,
    ours: ([airK, dewK]) => condensationTemperatureK(airK - ZERO_CELSIUS_K, dewK - ZERO_CELSIUS_K),
  },
);
const heightTopic = { topic: 'Condensation level, height', unit: 'm' } as const;
const romps = table(
  {
    ...heightTopic, source: "Romps (2017) J. Atmos. Sci. 74, author's test value", standing: 'published', evidence: 'number', rounding: 'to 0.000001 m', tolerance: 15, count: 1,
    wider: "Romps lifts with the heat capacity of the moist parcel, 0.9 % more than dry air's: 13 m, by which our cloud base is the lower one",
  },
  [[300, 50, 1433.844139279]] as const,
  {
    says: ([airK, pct]) => `of air at ${airK} K and ${pct} %`,
    expected: ([, , heightM]) => heightM,
    ours: ([airK, pct]) => condensationHeightM(airK - ZERO_CELSIUS_K, dewPointC(airK - ZERO_CELSIUS_K, pct)),
  },
);
const espy = table(
  { ...heightTopic, source: 'rule of thumb, 125 m a kelvin of spread (Espy)', standing: 'common practice', evidence: 'number', rounding: 'a rule, good to 2 %', tolerance: 25, count: 1, wider: 'a rule of thumb' },
  [[30, 20, 1250]] as const,
  { says: ([celsius, dewC]) => `of air at ${celsius} °C with a dew point of ${dewC} °C`, expected: ([, , heightM]) => heightM, ours: ([celsius, dewC]) => condensationHeightM(celsius, dewC) },
);

export const moistAir: readonly Table[] = [
  saturation, saturationFao, smithsonian, humidity, dewPoint, ashraeDensity, dryDensity, condensationTemperature, romps, espy,
];
