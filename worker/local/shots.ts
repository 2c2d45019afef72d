import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { chromium, type Browser } from 'playwright-core';
import { freePort, startDemo } from './own-demo.ts';

/** npm run shots -- DIR: the demo's pages as pictures, for looking at before calling a page done. They never go into git. */
const WIDTHS = [390, 1280];
const THEMES = ['light', 'dark'] as const;

/** The board, the day of every site on it, and one "what if". */
async function pagePaths(origin: string): Promise<Map<string, string>> {
  const board = await (await fetch(`${origin}/`)).text();
  const sites = [...new Set([...board.matchAll(/href="(\/sites\/[^"?]+)/g)].map((match) => match[1] ?? ''))].filter((site) => site !== '');
  const first = sites[0];
  return new Map([
    ['board', '/'],
    ...sites.map((site) => [site.replace('/sites/', 'day-'), site] as const),
    ...(first === undefined ? [] : [['what-if', `${first}/what-if?wind=5&gust=8`] as const]),
  ]);
}

async function shoot(browser: Browser, page: { readonly url: string; readonly file: string; readonly width: number; readonly colorScheme: 'light' | 'dark' }): Promise<void> {
  const context = await browser.newContext({ viewport: { width: page.width, height: 900 }, colorScheme: page.colorScheme, deviceScaleFactor: page.width < 500 ? 2 : 1 });
  const tab = await context.newPage();
  await tab.goto(page.url);
  await tab.screenshot({ path: page.file, fullPage: true });
  await context.close();
}

async function main(): Promise<void> {
  const target = process.argv[2];
  if (target === undefined) throw new Error('say where the pictures shall go: npm run shots -- DIR');
  const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-shots-'));
  mkdirSync(target, { recursive: true });
  const demo = startDemo(await freePort(), folder);
  let browser: Browser | null = null;
  try {
    const origin = await demo.origin;
    browser = await chromium.launch({
      executablePath: process.env['CHROMIUM'] ?? '/usr/bin/chromium',
      args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
    });
    for (const [name, where] of await pagePaths(origin)) {
      for (const width of WIDTHS) {
        for (const colorScheme of THEMES) {
          const file = path.join(target, `${name}-${width}-${colorScheme}.png`);
          await shoot(browser, { url: origin + where, file, width, colorScheme });
          console.log(file);
        }
      }
    }
  } finally {
    await browser?.close();
    await demo.stop();
    rmSync(folder, { recursive: true, force: true });
  }
}

await main();
