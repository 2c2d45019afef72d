/** Who says so: every source with its vote, run and age, how they differ in the chosen hour, and what nobody judged. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { disagreement, hourName, membersCaption, notJudgedGroups, notJudgedSentence, spreadRow, voteSentence, windBySource, type Reader } from '../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from './html.ts';

/** Spares over the members of an ensemble: the middle one, and the one that nine in ten exceed. */
function members(hour: JudgedHour, at: string, reader: Reader): Piece {
  if (hour.ensemble === null || hour.ensemble.spreads.length === 0) return null;
  const rows = hour.ensemble.spreads.map((spread) => spreadRow(spread, reader));
  return html`<details class="numbers"><summary>${membersCaption(hour.ensemble, at)}</summary><div class="scroll" tabindex="0" role="region" aria-label="Members"><table>
<thead><tr><th scope="col">Margin</th><th scope="col">Middle member spares</th><th scope="col">Nine in ten spare more than</th></tr></thead>
<tbody>${rows.map((row) => html`<tr><th scope="row">${row.name}</th><td class="n">${row.median}</td><td class="n">${row.adverse}</td></tr>`)}</tbody></table></div></details>`;
}

function atHour(hour: JudgedHour, day: JudgedDay, reader: Reader): Html {
  const at = hourName(hour.validAt, day.timeZone);
  const differ = disagreement(hour.bySource);
  const winds = hour.wind === null || hour.wind.bySource.length === 0 ? null
    : html`<h3>Wind where the wing is launched, at ${at}</h3><ul>${hour.wind.bySource.map((wind) => html`<li>${windBySource(wind, reader)}</li>`)}</ul>`;
  return html`${differ === null ? null : html`<p class="differ">${differ}</p>`}${winds}${members(hour, at, reader)}`;
}

export function sourcesSection(day: JudgedDay, hour: JudgedHour | null, reader: Reader): Html {
  const votes = [...day.sources].sort((a, b) => (a.state === b.state ? 0 : a.state === 'no vote' ? -1 : 1));
  const groups = notJudgedGroups(day);
  return html`<section aria-labelledby="sources-h"><h2 id="sources-h">Sources and votes</h2><ul>${votes.map((vote) => html`<li>${voteSentence(vote, day)}</li>`)}</ul>
${hour === null ? null : atHour(hour, day, reader)}</section>
${groups.length === 0 ? null : html`<section aria-labelledby="not-h"><h2 id="not-h">Not judged</h2><ul>${groups.map((group) => html`<li>${notJudgedSentence(group)}</li>`)}</ul></section>`}`;
}
