/** Subscribing in three steps, one form: what the other steps hold travels along unseen. It needs no script. */
import { CLOSING } from '../../../lib/brief/words/index.ts';
import { DEFAULT_SHEETS } from '../../../lib/config/subscription.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { Issue } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { inputField, problemsOf, problemWords } from '../form-fields.ts';
import { MOST_TYPED, siteRows, textIn, whenFields, wingFields, wishesJson, type WishesView } from '../forms/wishes.ts';
import { html, type Html, type Piece } from '../html.ts';
import { layout } from '../layout.ts';
import { wishWords } from '../manage/words.ts';

export type Step = 1 | 2 | 3;

export interface SubscribeView {
  readonly step: Step;
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  readonly form: FormData;
  /** Of the step that is shown. */
  readonly problems: readonly Issue[];
  /** Of VAPID; null where no push is sent. */
  readonly pushKey: string | null;
}

const STEPS = ['Where, and which wing', 'When, and how', 'Look over'] as const;

/** The fields of each step; what is of a site has its id behind the dot. */
const FIELDS: Readonly<Record<1 | 2, RegExp>> = {
  1: /^(?:site|sheet\..{1,80}|wing|mass)$/, 2: /^(?:at|zone|day|speed|height|address|hook|endpoint|p256dh|auth|first)$/,
};

/** The ways to reach somebody, each with the field that chooses it. */
const WAYS = { push: 'endpoint', mail: 'address', webhook: 'hook' } as const;
type Way = keyof typeof WAYS;
const KNOWN = Object.keys(WAYS) as Way[];

function firstIn(form: FormData): Way {
  return KNOWN.find((way) => way === textIn(form, 'first')) ?? 'push';
}

/** Those that are chosen, in the order in which they are taken. */
export function waysIn(form: FormData): Way[] {
  const first = firstIn(form);
  return [first, ...KNOWN.filter((way) => way !== first)].filter((way) => textIn(form, WAYS[way]) !== '');
}

/** What is wrong with one way; what is wrong with all of them stands at the mail address. */
function wrongIn({ form, problems }: SubscribeView, way: Way): Issue[] {
  const ways = waysIn(form);
  return problemsOf(problems, /^\$\.channels/).filter(({ path }) => (ways[Number(/\[(\d)\]/.exec(path)?.[1])] ?? 'mail') === way);
}

function carried({ form, step }: SubscribeView): Html[] {
  return [...form.entries()].flatMap(([name, value]) => {
    const isElsewhere = ([1, 2] as const).some((other) => other !== step && FIELDS[other].test(name));
    return typeof value === 'string' && isElsewhere ? [html`<input type="hidden" name="${name}" value="${value.slice(0, MOST_TYPED)}">`] : [];
  });
}

function to(step: Step | 'send', label: string, kind: 'next' | 'back' = 'next'): Html {
  return html`<button class="${kind}" name="to" value="${step}">${label}</button>`;
}

function where(view: SubscribeView): Html {
  const wishes: WishesView = view;
  return html`<fieldset><legend>Where, and held to which sheet</legend>${view.sites.length === 0 ? html`<p>No site is set up here yet: there is nothing to be told about.</p>` : siteRows(wishes)}</fieldset>
<fieldset><legend>Which wing</legend><div class="fields">${wingFields(wishes)}</div></fieldset><div class="turn">${to(2, 'On: when, and how')}</div>`;
}

function hiddenPush(form: FormData): Html[] {
  return ['endpoint', 'p256dh', 'auth'].map((name) => html`<input type="hidden" name="${name}" value="${textIn(form, name)}">`);
}

/** Seen with scripts only: a browser can be told by push only where they run. */
function browserPart(view: SubscribeView): Piece {
  const { pushKey, form } = view;
  if (pushKey === null) return null;
  const problems = wrongIn(view, 'push');
  const isChosen = textIn(form, 'endpoint') !== '';
  return html`<div class="browser" data-browser="${pushKey}"><p><strong>In this browser</strong></p>${hiddenPush(form)}<p class="hint" role="status">${isChosen ? 'This browser is chosen.' : 'A browser can be told where scripts run; without them, mail serves.'}</p><button type="button" hidden>Tell this browser</button>${problems.length === 0 ? null : html`<p class="wrong">${problemWords(problems)}</p>`}</div>`;
}

