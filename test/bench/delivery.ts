// npm run bench:delivery [-- throughput hostile outbox]: how fast messages leave, what one hostile endpoint does to the others,
// how long a hundred thousand take to plan. Each in a process of its own, on the local runtime; on a machine with nothing else to do.
import path from 'node:path';
import { root, run } from '../support/run-tool.ts';

const BENCHES: Readonly<Record<string, string>> = {
  throughput: 'test/faults/delivery/throughput.ts',
  hostile: 'test/faults/delivery/hostile.ts',
  outbox: 'test/bench/outbox.ts',
};

const wanted = process.argv.slice(2);
const unknown = wanted.filter((name) => BENCHES[name] === undefined);
if (unknown.length > 0) throw new Error(`no bench "${unknown.join('", "')}": there are ${Object.keys(BENCHES).join(', ')}`);
for (const [name, script] of Object.entries(BENCHES)) {
  if (wanted.length > 0 && !wanted.includes(name)) continue;
  if ((await run(path.join(root, script), [])) !== 0) process.exitCode = 1;
}
