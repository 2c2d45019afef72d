import { judgeDay } from '../lib/brief/judge-day.ts';
import { success, type Issue, type Result } from '../lib/result.ts';
import { mailChannel } from './channels/mail.ts';
import { bindingMailer } from './channels/mail-binding.ts';
import { smtpMailer } from './channels/mail-smtp.ts';
import { pushChannel } from './channels/push/push.ts';
import { storedQuarrels } from './channels/push/quarrels.ts';
import { vapid, type Authorize } from './channels/push/vapid.ts';
import { terminalChannel } from './channels/terminal.ts';
import { webhookChannel } from './channels/webhook.ts';
import { deskServices, worldOf, type World } from './desk-services.ts';
import { heart } from './morning/heartbeat.ts';
import { selfTester } from './morning/self-test.ts';
import { ownData } from './own-data.ts';
import type { Place, Services, Stores } from './service-set.ts';
import type { Mailer } from './security/mailer.ts';
import type { Env, Settings } from './settings.ts';
import { demoSources } from './sources/demo.ts';
import { liveSources } from './sources/order.ts';

/** The services of one invocation, or every setting that is wrong. */
export function createServices(env: Env): Result<Services, Issue[]> {
  const world = worldOf(env);
  return world.ok ? success(assemble({ ...world.value, mailer: mailerOf(world.value.settings, env) })) : world;
}

export function assemble(world: World, instead: Partial<Pick<Services, 'sourcesFor' | 'judge' | 'selfTest'>> = {}): Services {
  const desk = deskServices(world);
  return {
    ...desk,
    ...sourcesOf(world, desk.stores),
    ...sendersOf(world, desk.stores),
    // A stand-in for the judge stands in a test and not before subscribers: it is not asked what it knows.
    selfTest: instead.judge === undefined ? selfTester(judgeDay, ownData.thresholds) : () => [],
    heartbeat: heart(world.settings.heartbeatUrl, world.fetch),
    ...(instead.sourcesFor === undefined ? {} : { sourceNames: instead.sourcesFor, standBysFor: () => [] }),
    ...instead,
  };
}

/** Invented weather for the places of the demo, and for nobody else; in a rehearsal they are asked of stand-ins of the real services. */
function sourcesOf({ settings, fetch, clock }: World, stores: Stores): Pick<Services, 'sourcesFor' | 'standBysFor'> {
  const live = liveSources(ownData.sources(), settings, {
    fetch, now: clock.nowMs, local: settings.local, cache: stores.sourceCache, breakers: stores.breaker,
    report: ({ source, notice }) => console.warn(`${source}: ${notice}`),
  });
  const demo = demoSources(ownData.demo(), clock.nowMs);
  const isInvented = (place: Place): boolean => place.demo && !settings.rehearsal;
  return {
    sourcesFor: (place) => (isInvented(place) ? demo : live(place.site)),
    standBysFor: (place) => (isInvented(place) ? [] : live(place.site, 'standBy')),
  };
}

function mailerOf({ smtp, mailFrom }: Settings, env: Env): Mailer | null {
  if (mailFrom === null) return null;
  if (smtp !== null) return smtpMailer(smtp, mailFrom);
  return env.MAIL === undefined ? null : bindingMailer(env.MAIL, mailFrom);
}

function sendersOf({ settings, fetch, mailer = null }: World, stores: Stores): Pick<Services, 'channels' | 'mailer'> {
  const channels = {
    webhook: webhookChannel({ fetch, linkKey: settings.linkKey, linkKeyBefore: settings.linkKeyBefore, local: settings.local, publicUrl: settings.publicUrl }),
    push: pushChannel({ fetch, authorize: authorizer(settings, settings.vapid), before: authorizer(settings, settings.vapidBefore), local: settings.local, publicUrl: settings.publicUrl, quarrels: storedQuarrels(stores) }),
    ...(mailer === null ? {} : { mail: mailChannel({ mailer, linkKey: settings.linkKey, publicUrl: settings.publicUrl, mailFrom: settings.mailFrom ?? '' }) }),
    ...(settings.local ? { terminal: terminalChannel(stores.terminal) } : {}),
  };
  return { channels, mailer };
}

/** Kept for the life of an isolate: a token is signed once for each origin and hour. */
const authorizers = new Map<string, Authorize>();

function authorizer({ contact, publicUrl }: Settings, keys: Settings['vapid']): Authorize | null {
  if (keys === null) return null;
  const subject = contact === null ? publicUrl : contact.includes(':') ? contact : `mailto:${contact}`;
  const name = `${keys.publicKey} ${subject}`;
  const found = authorizers.get(name) ?? vapid(keys, subject);
  authorizers.set(name, found);
  return found;
}
