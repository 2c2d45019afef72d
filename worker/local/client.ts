import type { JudgedDay } from '../../lib/brief/day.ts';
import type { Issue } from '../../lib/result.ts';
import type { Seed } from '../routes/seed.ts';
import type { TerminalMessage } from '../store/terminal.ts';

/** The start command's questions to the worker it has started. */
export interface Progress {
  readonly work: { readonly fetch: number; readonly assess: number; readonly failed: number };
  readonly outbox: Readonly<Record<'pending' | 'sent' | 'expired' | 'dead' | 'suppressed', number>>;
}

export interface Client {
  isUp(): Promise<boolean>;
  begin(): Promise<void>;
  seed(seed: Seed): Promise<readonly Issue[]>;
  morning(): Promise<void>;
  sweep(): Promise<void>;
  progress(): Promise<Progress>;
  terminalAfter(line: number): Promise<readonly TerminalMessage[]>;
  day(query: { readonly siteId: string; readonly date: string; readonly wing: string; readonly sheet: string }): Promise<JudgedDay>;
  /** What the platform's cron would do. */
  tick(nowMs: number): Promise<void>;
}

export function clientOf(origin: string, token: string): Client {
  async function ask(path: string, init: RequestInit = {}): Promise<Response> {
    const headers = { authorization: `Bearer ${token}`, ...(init.body === undefined ? {} : { 'content-type': 'application/json' }) };
    return fetch(`${origin}${path}`, { ...init, headers, signal: AbortSignal.timeout(30_000) });
  }
  async function answer<T>(path: string, init: RequestInit = {}): Promise<T> {
    const response = await ask(path, init);
    if (!response.ok) throw new Error(`${path.split('?')[0]} answered ${response.status}: ${(await response.text()).slice(0, 500)}`);
    return (await response.json()) as T;
  }
  return {
    async isUp() {
      try {
        const response = await fetch(`${origin}/healthz`, { signal: AbortSignal.timeout(2000) });
        await response.body?.cancel();
        return response.status === 200;
      } catch {
        return false;
      }
    },
    begin: async () => { await answer('/local/begin', { method: 'POST' }); },
    async seed(seed) {
      const response = await ask('/local/seed', { method: 'POST', body: JSON.stringify(seed) });
      const body = (await response.json()) as { readonly problems?: readonly Issue[]; readonly title?: string };
      if (response.ok) return [];
      return body.problems ?? [{ path: '$', value: '', problem: body.title ?? `answered ${response.status}`, allowed: '' }];
    },
    morning: async () => { await answer('/local/morning', { method: 'POST' }); },
    sweep: async () => { await answer('/local/sweep', { method: 'POST' }); },
    progress: () => answer<Progress>('/local/progress'),
    terminalAfter: (line) => answer<TerminalMessage[]>(`/local/terminal?after=${line}`),
    day: ({ siteId, date, wing, sheet }) => answer<JudgedDay>(`/api/v1/sites/${encodeURIComponent(siteId)}/days/${date}?${new URLSearchParams({ wing, sheet })}`),
    async tick(nowMs) {
      const response = await fetch(`${origin}/cdn-cgi/local/scheduled?cron=*+*+*+*+*&time=${nowMs}&format=json`, { signal: AbortSignal.timeout(60_000) });
      await response.body?.cancel();
    },
  };
}
