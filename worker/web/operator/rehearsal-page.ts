/** A rehearsed brief: what would arrive, its columns of airspeed, and every margin of its limiting hour with its working. */
import { briefText, briefTitle, capital, hourName, placeName, plainText, provenance, verdictPhrase } from '../../../lib/brief/words/index.ts';
import { READER } from '../../../lib/brief/words/reader.ts';
import { WING_CLASSES } from '../../../lib/config/wing.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import { chosenHour } from '../chosen-hour.ts';
import { hourDetail } from '../hour-detail.ts';
import { hoursTable } from '../hours-table.ts';
import { html, type Html } from '../html.ts';
import { marginsList } from '../margins-list.ts';
import { columnsPicture, LARGE } from '../pictures/columns.ts';
import { columnsKey } from '../pictures/key.ts';
import { verdictRuns, hourScale } from '../pictures/runs.ts';
import { hourPictures } from '../pictures/hour-pictures.ts';
import { cautionItems, dayLine, tied, windowLines } from '../sentences.ts';
import { operatorPage, type OperatorFrame } from './frame.ts';
import type { Rehearsal } from './rehearsal.ts';

export interface RehearsalPage extends OperatorFrame {
  readonly rehearsal: Rehearsal;
  readonly sheets: readonly LimitSheet[];
  readonly action: string;
}

function choice({ rehearsal: { day, input }, sheets, action }: RehearsalPage): Html {
  return html`<form class="choose" method="get" action="${action}"><label>Wing <select name="wing">${WING_CLASSES.map((name) => html`<option${name === day.wingKey ? html` selected` : null}>${name}</option>`)}</select></label>
<label>Limit sheet <select name="sheet">${sheets.filter(({ kind }) => kind === input.site.kind).map(({ id, name }) => html`<option value="${id}"${id === day.sheetId ? html` selected` : null}>${plainText(name)}</option>`)}</select></label><button type="submit">Rehearse with these</button></form>`;
}

export function rehearsalPage(page: RehearsalPage): string {
  const { rehearsal: { day, input } } = page;
  const hour = chosenHour(day, null);
  const detail = hour === null ? null : hourDetail(input)(hour);
  const back = page.action.replace(/\/rehearse$/, '');
  const cautions = cautionItems(day.cautions, day, READER);
  return operatorPage(page, html`<p class="invented"><strong>Invented weather.</strong> A rehearsal of ${placeName({ name: day.siteName, id: day.siteId })}: nothing of this is kept, and nobody is told. It shows what the figures of this place do, and says nothing about today.</p>
<div data-valid-until="${day.validUntil}" data-issued-at="${day.issuedAt}">${dayLine(day, READER)}${windowLines(day)}<p class="ages">${tied(provenance(day))}</p>
<figure class="airspeed">${columnsPicture(day, READER, { size: LARGE, id: 'col' })}${hourScale(day)}${verdictRuns(day)}<figcaption>${columnsKey(day, READER)}</figcaption>${hoursTable(day, READER)}</figure>
${cautions.length === 0 ? null : html`<section aria-labelledby="cautions-h"><h2 id="cautions-h">Cautions</h2><ul class="cautions">${cautions}</ul></section>`}
<section aria-labelledby="brief-h"><h2 id="brief-h">As it would arrive</h2><div class="arrives"><p><strong>${briefTitle([day])}</strong></p><pre tabindex="0">${briefText([day], READER)}</pre></div></section>
${hour === null || detail === null ? null : html`<section class="hour" aria-labelledby="hour-h"><h2 id="hour-h">${capital(verdictPhrase(hour.verdict))} at ${hourName(hour.validAt, day.timeZone)}: every margin</h2>${hourPictures(day, hour, detail, READER)}<p class="hint">Open a margin for its working.</p>${marginsList(hour, detail, READER)}</section>`}</div>
<section aria-labelledby="choose-h"><h2 id="choose-h">Another wing or sheet</h2>${choice(page)}</section><p class="back"><a href="${back}">Back to the site</a></p><p class="rules">Invented weather.</p>`);
}
