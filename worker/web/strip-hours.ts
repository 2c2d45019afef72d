/** A strip hour by hour: which way to tow, how high the release, how far aside the line falls, what is tightest; and when to stop. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { tightestFirst } from '../../lib/brief/tightest.ts';
import { quantityText } from '../../lib/brief/units-out.ts';
import { headingName, hourName, lastLaunchOfDay, marginName, spareText, verdictPhrase, type Reader } from '../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from './html.ts';

function row(hour: JudgedHour, day: JudgedDay, reader: Reader): Html {
  const { heading } = hour;
  const metres = (value: number | null | undefined, asIs: boolean) => (value === null || value === undefined ? 'not known' : quantityText({ value, unit: 'm', asIs }, reader.units));
  const [tightest] = tightestFirst(hour.margins);
  return html`<tr><th scope="row">${hourName(hour.validAt, day.timeZone)}</th><td>${verdictPhrase(hour.verdict)}</td><td>${heading === null ? 'not known' : headingName(heading.headingDeg)}</td>
<td class="n">${metres(heading?.releaseM, false)}</td><td class="n">${metres(heading?.lineDriftM, true)}</td><td>${tightest === undefined ? '' : `${marginName(tightest.id)}: ${spareText(tightest, reader)}`}</td></tr>`;
}

export function stripHours(day: JudgedDay, reader: Reader): Piece {
  if (day.kind !== 'strip' || day.hours.length === 0) return null;
  const heads = ['Hour', 'Verdict', 'Tow along', 'Release', 'Line falls aside', 'Tightest'];
  return html`<section aria-labelledby="tow-h"><h2 id="tow-h">The tow, hour by hour</h2><p class="stop">${lastLaunchOfDay(day)}</p>
<div class="scroll" tabindex="0" role="region" aria-label="Table of the tow"><table><thead><tr>${heads.map((head) => html`<th scope="col">${head}</th>`)}</tr></thead><tbody>${day.hours.map((hour) => row(hour, day, reader))}</tbody></table></div></section>`;
}
