// npm run plan, as somebody types it: what fits, what does not, and what is no size of a house.
import { execFile } from 'node:child_process';
import path from 'node:path';
import { expect, test } from 'vitest';
import { root } from '../support/run-tool.ts';

interface Answer {
  readonly lines: readonly { readonly name: string; readonly need: number; readonly limit: number }[];
  readonly fits: boolean;
}

function plan(...args: readonly string[]): Promise<{ readonly code: number; readonly out: string; readonly said: string }> {
  return new Promise((resolve) => {
    const child = execFile(process.execPath, [path.join(root, 'worker/local/running-costs.ts'), ...args], (_, out, said) => resolve({ code: child.exitCode ?? -1, out, said }));
  });
}

test('a club of 20 sites and 500 subscribers fits the free plan on at least six lines', async () => {
  const { code, out } = await plan('--sites', '20', '--subscribers', '500', '--json');
  const answer = JSON.parse(out) as Answer;
  expect(code).toBe(0);
  expect(Object.keys(answer)).toEqual(['lines', 'fits']);
  expect(answer.fits).toBe(true);
  expect(answer.lines.length).toBeGreaterThanOrEqual(6);
  for (const line of answer.lines) {
    expect(Object.keys(line)).toEqual(['name', 'need', 'limit']);
    expect(line.need, line.name).toBeLessThanOrEqual(line.limit);
  }
});

test('a house of 5,000 sites and 100,000 subscribers is priced on the paid plan, and told what gives way first', async () => {
  const { code, out } = await plan('--sites', '5000', '--subscribers', '100000', '--on', 'paid');
  expect(code).toBe(1);
  expect(out).toMatch(/^in all +\d+\.\d\d USD$/m);
  expect(out).toMatch(/It does not fit: \d of \d lines are passed, first of all weight of forecast requests a day\./);
});

test('what does not fit ends with another code than what fits, in figures too', async () => {
  const { code, out } = await plan('--sites', '200', '--subscribers', '500', '--json');
  expect(code).toBe(1);
  expect((JSON.parse(out) as Answer).fits).toBe(false);
});

test.each([
  [['--sites', '0', '--subscribers', '5'], '--sites "0": a whole number, 1 to 9999999'],
  [['--sites', '-3', '--subscribers', '5'], '--sites "-3": a whole number, 1 to 9999999'],
  [['--sites', '20', '--subscribers', '2.5'], '--subscribers "2.5": a whole number, 0 to 9999999'],
  [['--sites', '99999999', '--subscribers', '5'], '--sites "99999999": a whole number, 1 to 9999999'],
  [['--sites', '20', '--subscribers', 'many'], '--subscribers "many": a whole number, 0 to 9999999'],
  [['--sites', '20'], '--sites and --subscribers are needed'],
  [['--sites', '--subscribers', '5'], '--sites needs a value'],
  [['--subscribers', '5', '--sites'], '--sites needs a value'],
  [['--sites', '20', '--sites', '30', '--subscribers', '5'], '--sites is given twice'],
  [['--sites', '20', '--subscribers', '5', '--cheap'], `Unknown option '--cheap'`],
  [['--sites', '20', '--subscribers', '5', '--own-wings', '6'], '--own-wings 6: at most one a subscriber, 5'],
  [['--sites', '20', '--subscribers', '5', '--on', 'gold'], '--on "gold": free or paid'],
])('%j is refused, with what would be right', async (args, problem) => {
  const { code, out, said } = await plan(...args);
  expect(code).toBe(2);
  expect(out).toBe('');
  expect(said.split('\n')[0]).toBe(problem);
  expect(said).toContain('npm run plan -- --sites N --subscribers M');
});
