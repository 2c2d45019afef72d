// The house of test/support/desk-house.ts as a browser test knows it: what only the worker knows stays there.

/** The push service of test/support/sinks/push-sink.ts; `decrypt` gives what the browser reads, by http_ece. */
interface Sink {
  readonly pushed: readonly { readonly path: string }[];
  newBrowser(): { readonly target: { readonly endpoint: string; readonly p256dh: string; readonly auth: string } };
  answer(as: (pushed: { readonly path: string }) => { readonly status: number }): void;
  decrypt(pushed: { readonly path: string }): unknown;
}

export const OPERATOR_TOKEN = 'an-operator-token-for-tests-only-0123456789';

export interface DeskHouse {
  readonly origin: string;
  readonly sink: Sink;
  readonly letters: readonly { readonly to: string; readonly text: string }[];
  /** Rows of a test's own question. */
  ask<Row>(sql: string, ...values: (string | number | null)[]): Row[];
  /** Does everything that somebody was woken for, until nobody is. */
  settle(): Promise<void>;
  close(): Promise<void>;
}

export interface HouseOptions {
  /** Those of the demo; else a blank database, but for its tables. */
  readonly sites: boolean;
  /** Of whoever holds the second key, where there is one. */
  readonly secondToken?: string;
}

interface HouseModule {
  startHouse(options: HouseOptions): Promise<DeskHouse>;
}

export async function startHouse(options: HouseOptions): Promise<DeskHouse> {
  const house = (await import(new URL('../../support/desk-house.ts', import.meta.url).pathname)) as HouseModule;
  return house.startHouse(options);
}
