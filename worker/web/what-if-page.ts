/** The answer to "what if": one hour judged with the visitor's numbers, and the form to ask again. */
import type { CombinedMargin, JudgedDay } from '../../lib/brief/day.ts';
import { tightestFirst } from '../../lib/brief/tightest.ts';
import { capital, causeClause, dateName, EXPIRED, hourName, INVENTED, placeName, plainText, sentence, sourceName, verdictPhrase, votePhrase } from '../../lib/brief/words/index.ts';
import { creditsOf, isExpired } from './board.ts';
import { html, type Html } from './html.ts';
import { layout } from './layout.ts';
import { marginsList } from './margins-list.ts';
import type { WhatIf } from './page-services.ts';
import { whatIfForm, type WhatIfFormOptions } from './what-if-form.ts';
import { address, unitsPart } from './units-query.ts';

const MOST_CAUSES = 4;

export interface WhatIfPageOptions extends WhatIfFormOptions {
  readonly now: Date;
}

function answer(day: JudgedDay, answered: Extract<WhatIf, { kind: 'judged' }>, options: WhatIfPageOptions): Html {
  const { reader, hour: validAt } = options;
  const { hour, source } = answered;
  const margins = hour.margins.map((margin): CombinedMargin => ({ ...margin, source }));
  const causes = tightestFirst(margins.filter(({ id, status }) => status === hour.verdict && hour.causes.includes(id))).slice(0, MOST_CAUSES);
  const vote = day.sources.find((candidate) => candidate.source === source);
  const detail = { workings: hour.margins.map(({ id, working }) => ({ id, terms: working })), sun: null, given: null, glide: null, ladder: null, tow: null };
  return html`<div data-valid-until="${day.validUntil}" data-issued-at="${day.issuedAt}"><p class="day">${day.demo ? html`<span class="tag">${INVENTED}.</span> ` : null}${capital(verdictPhrase(hour.verdict))} at ${hourName(validAt, day.timeZone)}, with your numbers. ${causes.map((margin) => `${sentence(causeClause(margin, reader))} `)}</p>
<p class="ages">Your numbers where you gave them, ${vote === undefined ? sourceName(source) : votePhrase(vote)} where you did not; one source only, nothing stored, winds higher up changed as much as the wind at 10 m.</p>
<section><h2>Margins, tightest first</h2><p class="hint">Open a margin for its working.</p>${marginsList({ ...emptyHour(validAt), verdict: hour.verdict, causes: hour.causes, margins }, detail, reader)}</section></div>`;
}

function emptyHour(validAt: string): JudgedDay['hours'][number] {
  return { validAt, verdict: 'unknown', causes: [], margins: [], bySource: [], airspeed: null, speedToFlyMps: null, wind: null, ensemble: null, heading: null };
}

export function whatIfPage(day: JudgedDay, answered: WhatIf, options: WhatIfPageOptions): string {
  const { reader, hour } = options;
  const name = placeName({ name: day.siteName, id: day.siteId });
  const back = address(`/sites/${encodeURIComponent(day.siteId)}`, { date: day.localDate, wing: day.wingKey, sheet: day.sheetId, hour, ...unitsPart(reader.units) }, '#hour');
  const expired = isExpired(day, options.now);
  const said = expired ? html`<p class="day">${EXPIRED}</p>` : answered.kind === 'judged' ? answer(day, answered, options)
    : html`<p class="day">This cannot be judged.</p><ul class="cautions">${answered.problems.map((problem) => html`<li>${problem}</li>`)}</ul>`;
  const verdict = expired ? 'Expired' : answered.kind === 'judged' ? capital(verdictPhrase(answered.hour.verdict)) : 'Cannot be judged';
  return layout({
    title: `${day.demo ? `${INVENTED}: ` : ''}${verdict} with own numbers, ${name} - Dawnmargin`, description: `What if: one hour at ${name} judged with own numbers.`,
    body: html`<article class="site"><div class="margin"><h1>${name}</h1><p class="aside"><span>${dateName(day.localDate)}</span> <span>What if</span> <span>${plainText(day.wingName)}</span> <span>${plainText(day.sheetName)}</span></p></div>
<div class="body">${said}<section aria-labelledby="if-h"><h2 id="if-h">What if</h2>${whatIfForm(day, options)}</section><p class="back"><a href="${back}">Back to the day</a></p></div></article>`,
    demo: day.demo, credits: creditsOf([day]), keep: address('', unitsPart(reader.units)),
  });
}
