// The real browser, quiet and offline but for loopback, and one page in it that notes everything it loads or complains of.
import { chromium, type Browser, type Page } from 'playwright-core';

export function launch(): Promise<Browser> {
  return chromium.launch({
    executablePath: process.env['CHROMIUM'] ?? '/usr/bin/chromium',
    args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
  });
}

export interface Look {
  readonly width: number;
  readonly colorScheme?: 'light' | 'dark';
  readonly scripts?: boolean;
}

export interface Watched {
  readonly page: Page;
  readonly requests: string[];
  readonly complaints: string[];
  close(): Promise<void>;
}

export async function open(browser: Browser, url: string, look: Look): Promise<Watched> {
  const context = await browser.newContext({
    viewport: { width: look.width, height: look.width < 500 ? 844 : 900 }, colorScheme: look.colorScheme ?? 'light', javaScriptEnabled: look.scripts ?? true,
    reducedMotion: 'reduce',
  });
  const page = await context.newPage();
  const requests: string[] = [];
  const complaints: string[] = [];
  page.on('request', (request) => requests.push(request.url()));
  page.on('console', (message) => { if (message.type() === 'error' || message.type() === 'warning') complaints.push(message.text()); });
  page.on('pageerror', (error) => complaints.push(error.message));
  page.on('dialog', (dialog) => { complaints.push(`dialog: ${dialog.message()}`); void dialog.dismiss(); });
  await page.goto(url);
  return { page, requests, complaints, close: () => context.close() };
}
