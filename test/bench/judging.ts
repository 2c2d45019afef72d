// Judging: a margin, a site-day, a thousand sites, against parsing a payload of 150 kB as a forecast service sends it.
import { judgeDay } from '../../lib/brief/judge-day.ts';
import { margin } from '../../lib/margin/margin.ts';
import { calibrationPayload, dayInputs } from './days.ts';
import { exponentOf, inTurns, say } from './turns.ts';

const payload = calibrationPayload();
const parse = (): unknown => JSON.parse(payload) as unknown;
const inputs = dayInputs();
const nth = (index: number) => inputs[index % inputs.length] ?? inputs[0];

say(await inTurns({
  name: '10,000 margins', yardstick: 'one parse of 150 kB', yard: parse,
  own: () => {
    let spare = 0;
    for (let index = 0; index < 10_000; index += 1) spare += margin({ sense: 'atMost', limit: 8, demand: (index % 97) / 10, band: 0.5 }).spare ?? 0;
    return spare;
  },
}));
for (const input of inputs) {
  say(await inTurns({ name: `site-day, ${input.site.id}`, yardstick: 'one parse of 150 kB', own: () => judgeDay(input), yard: parse, warmUp: 200, rounds: 150 }));
}

const points: { size: number; cost: number }[] = [];
for (const size of [10, 100, 1000]) {
  const day = await inTurns({
    name: `${size} sites`, yardstick: `${size} parses of 150 kB`, warmUp: size === 1000 ? 1 : 2, rounds: size === 1000 ? 4 : 20,
    own: () => Array.from({ length: size }, (_, index) => { const input = nth(index); return input === undefined ? null : judgeDay(input).verdict; }),
    yard: () => Array.from({ length: size }, parse).length,
  });
  say(day);
  points.push({ size, cost: day.ownMs });
}
say({ name: 'judging, in sites', exponent: exponentOf(points), points });
