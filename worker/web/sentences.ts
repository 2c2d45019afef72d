/** Sentences of the words catalogue as a page sets them: their words unchanged, their first part made to be found by the eye. */
import type { Caution } from '../../lib/brief/cautions.ts';
import type { JudgedDay } from '../../lib/brief/day.ts';
import { cautionSentences, dayStatement, INVENTED, windowSentence, type Reader } from '../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from './html.ts';

/** A number and its unit stay on one line: "15 h", "1.2 m/s". */
export function tied(text: string): string {
  return text.replace(/(\d) (?=(?:h|m|m\/s|km\/h|kt|mph|ft|mm|%|°C|hPa|J\/kg|min)(?![\p{L}\d]))/gu, '$1\u00A0');
}

/** The day sentence: its verdict as a headline, then why. */
export function dayLine(day: JudgedDay, reader: Reader): Html {
  const text = tied(dayStatement(day, reader));
  const end = text.indexOf('. ') + 1;
  const said = end === 0 ? text : html`<span class="head">${text.slice(0, end)}</span> <span class="why">${text.slice(end + 1)}</span>`;
  return html`<p class="day">${day.demo ? html`<span class="tag">${INVENTED}.</span> ` : null}${said}</p>`;
}

export function windowLines(day: JudgedDay): Piece {
  return day.windows.length === 0 ? null : html`<ul class="windows">${day.windows.map((window) => html`<li class="v-${window.verdict}">${tied(windowSentence(window, day))}</li>`)}</ul>`;
}

/** What a caution is about stands before its first colon or comma. */
function cautionItem(text: string): Html {
  const end = /[:,](?= )/.exec(text)?.index;
  return end === undefined ? html`<li>${tied(text)}</li>` : html`<li><strong>${tied(text.slice(0, end + 1))}</strong>${tied(text.slice(end + 1))}</li>`;
}

export function cautionItems(cautions: readonly Caution[], day: JudgedDay, reader: Reader): Html[] {
  return cautionSentences(cautions, day, reader).map((text) => html`${cautionItem(text)} `);
}
