/** The columns of airspeed as a table: the picture's own data, for whoever cannot or would rather not look at it. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { quantityFigure } from '../../lib/brief/units-out.ts';
import { hourName, marginName, verdictPhrase, type Reader } from '../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from './html.ts';

function cells(hour: JudgedHour, reader: Reader): Piece {
  const column = hour.airspeed;
  if (column === null) return html`<td colspan="6">not known</td>`;
  const number = (mps: number | null, rounding: 'nearest' | 'down' = 'nearest') => html`<td class="n">${mps === null ? 'none' : quantityFigure({ value: mps, unit: 'm/s' }, reader.units, rounding)}</td>`;
  return [number(column.trimMps), number(column.headMps), number(column.crabMps), number(column.gustMps), number(column.reserveMps), number(column.spareMps, 'down')];
}

export function hoursTable(day: JudgedDay, reader: Reader): Html {
  const rows = day.hours.map((hour) => html`<tr><th scope="row">${hourName(hour.validAt, day.timeZone)}</th><td>${verdictPhrase(hour.verdict)}</td>${cells(hour, reader)}<td>${hour.causes.map((id) => marginName(id)).join(', ')}</td></tr>`);
  const heads = ['Hour', 'Verdict', 'Trim', 'Head wind', 'Crab', 'Gust', 'Reserve', 'Spare', 'Because of'];
  return html`<details class="numbers"><summary>The columns as numbers, in ${reader.units.speed}</summary><div class="scroll" tabindex="0" role="region" aria-label="The columns as numbers"><table>
<thead><tr>${heads.map((head) => html`<th scope="col">${head}</th>`)}</tr></thead><tbody>${rows}</tbody></table></div></details>`;
}
