/** The page of a subscription, behind its secret link: what it is in words, and a form for each thing that can be changed. */
import { dateName } from '../../../lib/brief/words/index.ts';
import { isoUtc } from '../../../lib/time.ts';
import { problemWords } from '../form-fields.ts';
import { OWN_WING, siteRows, textIn, whenFields, wingFields, type WishesView } from '../forms/wishes.ts';
import { html, type Html, type Piece } from '../html.ts';
import { layout } from '../layout.ts';
import { act, channelsPart, hidden } from './channels.ts';
import type { ManageView } from './view.ts';
import { channelTitle, kindWords, momentIn, nextWords, orderWords, outcomeWords, wishWords } from './words.ts';

function leaf(id: string, title: string, aside: string, body: Piece): Html {
  return html`<section class="leaf" id="${id}" aria-labelledby="${id}-h"><div class="margin"><h2 id="${id}-h">${title}</h2><p class="aside">${aside}</p></div><div class="body">${body}</div></section>`;
}

/** What is kept, as the form would have sent it. */
function keptForm({ kept }: Pick<ManageView, 'kept'>): FormData {
  const form = new FormData();
  const seen = new Map<string, number>();
  for (const { id, sheet } of kept.sites) {
    const nth = seen.get(id) ?? 0;
    seen.set(id, nth + 1);
    const key = nth === 0 ? id : `${id}~${nth}`;
    form.append('site', key);
    form.set(`sheet.${key}`, sheet);
  }
  const { class: wingClass, trimMps, allUpMassKg } = kept.wing as { readonly class?: string; readonly trimMps?: number; readonly allUpMassKg?: number };
  form.set('wing', wingClass !== undefined && trimMps === undefined ? wingClass : OWN_WING);
  if (typeof allUpMassKg === 'number') form.set('mass', String(allUpMassKg));
  form.set('at', kept.deliver.at);
  form.set('zone', kept.deliver.timeZone);
  for (const day of kept.deliver.days) form.append('day', day);
  form.set('speed', kept.units.speed);
  form.set('height', kept.units.height);
  return form;
}

function wishesForm(view: ManageView): Html {
  const refused = view.refused?.action === 'change' ? view.refused : null;
  const isOwn = keptForm(view).get('wing') === OWN_WING;
  const wishes: WishesView = {
    sites: view.sites, sheets: view.sheets, form: refused?.form ?? keptForm(view), problems: refused?.problems ?? [], ...(isOwn ? { own: { wing: 'your own figures' } } : {}),
  };
  return html`<form class="steps" method="post" action="${view.path}#wishes">${hidden('action', 'change')}
<fieldset><legend>Where, and held to which sheet</legend>${siteRows(wishes)}</fieldset>
<fieldset><legend>Which wing</legend><div class="fields">${wingFields(wishes)}</div></fieldset>
<fieldset><legend>When, and in which units</legend>${whenFields(wishes)}</fieldset><button type="submit">Use these from the next brief on</button></form>`;
}

function plansPart(view: ManageView): Html {
  return html`<ul class="ways">${view.plans.map(({ id, localDate, path }) => html`<li class="way"><p><a href="${path}">Training day of ${dateName(localDate)}</a></p>${act(view, 'leave-plan', 'Say nothing of it', { fields: hidden('plan', id), about: `training day of ${dateName(localDate)}` })}</li>`)}</ul>`;
}

function pausePart(view: ManageView): Html {
  const { state, refused } = view;
  if (state === 'paused') return html`<p>${nextWords(view)}</p>${act(view, 'resume', 'Resume now')}`;
  const wrong = refused?.action === 'pause' ? refused : null;
  const said = wrong === null ? html`` : html` aria-describedby="until-wrong" aria-invalid="true"`;
  const field = html`<label>First brief again on (empty: until you resume) <input type="date" name="until" value="${wrong === null ? '' : textIn(wrong.form, 'until')}"${said}></label>`;
  return html`${act(view, 'pause', 'Pause', { fields: field })}${wrong === null ? null : html`<p class="wrong" id="until-wrong">${problemWords(wrong.problems)}</p>`}`;
}

function log(view: ManageView): Html {
  const { deliveries, channels, kept: { deliver: { timeZone } } } = view;
  if (deliveries.length === 0) return html`<p data-live="log">Nothing was sent in the last fourteen days.</p>`;
  const rows = deliveries.map((delivery) => {
    const channel = channels.find(({ id }) => id === delivery.channelId);
    return html`<tr><th scope="row"><time datetime="${isoUtc(delivery.createdAtMs)}">${momentIn(delivery.createdAtMs, timeZone)}</time></th><td>${kindWords(delivery)}${delivery.kind === 'test' ? null : ` of ${dateName(delivery.dueLocalDate, 'short')}`}</td><td>${channel === undefined ? 'a way that is gone' : `${channelTitle(channel)}, ${channel.to}`}</td><td>${outcomeWords(delivery, channel?.kind === 'push', timeZone)}</td></tr>`;
  });
  return html`<div class="scroll" tabindex="0" role="region" aria-label="What was sent" data-live="log"><table><thead><tr><th scope="col">Planned</th><th scope="col">What</th><th scope="col">Where to</th><th scope="col">What became of it</th></tr></thead><tbody>${rows}</tbody></table></div>`;
}

export function managePage(view: ManageView): string {
  const count = view.refused?.problems.length ?? 0;
  const body = html`<link rel="stylesheet" href="/desk.css"><script src="/desk.js" defer></script><div class="top"><h1>Your subscription</h1></div>
${count === 0 ? null : html`<p class="day" role="alert">Nothing was changed: ${count === 1 ? 'one entry' : `${count} entries`} cannot be used; what is wrong stands beside it.</p>`}${view.said === null ? null : html`<p class="said" role="status">${view.said}</p>`}
<div class="gist"><p class="day">${wishWords(view)}</p><p>${orderWords(view.channels)} ${nextWords(view)}</p></div>
${leaf('ways', 'Ways to reach you', 'in their order', channelsPart(view))}
${leaf('wishes', 'What you are told', 'sites, sheets, wing, hour, units', wishesForm(view))}
${view.plans.length === 0 ? null : leaf('plans', 'Training days', 'told of when a block turns', plansPart(view))}
${leaf('pause', 'Pause', view.state === 'paused' ? 'paused now' : 'not paused', pausePart(view))}
${leaf('log', 'What was sent', 'the last fourteen days', log(view))}
${leaf('links', 'Links', 'secret, like this page', html`<p><a href="${view.feed}">The same as a feed</a>, for a reader of your own. Whoever has seen your links can read and change what you read and change here: new ones end the old.</p>${act(view, 'renew-links', 'Make new links')}`)}
${leaf('leave', 'Leave', 'at once', html`<p>Everything that is kept about you is erased, and nothing comes any more.</p>${act(view, 'end', 'End the subscription')}`)}`;
  return layout({ title: `${count > 0 ? 'Not changed' : 'Your subscription'} - Dawnmargin`, description: 'What you are told, where and when.', demo: false, credits: [], keep: '', body });
}
