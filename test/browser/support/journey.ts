// What every journey through a form is held to, and the four looks in which it is made.
import type { Page } from 'playwright-core';
import { expect } from 'vitest';
import { axeFindings } from './axe.ts';

/** Scripts on and off, on a phone and at a desk. */
export const LOOKS = [
  { width: 390, scripts: true }, { width: 390, scripts: false }, { width: 1280, scripts: true }, { width: 1280, scripts: false },
] as const;

export const lookName = ({ width, scripts }: (typeof LOOKS)[number]): string => `${width} px, scripts ${scripts ? 'on' : 'off'}`;

/** No word that permits, nothing wider than the screen; on the phone axe finds nothing in either theme (at a desk the markup is the same). */
export async function expectInOrder(page: Page, { scripts }: { readonly scripts: boolean }): Promise<void> {
  expect(await page.locator('body').innerText()).not.toMatch(/\b(safe|go|ok|okay|fly|flyable|no-go)\b/i);
  const width = page.viewportSize()?.width ?? 0;
  if (!scripts) return;
  expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(width);
  for (const colorScheme of width < 500 ? (['dark', 'light'] as const) : []) expect(await axeFindings(page, colorScheme)).toEqual([]);
}

/** Every control can be reached by the tab key and is seen to have the focus. */
export async function expectKeyboard(page: Page): Promise<void> {
  const controls = await page.locator('main :is(a, button, input:not([type=hidden]), select, summary, textarea):visible').count();
  await page.evaluate(() => { (document.activeElement as HTMLElement | null)?.blur(); window.scrollTo(0, 0); });
  const seen = new Set<string>();
  for (let step = 0; step < controls + 40; step += 1) {
    await page.keyboard.press('Tab');
    const at = await page.evaluate(() => {
      const { activeElement: element } = document;
      if (element === null || element.closest('main') === null) return null;
      const index = [...document.querySelectorAll('main *')].indexOf(element);
      return { index, outline: getComputedStyle(element).outlineStyle, markup: element.outerHTML.slice(0, 200) };
    });
    if (at === null) continue;
    expect(at.outline, `the focus is seen on ${at.markup}`).not.toBe('none');
    seen.add(String(at.index));
  }
  // A group of radio buttons is one stop, a time or date field several: fewer than all may be stops of their own.
  const groups = await page.evaluate(() => [...document.querySelectorAll<HTMLInputElement>('main input[type=radio]')].length);
  expect(seen.size).toBeGreaterThanOrEqual(controls - groups);
}
