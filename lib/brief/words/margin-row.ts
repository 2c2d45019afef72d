/** A row of the margin table: spare and unit, the limit and what is held against it. No verdict stands in it. */
import type { CombinedMargin } from '../day.ts';
import { quantityText, type Rounding } from '../units-out.ts';
import { causeClause, isSignalOnly } from './causes.ts';
import { missingPhrase } from './fields.ts';
import { keepsUnit, limitSense, marginName } from './margins.ts';
import { sentence } from './plain.ts';
import type { Reader } from './reader.ts';

export interface MarginRow {
  readonly name: string;
  /** "1.2 m/s to spare", "1.3 m/s short", "not known: gust missing". */
  readonly spare: string;
  /** "2.5 m/s", or a dash where the margin has none. */
  readonly limit: string;
  readonly demand: string;
  /** The whole margin as a sentence. */
  readonly sentence: string;
}

/** The spare alone, rounded down: it never looks larger than it is. */
export function spareText(margin: CombinedMargin, reader: Reader): string {
  if (margin.status === 'unknown') {
    if (margin.source === null && margin.missing.length === 0) return 'not known: no source has a vote';
    return `not known: ${missingPhrase(margin.missing)}`;
  }
  if (margin.spare === null) return 'none: no solution';
  if (isSignalOnly(margin)) return 'no thunderstorm signalled';
  const size = { value: Math.abs(margin.spare), unit: margin.unit, asIs: keepsUnit(margin.id) };
  return margin.spare < 0
    ? `${quantityText(size, reader.units, 'up')} short`
    : `${quantityText(size, reader.units, 'down')} to spare`;
}

function numberText(margin: CombinedMargin, value: number | null, reader: Reader, rounding: Rounding): string {
  if (value === null) return '–';
  return quantityText({ value, unit: margin.unit, asIs: keepsUnit(margin.id) }, reader.units, rounding);
}

export function marginRow(margin: CombinedMargin, reader: Reader): MarginRow {
  return {
    name: marginName(margin.id),
    spare: spareText(margin, reader),
    limit: numberText(margin, margin.limit, reader, limitSense(margin.id) === 'most' ? 'down' : 'up'),
    demand: numberText(margin, margin.demand, reader, 'nearest'),
    sentence: sentence(causeClause(margin, reader)),
  };
}
