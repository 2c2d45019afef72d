// DEVELOPERS.md, "Add a margin", followed on a copy: the compiler asks where the recipe says that it does, and with each
// step taken a day is judged by the new margin like by any other.
import { execFileSync, spawnSync } from 'node:child_process';
import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { root, toolEntry } from '../../support/run-tool.ts';

let copy: string;
beforeAll(() => {
  mkdirSync(path.join(root, '.data'), { recursive: true });
  copy = mkdtempSync(path.join(root, '.data/recipe-'));
  for (const folder of ['lib', 'config']) cpSync(path.join(root, folder), path.join(copy, folder), { recursive: true });
  cpSync(path.join(root, 'test/bench/days.ts'), path.join(copy, 'test/bench/days.ts'));
});
afterAll(() => rmSync(copy, { recursive: true, force: true }));

function edit(file: string, before: string, after: string): void {
  const at = path.join(copy, file);
  const text = readFileSync(at, 'utf8');
  if (!text.includes(before)) throw new Error(`${file} has no ${before}`);
  writeFileSync(at, text.replace(before, after));
}

/** The files in which the compiler finds something, each once. */
function complaints(): string[] {
  const { stdout } = spawnSync(process.execPath, [toolEntry('typescript', 'tsc'), '-p', path.join(copy, 'lib')], { encoding: 'utf8', cwd: copy });
  return [...new Set([...stdout.matchAll(/^(lib\/[\w/.-]+\.ts)\(/gm)].map(([, file]) => file ?? ''))].sort();
}

test('with the id and the limit named, the compiler asks for range and words, and for nothing else', () => {
  edit('lib/margin/ids.ts', "'visibility', 'daylight'", "'visibility', 'lowCloud', 'daylight'");
  edit('lib/margin/sheet.ts', "'minVisibilityM',", "'minVisibilityM', 'maxLowCloudPct',");
  expect(complaints()).toEqual(['lib/brief/words/causes.ts', 'lib/brief/words/margins.ts', 'lib/config/sheet-ranges.ts']);
}, 120_000);

test('with range, rule and words written it compiles, and a demo day is judged by it', () => {
  edit('lib/config/sheet-ranges.ts', '  minVisibilityM:', "  maxLowCloudPct: { min: 0, max: 100, unit: '%' },\n  minVisibilityM:");
  edit('lib/margin/sky-rules.ts', 'const pressureStep: Rule', "const lowCloud = direct({ id: 'lowCloud', unit: '%', sense: 'atMost', limitName: 'maxLowCloudPct', field: 'lowCloudPct', words: 'low cloud', value: ({ hour }) => hour.lowCloudPct });\n\nconst pressureStep: Rule");
  edit('lib/margin/sky-rules.ts', 'visibility, daylight,', 'visibility, lowCloud, daylight,');
  edit('lib/brief/words/margins.ts', "    case 'visibility': return", "    case 'lowCloud': return 'Low cloud';\n    case 'visibility': return");
  edit('lib/brief/words/margins.ts', "case 'rainChance': case 'pressureStep':", "case 'rainChance': case 'lowCloud': case 'pressureStep':");
  edit('lib/brief/words/causes.ts', "    case 'visibility': return", "    case 'lowCloud': return `low cloud covers ${found}`;\n    case 'visibility': return");
  expect(complaints()).toEqual([]);
  writeFileSync(path.join(copy, 'judge.ts'), `
    import { judgeDay } from './lib/brief/judge-day.ts';
    import { dayInputs } from './test/bench/days.ts';
    const [input] = dayInputs();
    const sheet = { ...input.sheet, limits: { ...input.sheet.limits, maxLowCloudPct: 50 } };
    const withCloud = (cover, declared) => judgeDay({ ...input, sheet, answers: input.answers.map((answer) => ({ ...answer, outcome: { ok: true, value: {
      ...answer.outcome.value, declares: declared ? [...answer.outcome.value.declares, 'lowCloudPct'] : answer.outcome.value.declares,
      members: answer.outcome.value.members.map((hours) => hours.map((hour) => ({ ...hour, lowCloudPct: cover }))) } } })) });
    const statusOf = (day) => [...new Set(day.hours.map(({ margins }) => margins.find(({ id }) => id === 'lowCloud')?.status ?? 'none'))].join();
    console.log(JSON.stringify([statusOf(withCloud(20, true)), statusOf(withCloud(70, true)), statusOf(withCloud(null, true))]));
  `);
  const said = execFileSync(process.execPath, ['--no-warnings', path.join(copy, 'judge.ts')], { encoding: 'utf8' });
  expect(JSON.parse(said)).toEqual(['within', 'beyond', 'unknown']);
}, 120_000);
