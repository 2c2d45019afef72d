// A year of mornings: `node test/prove/year.ts [days] [seed]`. Fails when anybody was left in silence.
import '../support/no-sockets.ts';

const [days = '366', seed = '2028'] = process.argv.slice(2);
console.error = () => undefined;
console.warn = () => undefined;
const { simulate, ZONES } = await import('../support/year.ts');
const startMs = performance.now();
const report = await simulate({ from: '2028-01-01', days: Number(days), seed: Number(seed) });
const { violations, ...counts } = report;
console.log(`${report.days} mornings x ${ZONES.length} zones, seed ${seed}: ${JSON.stringify(counts)}`);
for (const violation of violations.slice(0, 20)) console.log(`  ${violation}`);
console.log(`${violations.length} violations, ${((performance.now() - startMs) / 1000).toFixed(0)} s`);
if (violations.length > 0) process.exitCode = 1;
