/** What the parts of a column are: names for the bands, never a list of verdicts. */
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { quantityText } from '../../../lib/brief/units-out.ts';
import type { Reader } from '../../../lib/brief/words/index.ts';
import { html, type Html } from '../html.ts';

function swatch(className: string, fill: string | null): Html {
  return html`<svg width="14" height="14" aria-hidden="true"><rect class="${className}" width="14" height="14"${fill === null ? null : html` fill="${fill}"`}/></svg>`;
}

function trimText(day: JudgedDay, reader: Reader): string {
  const trims = day.hours.flatMap((hour) => (hour.airspeed === null ? [] : [hour.airspeed.trimMps]));
  if (trims.length === 0) return 'trim airspeed';
  const [least, most] = [Math.min(...trims), Math.max(...trims)].map((value) => quantityText({ value, unit: 'm/s' }, reader.units));
  return least === most ? `trim airspeed, ${least}` : `trim airspeed, ${least} to ${most} in this air`;
}

export function columnsKey(day: JudgedDay, reader: Reader): Html {
  if (day.hours.every(({ airspeed }) => airspeed === null)) return html`<p>Each column would be trim airspeed and how it is spent; nothing of it is known.</p>`;
  return html`<p>Each column is ${trimText(day, reader)}${day.kind === 'strip' ? ' at release height' : ''}, spent from the top; numbers are what is left in ${reader.units.speed}, below the line what is short.</p>
<ul class="key"><li>${swatch('slate-fill', null)} head wind</li><li>${swatch('edge-slate', 'url(#h-crab)')} lost to crabbing</li>${day.kind === 'strip' ? null : html`<li>${swatch('plum-fill', null)} gust</li>`}<li>${swatch('edge-ochre', 'url(#h-reserve)')} reserve of the sheet</li><li>${swatch('spare', null)} spare</li></ul>`;
}
