/** The "what if" form: own numbers for one hour. A plain GET form; what is left empty is the forecast's, shown in the field. */
import type { JudgedDay } from '../../lib/brief/day.ts';
import { inUnits, figure } from '../../lib/brief/units-out.ts';
import { hourName, type Reader } from '../../lib/brief/words/index.ts';
import { html, type Html } from './html.ts';
import { numberField, OWN_NUMBERS, type OwnNumber, type OwnNumbers } from './own-numbers.ts';
import { unitsPart } from './units-query.ts';

export interface WhatIfFormOptions {
  readonly reader: Reader;
  readonly hour: string;
  /** What the forecast says, SI: stands in the empty fields. */
  readonly given: OwnNumbers;
  /** What the visitor typed last. */
  readonly typed: Readonly<Partial<Record<string, string>>>;
}

function shown(name: OwnNumber, value: number | undefined, reader: Reader): string {
  if (value === undefined) return '';
  const isSpeed = numberField(name, reader.units).isSpeed;
  const out = isSpeed ? inUnits({ value, unit: 'm/s' }, reader.units).value : value;
  return figure(out, { decimals: name === 'from' || name === 'cape' ? 0 : name === 'sink' ? 2 : 1 });
}

export function whatIfForm(day: JudgedDay, options: WhatIfFormOptions): Html {
  const { reader, hour, given, typed } = options;
  const kept = { date: day.localDate, hour, wing: day.wingKey, sheet: day.sheetId, ...unitsPart(reader.units) };
  return html`<form class="choose" method="get" action="/sites/${encodeURIComponent(day.siteId)}/what-if">
${Object.entries(kept).map(([name, value]) => html`<input type="hidden" name="${name}" value="${value}">`)}
${OWN_NUMBERS.map((name) => {
    const { label, unit } = numberField(name, reader.units);
    return html`<label>${label}${unit === '' ? '' : `, ${unit}`} <input name="${name}" inputmode="decimal" size="6" maxlength="12" autocomplete="off" placeholder="${shown(name, given[name], reader)}" value="${typed[name] ?? ''}"></label> `;
  })}<button type="submit">Judge ${hourName(hour, day.timeZone)} with these</button></form>`;
}
