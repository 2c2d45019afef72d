// npm run soak -- --kills N: ends with the line that counts, and with 0 only when nothing was lost or shown twice
// and the six oracles find nothing wrong.
// npm run soak -- --signups [--messages N]: a morning while people sign up, see signups.ts.
import { rmSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { killAgainAndAgain } from './kills.ts';
import { signups } from './signups.ts';
import { buildBundle } from './plant/bundle.ts';

const { values } = parseArgs({ options: { kills: { type: 'string', default: '200' }, seed: { type: 'string', default: '1' }, signups: { type: 'boolean', default: false }, messages: { type: 'string', default: '10000' } } });
if (values.signups) process.exit((await signups(Number(values.messages))) ? 0 : 1);
const kills = Number(values.kills);
const seed = Number(values.seed);
if (!Number.isInteger(kills) || kills < 1 || !Number.isInteger(seed)) throw new Error('--kills and --seed are whole numbers, kills at least 1');

const bundle = await buildBundle();
const report = await killAgainAndAgain({ bundle, kills, seed, report: (line) => console.log(line) });
rmSync(bundle.folder, { recursive: true, force: true });
for (const line of report.wrong) console.log(line);
if (report.shownTwice > 0) console.log(`${report.shownTwice} subscribers got a second message under another id`);
console.log(`At most ${report.mostRepeatsOfAKill} repeats after one kill; seed ${seed}.`);
console.log(`${report.kills} kills, ${report.deliveries} deliveries, ${report.lost} lost, ${report.repeats} repeats`);
process.exitCode = report.lost === 0 && report.wrong.length === 0 && report.shownTwice === 0 && report.repeats <= 6 * report.kills ? 0 : 1;
