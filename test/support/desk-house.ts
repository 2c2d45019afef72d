// A whole Dawnmargin behind a loopback port, in this process: real pages, real tables in memory, real pushes to a sink on
// this machine; messages leave as soon as somebody wakes the delivery. Cheap enough for a file of journeys to share one.
import './no-sockets.ts';
import { createHash, generateKeyPairSync, randomUUID } from 'node:crypto';
import sitesJson from '../../config/sites.json' with { type: 'json' };
import { jobFor, type Job, type Step } from '../../worker/morning/job.ts';
import { answerCalls } from '../../worker/morning/queue.ts';
import { app } from '../../worker/routes/app.ts';
import type { Letter } from '../../worker/security/mailer.ts';
import type { Services } from '../../worker/service-set.ts';
import { assemble } from '../../worker/services.ts';
import { readSettings } from '../../worker/settings.ts';
import { freePort } from '../../worker/local/own-demo.ts';
import { serve } from '../browser/support/server.ts';
import type { DeskHouse, HouseOptions } from '../browser/support/house.ts';
import { OPERATOR_TOKEN } from '../browser/support/house.ts';
import { startPushSink, type Pushed } from './sinks/push-sink.ts';
import { sqliteD1 } from './sqlite-d1.ts';

/** `sites`: those of the demo; else a blank database, but for its tables. */
export async function startHouse({ sites, secondToken }: HouseOptions): Promise<DeskHouse> {
  const [sink, port] = [await startPushSink(), await freePort()];
  const origin = `http://127.0.0.1:${port}`;
  const d1 = sqliteD1();
  const letters: Letter[] = [];
  const keys = generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey.export({ format: 'jwk' });
  const point = Buffer.concat([Buffer.from([4]), Buffer.from(keys.x ?? '', 'base64url'), Buffer.from(keys.y ?? '', 'base64url')]);
  const settings = readSettings({
    LOCAL: '1', LINK_KEY: 'a-link-key-for-tests-only-0123456789', PUBLIC_URL: origin, VAPID_PUBLIC_KEY: point.toString('base64url'), VAPID_PRIVATE_KEY: keys.d ?? '',
    OPERATOR_TOKEN_SHA256: createHash('sha256').update(OPERATOR_TOKEN).digest('hex'),
    ...(secondToken === undefined ? {} : { OPERATOR_SECOND_TOKEN_SHA256: createHash('sha256').update(secondToken).digest('hex') }),
  });
  if (!settings.ok) throw new Error(`settings of the house: ${JSON.stringify(settings.error)}`);
  const woken: Step[] = [];
  const queueOf = (step: Step): Pick<Queue<Job>, 'sendBatch'> => ({ sendBatch: async (messages) => { for (const _ of messages) woken.push(step); return undefined as never; } });
  const services = (): Services => assemble({
    settings: settings.value, db: d1, queues: { fetch: queueOf('fetch'), assess: queueOf('assess'), deliver: queueOf('deliver') },
    fetch: (url, init) => fetch(url, init), sleep: (ms) => new Promise((resolve) => setTimeout(resolve, ms)),
    clock: { nowMs: () => Date.now() }, ids: { next: () => randomUUID() }, random: () => 0.5,
    mailer: { local: true, send: (letter) => { letters.push(letter); return Promise.resolve({ state: 'sent' }); } },
  });
  const settle = async (): Promise<void> => {
    for (let step = woken.shift(); step !== undefined; step = woken.shift()) {
      // A delivery that was busy leaves sign-ups to the next call, which the tick of the next minute would make.
      for (const _ of step === 'deliver' ? [1, 2] : [1]) await answerCalls(services(), [{ id: randomUUID(), body: jobFor(step), attempts: 1, ack: () => undefined, retry: () => undefined }]);
    }
  };
  if (sites) {
    const { stores, shippedSheets } = services();
    const features = (sitesJson as { readonly features: readonly { readonly id: string }[] }).features;
    await stores.db.together([
      ...stores.site.replaceAll(features.map((feature) => ({ id: feature.id, feature: JSON.stringify(feature), demo: true })), Date.now()),
      stores.sheet.put(shippedSheets().map(({ id, version, limits, parameters, ...sheet }) => ({ id, version, body: JSON.stringify({ ...sheet, id, version, limits: { ...limits, ...parameters } }) })), Date.now()),
      stores.wing.put(['EN A', 'EN B', 'tandem'].map((key) => ({ key, name: key, body: JSON.stringify({ class: key }) }))),
    ]);
  }
  const site = await serve(app(services()), { port, after: settle });
  return {
    origin, letters, settle,
    sink: { pushed: sink.pushed, newBrowser: () => sink.newBrowser(), answer: (as) => sink.answer(as), decrypt: (pushed) => sink.decrypt(pushed as Pushed) },
    ask: (sql, ...values) => d1.ask(sql, ...values),
    async close() {
      await site.close();
      await sink.close();
      d1.close();
    },
  };
}