function when(view: SubscribeView): Html {
  const { form, pushKey } = view;
  const first = firstIn(form);
  const option = (way: Way, label: string): Html => html`<label class="pick"><input type="radio" name="first" value="${way}"${way === first ? html` checked` : null}> <span>${label}</span></label>`;
  return html`<fieldset><legend>When, and in which units</legend>${whenFields(view)}</fieldset>
<fieldset><legend>How you are reached</legend><div class="fields">${inputField({
    name: 'address', label: 'Mail address', value: textIn(form, 'address'), problems: wrongIn(view, 'mail'), hint: 'Nothing is sent before you confirm it by the link of a mail. Each brief has a link that ends it.',
  }, { type: 'email', complete: 'email' })}${browserPart(view)}${inputField({
    name: 'hook', label: 'Webhook', value: textIn(form, 'hook'), problems: wrongIn(view, 'webhook'), hint: 'For a program of yours: an https address that takes signed posts. It echoes a challenge before its first brief.',
  }, { type: 'url', mode: 'url', most: MOST_TYPED })}</div>
<div class="first" role="radiogroup" aria-labelledby="first-l"><p id="first-l">Where more than one is chosen, the others are taken when it has ended</p>${pushKey === null ? null : option('push', 'the browser first')}${option('mail', 'mail first')}${option('webhook', 'the webhook first')}</div></fieldset>
<div class="turn">${to(3, 'On: look over')}${to(1, 'Back', 'back')}</div>`;
}

function wayWords(form: FormData, way: Way): string {
  const typed = textIn(form, WAYS[way]);
  return way === 'push' ? 'this browser' : way === 'mail' ? `mail to ${typed}` : `a webhook at ${new URL(typed).host}`;
}

/** What happens before the first brief. */
function nextStep(ways: readonly Way[]): string {
  if (ways.includes('mail')) return 'A mail with a link goes to that address. Nothing else is sent before you press the button behind that link, and nothing is kept after 48 hours if you do not.';
  const asked = ways.includes('push') ? 'This browser is asked once whether it wants to be told; it answers by itself. ' : '';
  const challenged = ways.includes('webhook') ? 'The page that comes next shows the secret of the webhook, and its test button sends the challenge. ' : '';
  return `${asked}${challenged}${challenged === '' ? 'The page that comes next' : 'It'} is the only way to change or end this: keep its address.`;
}

function review(view: SubscribeView): Html {
  const { form, sites, sheets } = view;
  const { sites: wanted, wing, deliver, units } = wishesJson(form);
  const kept = {
    wing, deliver, units: units as { speed: 'm/s'; height: 'm' }, pauseUntil: null,
    sites: wanted.map(({ id, sheet }) => ({ id, sheet: sheet ?? DEFAULT_SHEETS[sites.find((site) => site.id === id)?.kind ?? 'launch'] })),
  };
  const ways = waysIn(form);
  const [one, ...others] = ways.map((way) => wayWords(form, way));
  return html`<div class="gist"><p class="day">${wishWords({ kept, sites, sheets })}</p><p>By ${[one ?? 'nothing', ...others.map((words) => `when that has ended, by ${words}`)].join('; ')}.</p></div>
<p>${nextStep(ways)}</p>
<p>What you typed is kept for your brief alone, and goes when you leave.</p>
<div class="turn">${to('send', 'Subscribe')}${to(2, 'Back', 'back')}</div>`;
}

export function subscribePage(view: SubscribeView): string {
  const { step, problems } = view;
  const count = problems.length === 1 ? 'One entry' : `${problems.length} entries`;
  const elsewhere = step === 3 ? problems : [];
  const stepBody = step === 1 ? where(view) : step === 2 ? when(view) : review(view);
  // The first button of a form is what the return key presses.
  const body = html`<link rel="stylesheet" href="/desk.css"><script src="/desk.js" defer></script><div class="top"><h1>The brief, every morning</h1><p class="lede">Three steps, no account.</p></div>
<ol class="steps-line">${STEPS.map((name, index) => html`<li${index + 1 === step ? html` aria-current="step"` : null}>${name}</li>`)}</ol>
${problems.length === 0 ? null : html`<p class="day" role="alert">${count} cannot be used yet; what is wrong stands beside each.</p>`}${elsewhere.length === 0 ? null : html`<p class="wrong">${problemWords(elsewhere)}</p>`}
<form class="steps" method="post" action="/subscribe" novalidate>${carried(view)}${stepBody}</form>`;
  return layout({
    title: `${problems.length === 0 ? `Subscribe, step ${step} of 3` : `${count} cannot be used yet`} - Dawnmargin`, demo: false, credits: [], keep: '', body,
    description: `Subscribe to the morning margin brief for your launches and strips. ${CLOSING}`,
  });
}
