/** The ways to reach a subscriber, in their order: a test of each, when it was last reached, its quiet hours, its place. */
import { inputField, problemWords } from '../form-fields.ts';
import { html, type Html, type Piece } from '../html.ts';
import { MOST_TYPED, textIn } from '../forms/wishes.ts';
import type { ChannelView, ManageView } from './view.ts';
import { channelTitle, outcomeWords, reachedWords } from './words.ts';

const TEST_TOLD_MS = 24 * 3_600_000;

export function hidden(name: string, value: string): Html {
  return html`<input type="hidden" name="${name}" value="${value}">`;
}

/** One button with what it is about. */
export function act(view: Pick<ManageView, 'path'>, action: string, label: string, more: { readonly channel?: string; readonly fields?: Piece; readonly about?: string } = {}): Html {
  const at = more.channel === undefined ? '' : `#${more.channel}`;
  return html`<form class="act" method="post" action="${view.path}${at}">${hidden('action', action)}${more.channel === undefined ? null : hidden('channel', more.channel)}${more.fields ?? null}<button type="submit"${more.about === undefined ? null : html` aria-label="${label}: ${more.about}"`}>${label}</button></form>`;
}

function minuteClock(minute: number): string {
  const two = (value: number): string => String(value).padStart(2, '0');
  return `${two(Math.floor(minute / 60))}:${two(minute % 60)}`;
}

function quietForm(channel: ChannelView, view: ManageView): Html {
  const refused = view.refused?.action === 'quiet' && view.refused.form.get('channel') === channel.id ? view.refused : null;
  const [from, to] = refused !== null ? [textIn(refused.form, 'from'), textIn(refused.form, 'to')]
    : channel.quietFrom === null || channel.quietTo === null ? ['', ''] : [minuteClock(channel.quietFrom), minuteClock(channel.quietTo)];
  const wrong = `${channel.id}-quiet-wrong`;
  const said = refused === null ? null : html` aria-describedby="${wrong}" aria-invalid="true"`;
  const fields = html`<label>Quiet from <input type="time" name="from" value="${from}"${said}></label><label>to <input type="time" name="to" value="${to}"${said}></label>`;
  return html`${act(view, 'quiet', 'Keep quiet then', { channel: channel.id, fields, about: channel.to })}${refused === null ? null : html`<p class="wrong" id="${wrong}">${problemWords(refused.problems)}</p>`}`;
}

function lastTest(channel: ChannelView, { deliveries, kept, nowMs }: ManageView): Piece {
  const test = deliveries.find(({ kind, channelId, createdAtMs }) => kind === 'test' && channelId === channel.id && createdAtMs > nowMs - TEST_TOLD_MS);
  if (test === undefined) return null;
  const isOpen = test.state === 'pending' || (test.state === 'sent' && channel.kind === 'push' && test.shownAtMs === null);
  return html`<p class="outcome"${isOpen ? html` data-open="1"` : null}>Last test: ${outcomeWords(test, channel.kind === 'push', kept.deliver.timeZone)}.</p>`;
}

function entry(channel: ChannelView, nth: number, view: ManageView): Html {
  const live = view.channels.filter(({ state }) => state !== 'dead').length;
  const about = `${channelTitle(channel)} ${channel.to}`;
  const isDead = channel.state === 'dead';
  return html`<li class="way" id="${channel.id}"><h3>${nth + 1}. ${channelTitle(channel)}, ${channel.to}</h3>
<div data-live="reached-${nth}"><p>${reachedWords(channel, { timeZone: view.kept.deliver.timeZone, nowMs: view.nowMs })}</p>${lastTest(channel, view)}</div>${secretLine(channel)}
<div class="acts">${isDead ? null : act(view, 'test', 'Send a test', { channel: channel.id, about })}${nth === 0 ? null : act(view, 'raise', 'Try this way earlier', { channel: channel.id, about })}${isDead || live > 1 ? act(view, 'remove', 'Take it away', { channel: channel.id, about }) : null}${secretAct(channel, view, about)}</div>
${isDead ? null : quietForm(channel, view)}</li>`;
}

/** The secret of a webhook that is being set up, or changes it. */
function secretLine({ secret, state, secretVersion, oldestSecretVersion }: ChannelView): Piece {
  if (secret === null || state === 'dead') return null;
  const until = state === 'unverified' ? 'it has answered' : oldestSecretVersion < secretVersion ? 'you give up the one before' : 'the one before ceases to sign beside it';
  return html`<p>Its secret, shown until ${until}: <code>${secret}</code>. <a href="/api/v1/openapi.json">What it is sent and has to answer</a> is written for programs.</p>`;
}

function secretAct(channel: ChannelView, view: ManageView, about: string): Piece {
  if (channel.kind !== 'webhook' || channel.state === 'dead') return null;
  return channel.oldestSecretVersion < channel.secretVersion
    ? act(view, 'old-secret', 'Give up the old secret', { channel: channel.id, about })
    : act(view, 'new-secret', 'Make a new secret', { channel: channel.id, about, fields: hidden('version', String(channel.secretVersion)) });
}

/** Shown by the script of the page where this browser can be told; without scripts nothing is offered that would not work. */
function addBrowser(view: ManageView): Piece {
  if (view.pushKey === null || isFull(view)) return null;
  return html`<form class="act" method="post" action="${view.path}" data-browser="${view.pushKey}" hidden>${hidden('action', 'add-browser')}${hidden('endpoint', '')}${hidden('p256dh', '')}${hidden('auth', '')}<button type="button">Tell this browser too</button><p class="hint" role="status"></p></form>`;
}

function isFull({ channels }: ManageView): boolean {
  return channels.length >= 4;
}

function addWebhook(view: ManageView): Piece {
  if (isFull(view)) return null;
  const refused = view.refused?.action === 'add-webhook' ? view.refused : null;
  const fields = inputField({
    name: 'hook', label: 'Webhook', value: refused === null ? '' : textIn(refused.form, 'hook'), problems: refused?.problems ?? [], hint: 'An https address of a program of yours that takes signed posts.',
  }, { type: 'url', mode: 'url', most: MOST_TYPED });
  return act(view, 'add-webhook', 'Tell this webhook too', { fields });
}

export function channelsPart(view: ManageView): Html {
  const refused = view.refused !== null && ['test', 'add-browser', 'remove', 'raise', 'new-secret', 'old-secret', ...(isFull(view) ? ['add-webhook'] : [])].includes(view.refused.action) ? view.refused : null;
  return html`${refused === null ? null : html`<p class="wrong">${problemWords(refused.problems)}</p>`}
<p class="hint">A message goes the first way; the next is taken when that has ended. A test goes now, and counts as shown only when the browser says so. Quiet hours hold a message back until they end, unless it is of no use by then; empty both to have none.</p>
<ol class="ways">${view.channels.map((channel, nth) => entry(channel, nth, view))}</ol>${addBrowser(view)}${addWebhook(view)}`;
}
