/** The margins of one hour, tightest first, each with its working one tap away. Rows show spare and unit, no verdict. */
import type { CombinedMargin, JudgedHour } from '../../lib/brief/day.ts';
import { tightestFirst } from '../../lib/brief/tightest.ts';
import { figure } from '../../lib/brief/units-out.ts';
import { marginRow, plainText, sourceName, type Reader } from '../../lib/brief/words/index.ts';
import type { Term } from '../../lib/margin/ids.ts';
import { html, type Html } from './html.ts';
import type { HourDetail } from './page-services.ts';

/** As many decimals as the sum needs to be redone by hand, and no trailing noughts. */
function workedFigure(value: number): string {
  return figure(value, { decimals: 3 }).replace(/(\.\d*?)0+$/, '$1').replace(/\.$/, '');
}

/** One line of the sum: its numbers stand under each other, so that it can be added up on a phone. */
function line(value: number, unit: string, words: string): Html {
  return html`<span>${workedFigure(value)}</span> ${plainText(unit)}${words}`;
}

function working(margin: CombinedMargin, terms: readonly Term[]): Html {
  const spare = margin.spare === null ? null : html`<p class="sum">${line(margin.spare, margin.unit, margin.source === null ? ' spare' : ` spare, by ${sourceName(margin.source)}`)}</p>`;
  return html`<div class="working">${terms.map((term) => html`<p>${line(term.value, term.unit, `, ${plainText(term.term, 120)}: ${plainText(term.origin, 240)}`)}</p>`)}${spare}</div>`;
}

function marginItem(margin: CombinedMargin, detail: HourDetail, reader: Reader): Html {
  const row = marginRow(margin, reader);
  const terms = detail.workings.find(({ id }) => id === margin.id)?.terms ?? [];
  const sum = terms.length === 0 ? html`<p>No working: there was nothing to add up.</p>` : working(margin, terms);
  const bar = margin.status === 'beyond' ? 'past' : margin.status === 'unknown' ? 'void' : margin.status === 'close' ? 'near' : 'clear';
  return html`<li><details class="${bar}"><summary><span class="what">${row.name}</span> <span class="left">${row.spare}</span></summary>
<p>${row.sentence}</p>${sum}</details></li>`;
}

export function marginsList(hour: JudgedHour, detail: HourDetail, reader: Reader): Html {
  if (hour.margins.length === 0) return html`<p>No margin could be judged in this hour.</p>`;
  return html`<ol class="margins">${tightestFirst(hour.margins).map((margin) => marginItem(margin, detail, reader))}</ol>`;
}
