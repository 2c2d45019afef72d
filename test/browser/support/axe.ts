// axe in the page itself: put in once, and asked again for each theme. (Its wrapper for this driver opens a second page
// for every question, which takes longer than the question.)
import axe, { type AxeResults, type RunOptions } from 'axe-core';
import type { Page } from 'playwright-core';

/** What axe finds wrong, a line each. Only colours change with the theme: the dark one is asked for contrast alone. */
export async function axeFindings(page: Page, colorScheme: 'light' | 'dark'): Promise<string[]> {
  await page.emulateMedia({ colorScheme });
  if (!(await page.evaluate(() => 'axe' in globalThis))) await page.evaluate(axe.source);
  const options: RunOptions = { resultTypes: ['violations'], ...(colorScheme === 'dark' ? { runOnly: ['color-contrast'] } : { rules: { 'target-size': { enabled: true } } }) };
  const { violations, passes } = await page.evaluate((asked) => (globalThis as unknown as { axe: { run(of: Document, how: RunOptions): Promise<AxeResults> } }).axe.run(document, asked), options);
  if (passes.length === 0) throw new Error('axe looked at nothing');
  return violations.map(({ id, nodes }) => `${id} at ${page.viewportSize()?.width ?? 0} px, ${colorScheme}: ${nodes.map(({ html }) => html).join(' ')}`);
}
