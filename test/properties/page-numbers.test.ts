// Every number on a day page equals the number of the API for the same query: a walk over all demo sites, wings, sheets
// and hours. The API's answer is the judged day as JSON; the page is read back as a reader would, from its markup.
import { expect, test } from 'vitest';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import type { CombinedMargin, JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { SI_UNITS } from '../../lib/brief/units-out.ts';
import { marginName, verdictPhrase } from '../../lib/brief/words/index.ts';
import { dayPage } from '../../worker/web/day-page.ts';
import { hourDetail } from '../../worker/web/hour-detail.ts';
import { DEMO_SITES, demoInput, SHEETS, WING_CLASSES } from '../support/demo-days.ts';

const reader = { units: SI_UNITS };

function text(markup: string): string {
  return markup.replace(/<[^>]*>/g, ' ').replaceAll('&#39;', "'").replaceAll('&quot;', '"').replaceAll('&lt;', '<').replaceAll('&gt;', '>').replaceAll('&amp;', '&').replace(/\s+/g, ' ').trim();
}

/** A number as written, and the size of its last digit. */
function numberIn(written: string): { readonly value: number; readonly step: number } | null {
  const match = /\u2212?\d+(?:\.(\d+))?/.exec(written);
  if (match === null) return null;
  return { value: Number(match[0].replace('\u2212', '-')), step: 10 ** -(match[1]?.length ?? 0) };
}

/** The number is the API's, to its last digit, and a spare is never more than it. */
function expectSame(written: string, api: number, what: string, asSpare = false): void {
  const found = numberIn(written);
  expect(found, `${what}: "${written}" for ${api}`).not.toBeNull();
  if (found === null) return;
  expect(Math.abs(found.value - api), `${what}: "${written}" for ${api}`).toBeLessThanOrEqual((asSpare ? 1 : 0.5) * found.step + 1e-7);
  if (asSpare) expect(found.value, `${what}: "${written}" for ${api}`).toBeLessThanOrEqual(api + 1e-7);
}

let compared = 0;

function checkMargin(margin: CombinedMargin, item: string): void {
  const left = text(/<span class="left">(.*?)<\/span>/s.exec(item)?.[1] ?? '');
  if (margin.status === 'unknown') expect(left).toMatch(/^not known/);
  else if (margin.spare === null) expect(left).toBe('none: no solution');
  else if (left !== 'no thunderstorm signalled') {
    expect(left.endsWith(margin.spare < 0 ? 'short' : 'to spare'), `${margin.id}: ${left}`).toBe(true);
    const scale = margin.unit === 'share' ? 100 : 1;
    const found = numberIn(left);
    const spare = (found?.value ?? NaN) * (margin.spare < 0 ? -1 : 1);
    expectSame(`${spare.toFixed(-Math.log10(found?.step ?? 1)).replace('-', '\u2212')}`, margin.spare * scale, `${margin.id} spare`, true);
  }
  compared += 1;
  // The working adds up to the spare again, by hand.
  const rows = [...item.matchAll(/<p><span>(.*?)<\/span> ([^,]*), /gs)];
  if (rows.length === 0 || margin.spare === null) return;
  const sum = rows.filter((row) => text(row[2] ?? '') === margin.unit).reduce((total, row) => total + (numberIn(row[1] ?? '')?.value ?? NaN), 0);
  expect(Math.abs(sum - margin.spare), `${margin.id}: the working gives ${sum}, the API ${margin.spare}`).toBeLessThanOrEqual(0.0005 * (rows.length + 1));
  compared += rows.length;
}

function checkColumns(day: JudgedDay, page: string): void {
  const table = /<details class="numbers">.*?<\/details>/s.exec(page)?.[0] ?? '';
  const rows = [...table.matchAll(/<tr><th scope="row">(.*?)<\/tr>/gs)].map((row) => row[1] ?? '');
  expect(rows).toHaveLength(day.hours.length);
  day.hours.forEach((hour, index) => {
    const row = rows[index] ?? '';
    expect(text(row)).toContain(verdictPhrase(hour.verdict));
    const cells = [...row.matchAll(/<td class="n">(.*?)<\/td>/g)].map((cell) => cell[1] ?? '');
    const column = hour.airspeed;
    if (column === null) return expect(text(row)).toContain('not known');
    const api = [column.trimMps, column.headMps, column.crabMps, column.gustMps, column.reserveMps];
    api.forEach((value, cell) => expectSame(cells[cell] ?? '', value, `column at ${hour.validAt}`));
    if (column.spareMps === null) expect(cells[5]).toBe('none');
    else expectSame(cells[5] ?? '', column.spareMps, `spare at ${hour.validAt}`, true);
    compared += 6;
    return undefined;
  });
}

function checkHour(day: JudgedDay, hour: JudgedHour, page: string): void {
  const list = /<ol class="margins">(.*?)<\/ol>/s.exec(page)?.[1] ?? '';
  const items = new Map([...list.matchAll(/<li>(.*?)<\/li>/gs)].map((item) => [text(/<span class="what">(.*?)<\/span>/s.exec(item[1] ?? '')?.[1] ?? ''), item[1] ?? '']));
  expect(items.size).toBe(hour.margins.length);
  for (const margin of hour.margins) checkMargin(margin, items.get(marginName(margin.id)) ?? '');
  expect(text(/<h2 id="hour-h">(.*?)<\/h2>/.exec(page)?.[1] ?? '').toLowerCase()).toContain(verdictPhrase(hour.verdict));
}

test.each(DEMO_SITES.map((site) => [site.id, site] as const))('%s', async (_, site) => {
  for (const wing of WING_CLASSES) {
    for (const sheet of SHEETS.filter(({ kind }) => kind === site.kind)) {
      const input = await demoInput(site, { wing, sheet, date: '2027-05-14' });
      const day = JSON.parse(JSON.stringify(judgeDay(input))) as JudgedDay;
      const detail = hourDetail(input);
      const options = { reader, now: new Date(day.issuedAt), detail, choices: { wings: [], sheets: [] } };
      if (day.hours.length > 0) checkColumns(day, dayPage(day, { ...options, hour: null }));
      for (const hour of day.hours) checkHour(day, hour, dayPage(day, { ...options, hour: hour.validAt }));
    }
  }
  expect(compared).toBeGreaterThan(100);
}, 120_000);
