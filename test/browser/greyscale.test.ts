// Four hours that differ in nothing but their verdict, rendered and drained of colour: each pair must still look different.
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Verdict } from '../../lib/margin/ids.ts';
import { columnOf, dayOf } from '../support/days.ts';
import { fixturePages, fixtureServices } from '../support/page-fixtures.ts';
import { launch, open } from './support/chromium.ts';
import { serve, type Served } from './support/server.ts';

const VERDICTS: readonly Verdict[] = ['within', 'close', 'beyond', 'unknown'];

let browser: Browser;
let site: Served;

beforeAll(async () => {
  const plain = dayOf('wcbu', { siteId: 'four' });
  const day = { ...plain, hours: plain.hours.map((hour) => ({ ...hour, airspeed: columnOf(4) })) };
  [browser, site] = await Promise.all([launch(), serve(fixturePages(fixtureServices({ four: day })))]);
});

afterAll(async () => {
  await browser.close();
  await site.close();
});

/** Luminance of the pixels of a screenshot, read by a browser's own decoder. */
function decode(decoder: Page, png: string): Promise<number[]> {
  return decoder.evaluate(async (data) => {
    const image = new Image();
    image.src = `data:image/png;base64,${data}`;
    await image.decode();
    const context = new OffscreenCanvas(image.width, image.height).getContext('2d');
    if (context === null) throw new Error('no canvas');
    context.drawImage(image, 0, 0);
    const { data: pixels } = context.getImageData(0, 0, image.width, image.height);
    return Array.from({ length: pixels.length / 4 }, (_, at) => 0.2126 * (pixels[4 * at] ?? 0) + 0.7152 * (pixels[4 * at + 1] ?? 0) + 0.0722 * (pixels[4 * at + 2] ?? 0));
  }, png);
}

test.each([[390, 'light'], [1280, 'light'], [390, 'dark'], [1280, 'dark']] as const)('at %i px, %s', async (width, colorScheme) => {
  const watched = await open(browser, `${site.origin}/sites/four`, { width, colorScheme });
  // The page's own policy forbids images from data, rightly; the decoder gets a page without one.
  const decoder = await browser.newPage();
  const picture = await watched.page.locator('svg.columns').boundingBox();
  if (picture === null) throw new Error('no picture');
  const slot = picture.width / VERDICTS.length;
  const tiles: number[][] = [];
  for (const index of VERDICTS.keys()) {
    const clip = { x: Math.round(picture.x + index * slot), y: Math.round(picture.y), width: Math.floor(slot), height: Math.floor(picture.height) };
    const png = (await watched.page.screenshot({ clip, fullPage: true })).toString('base64');
    tiles.push(await decode(decoder, png));
  }
  for (const [a, left] of tiles.entries()) {
    for (const [b, right] of tiles.entries()) {
      if (a >= b) continue;
      const size = Math.min(left.length, right.length);
      let difference = 0;
      for (let at = 0; at < size; at += 1) difference += Math.abs((left[at] ?? 0) - (right[at] ?? 0));
      expect(difference / size, `${VERDICTS[a]} and ${VERDICTS[b]}`).toBeGreaterThan(3);
    }
  }
  const words = await watched.page.locator('.runs li').allInnerTexts();
  expect(new Set(words).size).toBe(4);
  await decoder.close();
  await watched.close();
});
