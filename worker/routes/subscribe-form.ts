/** The three steps of subscribing: each is sent to be looked at, and only the last one asks the API for a subscription. */
import type { Issue } from '../../lib/result.ts';
import { readSubscription } from '../security/subscribe.ts';
import type { DeskServices } from '../service-set.ts';
import { textIn, wishesJson } from '../web/forms/wishes.ts';
import { subscribePage, waysIn, type Step } from '../web/subscribe/subscribe-page.ts';
import { page } from './forms.ts';
import { sitesAndSheets } from './forms-data.ts';
import { seeOther, shown } from './page-answers.ts';
import { overRate, subscribe } from './subscriptions.ts';

/** What stands in the fields before anybody has typed. */
function begun(timeZone: string): FormData {
  const form = new FormData();
  for (const [name, value] of Object.entries({ wing: 'EN B', at: '05:30', zone: timeZone, speed: 'm/s', height: 'm', first: 'push' })) form.set(name, value);
  for (const day of ['mon', 'tue', 'wed', 'thu', 'fri', 'sat', 'sun']) form.append('day', day);
  return form;
}

export async function subscribeStart(services: DeskServices): Promise<string> {
  const known = await sitesAndSheets(services);
  return subscribePage({ ...known, step: 1, form: begun(known.sites[0]?.timeZone ?? 'Europe/Vienna'), problems: [], pushKey: services.settings.vapid?.publicKey ?? null });
}

/** The form as a request of the API. */
function requestOf(form: FormData): unknown {
  const channels = waysIn(form).map((kind) => {
    switch (kind) {
      case 'mail': return { kind, address: textIn(form, 'address') };
      case 'webhook': return { kind, url: textIn(form, 'hook') };
      case 'push': return { kind, endpoint: textIn(form, 'endpoint'), keys: { p256dh: textIn(form, 'p256dh'), auth: textIn(form, 'auth') } };
    }
  });
  return { ...wishesJson(form), channels };
}

/** The first step that something is wrong in. */
function firstOf(problems: readonly Issue[], isLookedAt: (step: Step) => boolean = () => true): Step | undefined {
  return ([1, 2, 3] as const).find((step) => isLookedAt(step) && problems.some((issue) => stepOf(issue) === step));
}

function stepOf({ path }: Issue): Step {
  return /^\$\.(sites|wing)/.test(path) ? 1 : /^\$\.(deliver|units|channels)/.test(path) ? 2 : 3;
}

const NO_WAY: Issue = { path: '$.channels', value: 'none', problem: 'there is no way to reach you', allowed: 'a mail address, this browser, or a webhook' };

export async function subscribeForm(services: DeskServices, form: FormData, request: Request): Promise<Response> {
  const asked = textIn(form, 'to');
  const wanted = asked === '1' || asked === '2' || asked === '3' ? (Number(asked) as Step) : 3;
  const known = await sitesAndSheets(services);
  const show = (step: Step, problems: readonly Issue[], status: number): Response => shown(subscribePage({ ...known, step, form, problems, pushKey: services.settings.vapid?.publicKey ?? null }), status);
  const read = await readSubscription(services, requestOf(form));
  const problems = (read.ok ? [] : read.error).map((issue) => (issue.path === '$.channels' && waysIn(form).length === 0 ? NO_WAY : issue));
  const isOver = asked === 'send';
  const held = firstOf(problems, (step) => isOver || step < wanted);
  if (held !== undefined) return show(held, problems.filter((issue) => stepOf(issue) === held), 400);
  return isOver ? send(services, form, request, show) : show(wanted, [], 200);
}

async function send(services: DeskServices, form: FormData, request: Request, show: (step: Step, problems: readonly Issue[], status: number) => Response): Promise<Response> {
  if ((await overRate(services, request)) > 0) return shown(page('Too many subscriptions today', 'Please try again tomorrow.'), 429);
  const response = await subscribe(services, requestOf(form), request);
  const answer = (await response.json()) as { readonly problems?: readonly Issue[]; readonly detail?: string; readonly links?: { readonly manage: string } };
  if (response.status === 202) return seeOther(answer.links === undefined ? '/subscribe/sent' : `${new URL(answer.links.manage).pathname}?said=welcome`);
  const problems = answer.problems ?? [{ path: '$', value: '', problem: answer.detail ?? 'this service takes no subscriptions at the moment', allowed: 'another try later' }];
  const step = firstOf(problems) ?? 3;
  return show(step, problems.filter((issue) => stepOf(issue) === step), response.status);
}
