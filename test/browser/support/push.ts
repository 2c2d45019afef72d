// A browser that is told by push without a push service: its address is one of the sink's, and what the sink got and
// decrypted is delivered to the page's own service worker through the DevTools protocol.
import type { Browser, BrowserContext, CDPSession, Page } from 'playwright-core';
import { expect } from 'vitest';

export interface Shown {
  readonly title: string;
  readonly body: string;
  readonly tag: string;
  readonly silent: boolean | null;
}

interface WorkerScope {
  readonly registration: ServiceWorkerRegistration;
  inLine<T>(work: () => Promise<T>): Promise<T>;
}

export interface ToldBrowser {
  readonly context: BrowserContext;
  readonly page: Page;
  deliver(data: unknown): Promise<void>;
  shown(): Promise<Shown[]>;
  /** Once the notifications that are there pass the check. */
  settled(check: (list: Shown[]) => void): Promise<void>;
}

/** A page with its service worker at work. `address`: what the browser gets when it asks its push service for one. */
export async function toldBrowser(browser: Browser, url: string, { width = 390, address }: { readonly width?: number; readonly address?: { readonly endpoint: string; readonly p256dh: string; readonly auth: string } } = {}): Promise<ToldBrowser> {
  const { origin } = new URL(url);
  const context = await browser.newContext({ viewport: { width, height: 844 }, reducedMotion: 'reduce' });
  await context.grantPermissions(['notifications'], { origin });
  const page = await context.newPage();
  if (address !== undefined) {
    await page.addInitScript(({ endpoint, p256dh, auth }) => {
      const given = { endpoint, toJSON: () => ({ endpoint, expirationTime: null, keys: { p256dh, auth } }) };
      PushManager.prototype.subscribe = () => Promise.resolve(given as unknown as PushSubscription);
    }, address);
  }
  const cdp: CDPSession = await context.newCDPSession(page);
  const seen: string[] = [];
  cdp.on('ServiceWorker.workerRegistrationUpdated', ({ registrations }) => seen.push(...registrations.map((registration) => registration.registrationId)));
  await page.goto(url);
  // What the page does by itself some seconds later.
  await page.evaluate(() => navigator.serviceWorker.register('/sw.js'));
  await cdp.send('ServiceWorker.enable');
  // Until it is activated in full, the browser drops what is delivered to it.
  await expect.poll(() => page.evaluate(async () => (await navigator.serviceWorker.ready).active?.state), { timeout: 20_000 }).toBe('activated');
  await expect.poll(() => seen.length, { timeout: 20_000 }).toBeGreaterThan(0);
  const [worker] = context.serviceWorkers();
  if (worker === undefined) throw new Error('the page has no service worker');
  // In the worker's own line: a list that is read while a notification is put up loses it (Chromium 156).
  const shown = (): Promise<Shown[]> => worker.evaluate(() => (globalThis as unknown as WorkerScope).inLine(
    async () => (await (globalThis as unknown as WorkerScope).registration.getNotifications()).map(({ title, body, tag, silent }) => ({ title, body, tag, silent })),
  ));
  return {
    context, page, shown,
    async deliver(data) {
      await cdp.send('ServiceWorker.deliverPushMessage', { origin: `${origin}/`, registrationId: seen[0] ?? '', data: typeof data === 'string' ? data : JSON.stringify(data) });
    },
    settled: (check) => expect.poll(async () => { try { check(await shown()); return 'as expected'; } catch (error) { return String(error); } }, { timeout: 20_000 }).toBe('as expected') as Promise<void>,
  };
}
