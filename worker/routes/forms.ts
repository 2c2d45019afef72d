/** Small pages of a subscription: a question with a button, its own page. They work without scripts. */
import { dateName, placeName } from '../../lib/brief/words/index.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Site } from '../../lib/site.ts';
import type { managed } from '../security/manage.ts';
import { html, type Html, type Piece } from '../web/html.ts';
import { layout } from '../web/layout.ts';

export function page(title: string, body: Piece): string {
  return layout({ title: `${title} - Dawnmargin`, description: title, demo: false, credits: [], keep: '', body: html`<div class="top"><h1>${title}</h1></div>${body}` });
}

/** A question and the button that answers it: looking at a page changes nothing. */
export function askPage(title: string, { text, button }: { readonly text: string; readonly button: string }): string {
  return page(title, html`<p class="day">${text}</p><form method="post"><input type="hidden" name="confirm" value="1"><button type="submit">${button}</button></form>`);
}

function select(name: string, label: string, options: readonly { readonly id: string; readonly name: string }[], chosen?: string): Html {
  return html`<label>${label} <select name="${name}">${options.map(({ id, name: text }) => html`<option value="${id}"${id === chosen ? html` selected` : null}>${text}</option>`)}</select></label>`;
}

function action(name: string, label: string, more: Piece = null): Html {
  return html`<form class="choose" method="post"><input type="hidden" name="action" value="${name}">${more}<button type="submit">${label}</button></form>`;
}

export interface ManageView {
  readonly kept: Awaited<ReturnType<typeof managed>>;
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  readonly feed: string;
  readonly said: readonly string[];
}

export function managePage({ kept, sites, sheets, feed, said }: ManageView): string {
  const { sites: wanted, pauseUntil: until, deliver: { at, timeZone, days } } = kept;
  const state = kept.state === 'active' ? `A brief comes at ${at} (${timeZone}) on ${days.length === 7 ? 'every day' : days.join(', ')}.` : until === null ? 'Paused: no brief comes.' : `Paused: the next brief comes on ${dateName(until)}.`;
  const rows = wanted.map(({ id, sheet }) => {
    const site = sites.find((known) => known.id === id);
    return html`<p>${select(`sheet:${id}`, site === undefined ? id : placeName(site), sheets.filter(({ kind }) => kind === (site?.kind ?? kind)), sheet)}</p>`;
  });
  return page('Your subscription', html`${said.map((text) => html`<p class="day"><strong>${text}</strong></p>`)}<p class="day">${state}</p>
<h2>Sites and limit sheets</h2>${action('change', 'Use these', rows)}
<h2>Channels</h2><ul>${kept.channels.map(({ kind, to, state: now }) => html`<li>${kind} to ${to}: ${now === 'active' ? 'in use' : now === 'dead' ? 'ended' : 'has not answered yet'}</li>`)}</ul>
${action('test', 'Send a test')}<p><a href="${feed}">The same as a feed</a>. Its address is secret like this one.</p>
<h2>Pause</h2>${kept.state === 'active' ? action('pause', 'Pause', html`<label>First brief again on (empty: until you resume) <input type="date" name="until"></label>`) : action('resume', 'Resume')}
<h2>Links</h2><p>If others have seen these links, new ones end the old.</p>${action('renew-links', 'Make new links')}
<h2>End</h2><p>Everything that is kept about you is erased at once.</p>${action('end', 'End the subscription')}`);
}
