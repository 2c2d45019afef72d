/** What the sources and the members of an ensemble each say of an hour. */
import type { JudgedHour } from '../day.ts';
import { quantityText } from '../units-out.ts';
import { headingName } from './heading.ts';
import { keepsUnit, marginName } from './margins.ts';
import { sentence } from './plain.ts';
import type { Reader } from './reader.ts';
import { sourceName } from './sources.ts';

type Wind = NonNullable<JudgedHour['wind']>['bySource'][number];

/** "Open-Meteo ICON-D2: 4.2 m/s from 251°, gusts 5.6 m/s." */
export function windBySource(wind: Wind, reader: Reader): string {
  const from = wind.fromDeg === null ? 'without a direction' : `from ${headingName(wind.fromDeg)}`;
  const steps = wind.interpolated === true ? ', interpolated between its own steps' : '';
  const gust = wind.gustMps === null ? 'gusts not known' : `gusts ${quantityText({ value: wind.gustMps, unit: 'm/s' }, reader.units)}`;
  return sentence(`${sourceName(wind.source)}: ${quantityText({ value: wind.meanMps, unit: 'm/s' }, reader.units)} ${from}, ${gust}${steps}`);
}

/** "What the ensemble’s members leave at 13 h, interpolated between steps of 3 h". */
export function membersCaption({ between }: NonNullable<JudgedHour['ensemble']>, at: string): string {
  return `What the ensemble’s members leave at ${at}${between === undefined ? '' : `, interpolated between steps of ${between.stepHours} h`}`;
}

type Spread = NonNullable<JudgedHour['ensemble']>['spreads'][number];

export interface SpreadRow {
  readonly name: string;
  readonly median: string;
  /** What nine members in ten exceed. */
  readonly adverse: string;
}

export function spreadRow(spread: Spread, reader: Reader): SpreadRow {
  const shown = (value: number) => quantityText({ value, unit: spread.unit, asIs: keepsUnit(spread.id) }, reader.units, 'down');
  return { name: marginName(spread.id), median: shown(spread.medianSpare), adverse: shown(spread.adverseSpare) };
}
