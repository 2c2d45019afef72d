/** Every published table that the model is held to, in the order of the accuracy table. */
import { altitudes } from '../reference/tables/altitudes.ts';
import { declination } from '../reference/tables/declination.ts';
import { geodesic } from '../reference/tables/geodesic.ts';
import { hill } from '../reference/tables/hill.ts';
import { moistAir } from '../reference/tables/moist-air.ts';
import { polar } from '../reference/tables/polar.ts';
import { standardAtmosphere } from '../reference/tables/standard-atmosphere.ts';
import { statistics } from '../reference/tables/statistics.ts';
import { sunPosition } from '../reference/tables/sun-position.ts';
import { sunTimes } from '../reference/tables/sun-times.ts';
import { surfaceLayer } from '../reference/tables/surface-layer.ts';
import { thermal } from '../reference/tables/thermal.ts';
import { tow } from '../reference/tables/tow.ts';
import { windChill } from '../reference/tables/wind-chill.ts';
import { wind } from '../reference/tables/wind.ts';
import type { Table } from './table.ts';

export const allTables: readonly Table[] = [
  ...standardAtmosphere, ...altitudes, ...moistAir, ...wind, ...surfaceLayer, ...hill, ...polar, ...tow, ...thermal, ...windChill,
  ...sunTimes, ...sunPosition, ...declination, ...geodesic, ...statistics,
];
