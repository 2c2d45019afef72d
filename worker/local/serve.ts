import { MINUTE_MS } from '../../lib/time.ts';
import type { Client } from './client.ts';

const LOOK_EVERY_MS = 5000;

/** What the platform does by itself elsewhere: calls the cron each minute. And what the terminal is for: prints each message. */
export async function keepServing(client: Client, fromLine: number): Promise<never> {
  let line = fromLine;
  let lastMinute = Math.floor(Date.now() / MINUTE_MS);
  for (;;) {
    await new Promise((resolve) => setTimeout(resolve, LOOK_EVERY_MS));
    try {
      const minute = Math.floor(Date.now() / MINUTE_MS);
      if (minute > lastMinute) {
        lastMinute = minute;
        await client.tick(minute * MINUTE_MS);
      }
      for (const message of await client.terminalAfter(line)) {
        line = message.line;
        console.log(`\n${message.title}\n\n${message.text}\nMessage ${message.messageId}.`);
      }
    } catch (error) {
      console.error(`the worker did not answer: ${error instanceof Error ? error.message : String(error)}`);
    }
  }
}
