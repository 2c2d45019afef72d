// 200,000 request bodies and 200,000 configurations through every door, in process: `node test/prove/fuzz.ts [cases] [seed]`.
import '../support/no-sockets.ts';

const [cases = '200000', seed = String(Math.floor(Date.now() / 1000))] = process.argv.slice(2);
const { BODIES, CONFIGS, fuzz } = await import('../support/fuzz.ts');
for (const [what, doors] of [['request bodies', BODIES], ['configurations', CONFIGS]] as const) {
  const startMs = performance.now();
  const { requests, statuses, violations } = await fuzz(doors, { cases: Number(cases), seed: Number(seed) });
  console.log(`${requests} ${what}, seed ${seed}: ${Object.entries(statuses).map(([status, count]) => `${count} x ${status}`).join(', ')}; ${violations.length} violations, ${((performance.now() - startMs) / 1000).toFixed(0)} s`);
  for (const violation of violations.slice(0, 20)) console.log(`  ${violation}`);
  if (violations.length > 0) process.exitCode = 1;
}
