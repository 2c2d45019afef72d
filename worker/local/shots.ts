import { spawn, type ChildProcess } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { chromium, type Browser } from 'playwright-core';

/** npm run shots -- DIR: the demo's pages as pictures, for looking at before calling a page done. They never go into git. */
const WIDTHS = [390, 1280];
const THEMES = ['light', 'dark'] as const;
const START_WITHIN_MS = 90_000;

async function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen(0, '127.0.0.1', () => {
      const address = server.address();
      server.close(() => (address === null || typeof address === 'string' ? reject(new Error('no port')) : resolve(address.port)));
    });
  });
}

/** A demo of our own on a state of our own; resolves with its address once it serves. */
function startDemo(port: number, folder: string): { readonly child: ChildProcess; readonly origin: Promise<string> } {
  const child = spawn(process.execPath, [path.join(import.meta.dirname, 'start.ts')], {
    env: { ...process.env, PORT: String(port), STATE_DIR: path.join(folder, 'state') }, stdio: ['ignore', 'pipe', 'inherit'],
  });
  const origin = new Promise<string>((resolve, reject) => {
    let said = '';
    const late = setTimeout(() => reject(new Error(`the demo did not serve within ${START_WITHIN_MS / 1000} s`)), START_WITHIN_MS);
    child.stdout.on('data', (chunk: Buffer) => {
      said += chunk.toString('utf8');
      const found = /Pages at (\S+?)\/ until/.exec(said);
      if (found?.[1] === undefined) return;
      clearTimeout(late);
      resolve(found[1]);
    });
    child.once('exit', (code) => { clearTimeout(late); reject(new Error(`the demo ended with ${code}`)); });
  });
  return { child, origin };
}

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
    const ended = new Promise((resolve) => demo.child.once('exit', resolve));
    if (demo.child.exitCode === null && demo.child.kill('SIGTERM')) await ended;
    rmSync(folder, { recursive: true, force: true });
  }
}

await main();
