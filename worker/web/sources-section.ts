/** Who says so: every source with its vote, run and age, how they differ in the chosen hour, and what nobody judged. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { disagreement, notJudgedGroups, notJudgedSentence, voteSentence } from '../../lib/brief/words/index.ts';
import { html, type Html } from './html.ts';

export function sourcesSection(day: JudgedDay, hour: JudgedHour | null): Html {
  const votes = [...day.sources].sort((a, b) => (a.state === b.state ? 0 : a.state === 'no vote' ? -1 : 1));
  const differ = hour === null ? null : disagreement(hour.bySource);
  const groups = notJudgedGroups(day);
  return html`<section aria-labelledby="sources-h"><h2 id="sources-h">Sources and votes</h2>
${differ === null ? null : html`<p class="differ">${differ}</p>`}
<ul>${votes.map((vote) => html`<li>${voteSentence(vote, day)}</li>`)}</ul>
${groups.length === 0 ? null : html`<h2>Not judged</h2><ul>${groups.map((group) => html`<li>${notJudgedSentence(group)}</li>`)}</ul>`}</section>`;
}
