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

function termRow(term: Term): Html {
  return html`<tr><th scope="row">${plainText(term.term, 120)}</th><td class="n">${workedFigure(term.value)}</td><td>${plainText(term.unit)}</td><td>${plainText(term.origin, 240)}</td></tr>`;
}

function workingTable(margin: CombinedMargin, terms: readonly Term[]): Html {
  const spare = margin.spare === null ? null
    : html`<tr class="sum"><th scope="row">spare</th><td class="n">${workedFigure(margin.spare)}</td><td>${margin.unit}</td><td>${margin.source === null ? '' : sourceName(margin.source)}</td></tr>`;
  return html`<div class="scroll" tabindex="0" role="region" aria-label="Working"><table><thead><tr><th scope="col">Term</th><th scope="col">Value</th><th scope="col">Unit</th><th scope="col">Origin</th></tr></thead><tbody>${terms.map(termRow)}${spare}</tbody></table></div>`;
}

function marginItem(margin: CombinedMargin, detail: HourDetail, reader: Reader): Html {
  const row = marginRow(margin, reader);
  const terms = detail.workings.find(({ id }) => id === margin.id)?.terms ?? [];
  const working = terms.length === 0 ? html`<p>No working: there was nothing to add up.</p>` : workingTable(margin, terms);
  const bar = margin.status === 'beyond' ? 'past' : margin.status === 'unknown' ? 'void' : margin.status === 'close' ? 'near' : 'clear';
  return html`<li><details class="${bar}"><summary><span class="what">${row.name}</span> <span class="left">${row.spare}</span></summary>
<p>${row.sentence}</p>${working}</details></li>`;
}

export function marginsList(hour: JudgedHour, detail: HourDetail, reader: Reader): Html {
  if (hour.margins.length === 0) return html`<p>No margin could be judged in this hour.</p>`;
  return html`<ol class="margins">${tightestFirst(hour.margins).map((margin) => marginItem(margin, detail, reader))}</ol>`;
}
