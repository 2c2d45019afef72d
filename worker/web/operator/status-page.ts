/** How the service is, in full: each step, source, breaker and message count, and the canaries that would say so first. */
import { capital, plainText } from '../../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from '../html.ts';
import type { Status } from '../status-page.ts';
import { leaf, operatorPage, type OperatorFrame } from './frame.ts';

export interface FullStatus extends Status {
  readonly work: Readonly<Record<string, number>>;
  readonly log: readonly { readonly at: string; readonly level: string; readonly step: string; readonly event: string; readonly detail: unknown }[];
}

export interface BreakerView {
  readonly name: string;
  readonly failures: number;
  readonly openUntil: string | null;
  readonly storedAt: string;
}

export interface StatusPage extends OperatorFrame {
  readonly status: FullStatus;
  readonly breakers: readonly BreakerView[];
  readonly canaries: readonly { readonly name: string; readonly last: string | null; readonly says: string }[];
}

function moment(iso: string | null): Html {
  return iso === null ? html`not yet` : html`<time datetime="${iso}">${iso.slice(0, 16).replace('T', ' ')} UTC</time>`;
}

function table(heads: readonly string[], rows: readonly (readonly Piece[])[], label: string): Html {
  if (rows.length === 0) return html`<p>None.</p>`;
  return html`<div class="scroll" tabindex="0" role="region" aria-label="${label}, as a table"><table><thead><tr>${heads.map((head) => html`<th scope="col">${head}</th>`)}</tr></thead><tbody>${rows.map(([first, ...rest]) => html`<tr><th scope="row">${first ?? null}</th>${rest.map((cell) => html`<td>${cell}</td>`)}</tr>`)}</tbody></table></div>`;
}

export function operatorStatusPage(page: StatusPage): string {
  const { status, breakers, canaries } = page;
  const needs = status.warnings.length === 0 ? html`<p class="day">Nothing needs a look.</p>` : html`<ul class="cautions">${status.warnings.map((text) => html`<li>${capital(text)}.</li>`)}</ul>`;
  return operatorPage(page, html`${needs}<p class="ages">As of ${moment(status.at)}.</p>
${leaf('canaries', 'Canaries', 'what would tell first', table(['Canary', 'Last', 'It says'], canaries.map(({ name, last, says }) => [name, moment(last), says]), 'Canaries'))}
${leaf('steps', 'Steps', 'last success of each', table(['Step', 'Last'], Object.entries(status.steps).map(([step, { lastAt }]) => [step, moment(lastAt)]), 'Steps'))}
${leaf('messages', 'Messages', 'created is the sum of the others', table(['State', 'Count'], Object.entries(status.outbox).map(([state, count]) => [state, count]), 'Messages'))}
${leaf('work', 'Work', 'still to do, and given up', table(['Kind', 'Count'], Object.entries(status.work).map(([kind, count]) => [kind.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`), count]), 'Work'))}
${leaf('sources', 'Sources', 'what they last gave', table(['Source', 'Last answer', 'Newest run'], status.sources.map(({ source, fetchedAt, runAt }) => [source, moment(fetchedAt), moment(runAt)]), 'Sources'))}
${leaf('breakers', 'Breakers', 'hosts that are left alone for a while', table(['Host', 'State', 'Failures of the last minute', 'Since'], breakers.map(({ name, failures, openUntil, storedAt }) => [plainText(name), openUntil === null ? 'closed: asked as usual' : html`open until ${moment(openUntil)}`, failures, moment(storedAt)]), 'Breakers'))}
${leaf('log', 'Log', 'the newest entries', table(['When', 'Step', 'What', 'Details'], status.log.map(({ at, step, event, detail }) => [moment(at), step, event, detail === null ? '' : plainText(JSON.stringify(detail), 160)]), 'Log'))}`);
}
