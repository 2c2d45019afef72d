import { readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { chromium } from 'playwright-core';

/** Draws the icons again after worker/assets/icon.svg was changed: `node worker/local/icons.ts`. The drawings are kept in git. */
const assets = path.resolve(import.meta.dirname, '../assets');

/** One colour on nothing, for the bar of a phone: the column, its spare left open. */
const BADGE = '<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 32 32"><path fill="#fff" d="M9 2h14v16H9zM1 26h30v4H1z"/><path fill="none" stroke="#fff" stroke-width="3" d="M10.500 4v23M21.500 4v23"/></svg>';

const browser = await chromium.launch({ executablePath: process.env['CHROMIUM'] ?? '/usr/bin/chromium', args: ['--no-sandbox', '--disable-gpu'] });
const icon = readFileSync(path.join(assets, 'icon.svg'), 'utf8');
for (const { name, svg, size } of [{ name: 'icon-192', svg: icon, size: 192 }, { name: 'icon-512', svg: icon, size: 512 }, { name: 'badge', svg: BADGE, size: 96 }]) {
  const page = await browser.newPage({ viewport: { width: size, height: size } });
  await page.setContent(`<style>body { margin: 0 } svg { display: block; width: ${size}px; height: ${size}px }</style>${svg}`);
  writeFileSync(path.join(assets, `${name}.png`), await page.screenshot({ omitBackground: true }));
  await page.close();
}
await browser.close();
