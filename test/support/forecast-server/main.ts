// node test/support/forecast-server/main.ts [--port 8800] [--mode open-meteo=kmh]... : the test server until interrupted.
import { parseArgs } from 'node:util';
import { SERVICES, startForecastServer, type Service } from './server.ts';

const { values } = parseArgs({ options: { port: { type: 'string', default: '8800' }, mode: { type: 'string', multiple: true, default: [] }, 'until-stdin-ends': { type: 'boolean', default: false } } });
const server = await startForecastServer({ port: Number(values.port) });
for (const setting of values.mode) {
  const [service = '', mode = ''] = setting.split('=');
  if (!SERVICES.includes(service as Service)) throw new Error(`"${service}" is no service; known: ${SERVICES.join(' ')}`);
  server.behave(service as Service, mode);
}
console.log(`Invented forecasts for tests at ${server.origin}. In the environment of npm start -- --live:`);
for (const name of ['OPEN_METEO_URL', 'OPEN_METEO_ENSEMBLE_URL', 'MET_NORWAY_URL', 'NWS_URL']) console.log(`  ${name}=${server.origin}`);
// For whoever starts this as a child: however that one ends, this ends too.
if (values['until-stdin-ends']) process.stdin.resume().once('end', () => void server.close());
for (const signal of ['SIGINT', 'SIGTERM'] as const) process.once(signal, () => void server.close());
