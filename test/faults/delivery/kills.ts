// SIGKILL at moments of chance, again and again: subscribers are added, a morning is begun, and somewhere in it the process
// and its runtime are killed. Nothing may be lost, and what was in flight may come once more, under the same id.
import { rmSync, mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { startWebhookSink } from '../../support/sinks/webhook-sink.ts';
import { freePort } from '../../e2e/support/start.ts';
import type { Bundle } from './plant/bundle.ts';
import { seedOf } from './plant/seed.ts';
import { settle, startPlant, type Plant } from './plant/plant.ts';
import { seeded } from '../../support/seeded.ts';
import { oraclesOf, toldByWebhook, type Told, type WebhookData } from '../../support/oracles.ts';

export interface KillReport {
  readonly kills: number;
  readonly deliveries: number;
  readonly lost: number;
  /** Messages that came again under the same id. */
  readonly repeats: number;
  /** Subscribers who got two messages under different ids: what a person would see twice. */
  readonly shownTwice: number;
  readonly mostRepeatsOfAKill: number;
  /** What the six oracles say at the end. */
  readonly wrong: readonly string[];
}

export interface KillSetup {
  readonly bundle: Bundle;
  readonly kills: number;
  /** Of the moments of chance; the same seed kills at the same moments, as far as the machine is the same. */
  readonly seed: number;
  readonly perRound?: number;
  readonly report?: (line: string) => void;
}

export async function killAgainAndAgain({ bundle, kills, seed, perRound = 24, report = () => undefined }: KillSetup): Promise<KillReport> {
  const stateDir = mkdtempSync(path.join(tmpdir(), 'dawnmargin-kills-'));
  const sink = await startWebhookSink();
  const random = seeded(seed);
  sink.behave(() => ({ status: 204, afterMs: Math.floor(random() * 12) }));
  const wanted: string[] = [];
  let mostRepeatsOfAKill = 0;
  let repeatsBefore = 0;
  const startMs = Date.now();
  const port = await freePort();
  const begin = async (round: number): Promise<Plant> => {
    const plant = await startPlant({ bundle, stateDir, port });
    await plant.post('begin');
    const ids = Array.from({ length: perRound }, (_, index) => `r${round}-${index}`);
    await plant.post('seed', seedOf(ids.map((id) => ({ id, channels: [{ kind: 'webhook', target: { url: `${sink.origin}/${id}` } }] }))));
    wanted.push(...ids);
    return plant;
  };
  try {
    // An undisturbed round first: how long a morning takes on this machine is how far the moments of chance are spread.
    let plant = await begin(0);
    const begunMs = Date.now();
    await plant.post('morning');
    await settle(plant, 60_000);
    const morningMs = Date.now() - begunMs;
    await plant.kill();
    for (let kill = 1; kill <= kills; kill += 1) {
      plant = await begin(kill);
      const killAtMs = random() * morningMs;
      const killed = new Promise<void>((resolve) => { setTimeout(() => void plant.kill().then(resolve), killAtMs); });
      await Promise.race([plant.post('morning').catch(() => undefined), killed]);
      await killed;
      const repeats = repeatsIn(sink.received.map(({ id }) => id));
      mostRepeatsOfAKill = Math.max(mostRepeatsOfAKill, repeats - repeatsBefore);
      repeatsBefore = repeats;
      if (kill % 10 === 0) report(`${kill} kills, ${new Set(sink.received.map(({ id }) => id)).size} of ${wanted.length} delivered so far`);
    }
    plant = await startPlant({ bundle, stateDir, port });
    await plant.post('begin');
    await plant.post('morning');
    await settle(plant, 120_000);
    const told = sink.received.map(({ path: to, id, body, atMs }): Told => toldByWebhook({ url: to, id, atMs, taken: true }, (JSON.parse(body) as { readonly data: WebhookData }).data));
    const last = plant;
    const wrong = await oraclesOf({
      told,
      health: async () => (await fetch(`${last.origin}/healthz`)).json(),
      ask: async <Row>() => Object.entries((await last.progress()).outbox).flatMap(([state, n]) => (n === 0 ? [] : [{ state, n, unexplained: 0 } as Row])),
    }, {
      // What the first round, which nobody disturbed, was told: it is the same weather for all.
      dueIso: new Date(startMs).toISOString(), verdict: Object.fromEntries(wanted.map((id) => [id, told.find(({ name }) => name.startsWith('r0-'))?.verdicts ?? []])),
      told: Object.fromEntries(wanted.map((id) => [id, 5 + kills])), repeats: 6 * kills, books: { sent: wanted.length },
    });
    await plant.kill();
    const byPath = Map.groupBy(sink.received, (one) => one.path);
    const lost = wanted.filter((id) => !byPath.has(`/${id}`)).length;
    const shownTwice = [...byPath.values()].filter((received) => new Set(received.map(({ id }) => id)).size > 1).length;
    const repeats = repeatsIn(sink.received.map(({ id }) => id));
    return { kills, deliveries: sink.received.length, lost, repeats, shownTwice, mostRepeatsOfAKill: Math.max(mostRepeatsOfAKill, repeats - repeatsBefore), wrong };
  } finally {
    await sink.close();
    rmSync(stateDir, { recursive: true, force: true, maxRetries: 5 });
  }
}

function repeatsIn(ids: readonly string[]): number {
  return ids.length - new Set(ids).size;
}
