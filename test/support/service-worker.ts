// A browser that runs our service worker, as far as pushes go: what its user sees of them at the end. The real thing runs
// in Chromium under test/browser.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { createContext, runInContext } from 'node:vm';
import { root } from './run-tool.ts';

interface Shown {
  readonly title: string;
  readonly body: string;
  readonly tag: string;
  readonly data: { readonly id: string | null; readonly issuedAt: string | null; readonly validUntil: string | null };
  readonly close: () => void;
}

const SOURCE = readFileSync(path.join(root, 'worker/assets/sw.js'), 'utf8');

export class PushedBrowser {
  nowMs: number;
  /** By tag: a notification of one takes the place of the one before. */
  readonly #shown = new Map<string, Shown>();
  readonly #listeners = new Map<string, (event: unknown) => void>();

  constructor(nowMs: number) {
    this.nowMs = nowMs;
    const kept = new Map<string, Response>();
    const cache = {
      match: async ({ url }: { url: string }) => kept.get(url)?.clone(),
      put: async ({ url }: { url: string }, response: Response) => { kept.set(url, response); },
      keys: async () => [...kept.keys()].map((url) => ({ url })),
      delete: async ({ url }: { url: string }) => kept.delete(url),
    };
    const now = (): number => this.nowMs;
    class HouseDate extends Date {
      static override now(): number { return now(); }
    }
    const self = {
      addEventListener: (type: string, listener: (event: unknown) => void) => { this.#listeners.set(type, listener); },
      clients: { matchAll: async () => [] },
      registration: {
        getNotifications: async () => [...this.#shown.values()],
        showNotification: async (title: string, options: Omit<Shown, 'title' | 'close'>) => { this.#shown.set(options.tag, { ...options, title, close: () => this.#shown.delete(options.tag) }); },
      },
    };
    const Request = class { readonly url: string; constructor(url: string) { this.url = url; } };
    runInContext(SOURCE, createContext({ self, caches: { open: async () => cache }, fetch: async () => new Response(null, { status: 204 }), Date: HouseDate, Request, Response, URL, Map }));
  }

  /** A push arrives, already decrypted. */
  async push(value: unknown): Promise<void> {
    let work: Promise<unknown> = Promise.resolve();
    this.#listeners.get('push')?.({ data: { json: () => value }, waitUntil: (promise: Promise<unknown>) => { work = promise; } });
    await work;
  }

  /** Its user puts away what is shown. */
  wipe(): void {
    this.#shown.clear();
  }

  sees(): { readonly title: string; readonly id: string | null }[] {
    return [...this.#shown.values()].map(({ title, data }) => ({ title, id: data.id }));
  }
}
