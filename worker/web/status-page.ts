/** How the service is, for whoever looks: each step's last success, what needs a look, how old the sources are. */
import { html, type Html } from './html.ts';
import { layout } from './layout.ts';

export interface Status {
  readonly status: string;
  readonly at: string;
  readonly warnings: readonly string[];
  readonly steps: Readonly<Record<string, { readonly lastAt: string | null }>>;
  readonly outbox: Readonly<Record<string, number>>;
  readonly sources: readonly { readonly source: string; readonly fetchedAt: string | null; readonly runAt: string | null }[];
}

function moment(iso: string | null): Html {
  return iso === null ? html`not yet` : html`<time datetime="${iso}">${iso.slice(0, 16).replace('T', ' ')} UTC</time>`;
}

export function statusPage(status: Status): string {
  const needs = status.warnings.length === 0 ? html`<p>Nothing needs a look.</p>` : html`<ul>${status.warnings.map((text) => html`<li>${text}</li>`)}</ul>`;
  return layout({
    title: status.warnings.length === 0 ? 'Status: working - Dawnmargin' : 'Status: needs a look - Dawnmargin', description: 'How this service is.', demo: false, credits: [], keep: '',
    body: html`<div class="top"><h1>Status: ${status.status}</h1></div><p>As of ${moment(status.at)}.</p>${needs}
<h2>Last success of each step</h2><table><tbody>${Object.entries(status.steps).map(([step, { lastAt }]) => html`<tr><th scope="row">${step}</th><td>${moment(lastAt)}</td></tr>`)}</tbody></table>
<h2>Messages</h2><table><tbody>${Object.entries(status.outbox).map(([state, count]) => html`<tr><th scope="row">${state}</th><td>${count}</td></tr>`)}</tbody></table>
<h2>Sources</h2><table><thead><tr><th scope="col">source</th><th scope="col">last answer</th><th scope="col">newest run</th></tr></thead><tbody>${status.sources.map(({ source, fetchedAt, runAt }) => html`<tr><th scope="row">${source}</th><td>${moment(fetchedAt)}</td><td>${moment(runAt)}</td></tr>`)}</tbody></table>`,
  });
}
