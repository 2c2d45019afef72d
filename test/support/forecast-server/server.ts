// The test server of all three forecast services, on loopback. See README.md beside this file.
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { metNorway, updatedAtMs, type MetAnswer } from './met-norway.ts';
import { gridAnswer, isUnitedStates, pointAnswer, type NwsAnswer } from './nws.ts';
import { metaOf, openMeteo, type Location, type Meta, type Terrain } from './open-meteo.ts';
import { metaFaults, metNorwayFaults, nwsFaults, openMeteoFaults } from './payload-faults.ts';
import { groundAtM } from './weather.ts';
import { wireFaults } from './wire-faults.ts';

export const SERVICES = ['open-meteo', 'meta', 'ensemble', 'met-norway', 'nws'] as const;

export type Service = (typeof SERVICES)[number];

export interface ForecastServer {
  readonly origin: string;
  /** What was asked so far, oldest first. */
  readonly asked: { readonly service: Service; readonly url: URL; readonly headers: IncomingMessage['headers'] }[];
  /** From now on: `clean`, the name of a fault, or one for each of the next questions (the last one stays). */
  behave(service: Service, ...modes: readonly string[]): void;
  /** All services clean again, nothing asked yet. */
  reset(): void;
  close(): Promise<void>;
}

export interface ServerOptions {
  readonly port?: number;
  readonly now?: () => number;
  readonly groundAtM?: Terrain['groundAtM'];
}

interface Reply {
  readonly status: number;
  readonly headers?: Record<string, string>;
  readonly body: unknown;
}

const contentFaults: Readonly<Record<Service, Readonly<Record<string, unknown>>>> = {
  'open-meteo': openMeteoFaults, ensemble: openMeteoFaults, meta: metaFaults, 'met-norway': metNorwayFaults, nws: nwsFaults,
};

/** Every mode a service knows. */
function modesOf(service: Service): string[] {
  return ['clean', ...Object.keys(wireFaults), ...Object.keys(contentFaults[service])];
}

function serviceOf(path: string): Service | null {
  if (path === '/v1/forecast') return 'open-meteo';
  if (path === '/v1/ensemble') return 'ensemble';
  if (/^\/data\/[a-z0-9_]+\/static\/meta\.json$/.test(path)) return 'meta';
  if (path === '/weatherapi/locationforecast/2.0/complete') return 'met-norway';
  return /^\/(points|gridpoints)\//.test(path) ? 'nws' : null;
}

const notFound: Reply = { status: 404, body: { error: true, reason: 'Not Found' } };
const forbidden: Reply = { status: 403, body: { error: true, reason: 'Forbidden' } };
const fourDecimals = /^-?\d+(\.\d{1,4})?$/;

/** A User-Agent that names a program and a contact. */
function isIdentified(request: IncomingMessage): boolean {
  return /\S+\/\S+ .*\S+[@.]\S+/.test(request.headers['user-agent'] ?? '');
}

function metReply(request: IncomingMessage, url: URL, nowMs: number, terrain: Terrain): Reply {
  const [lat, lon] = [url.searchParams.get('lat') ?? '', url.searchParams.get('lon') ?? ''];
  if (!isIdentified(request) || !fourDecimals.test(lat) || !fourDecimals.test(lon)) return forbidden;
  const lastModified = new Date(updatedAtMs(nowMs)).toUTCString();
  const headers = { expires: new Date(nowMs + 1_800_000).toUTCString(), 'last-modified': lastModified };
  if (request.headers['if-modified-since'] === lastModified) return { status: 304, headers, body: null };
  return { status: 200, headers, body: metNorway({ latDeg: Number(lat), lonDeg: Number(lon) }, nowMs, terrain) };
}

function nwsReply(request: IncomingMessage, url: URL, context: { nowMs: number; terrain: Terrain; origin: string }): Reply {
  if (!isIdentified(request)) return forbidden;
  const headers = { 'content-type': 'application/geo+json' };
  const [, kind, office = '', place = ''] = url.pathname.split('/');
  const [first = '', second = ''] = (kind === 'points' ? office : place).split(',');
  if (kind === 'points') {
    if (!fourDecimals.test(first) || !fourDecimals.test(second)) return { status: 400, headers, body: { status: 400, title: 'Bad Request' } };
    const isHere = isUnitedStates(Number(first), Number(second));
    return isHere ? { status: 200, headers, body: pointAnswer(Number(first), Number(second), context.origin) } : { ...notFound, headers };
  }
  return { status: 200, headers, body: gridAnswer(Number(first), Number(second), context.nowMs, context.terrain) };
}

/** Applies a fault of content to a clean body, which is ours to change. */
function spoil(service: Service, mode: string, body: unknown, nowMs: number): void {
  switch (service) {
    case 'open-meteo':
    case 'ensemble':
      for (const location of [body].flat() as Location[]) openMeteoFaults[mode]?.(location);
      return;
    case 'meta':
      return metaFaults[mode]?.(body as Meta, nowMs / 1000);
    case 'met-norway':
      return metNorwayFaults[mode]?.(body as MetAnswer);
    case 'nws':
      if ('updateTime' in (body as NwsAnswer).properties) nwsFaults[mode]?.(body as NwsAnswer);
      return;
  }
}

export async function startForecastServer(options: ServerOptions = {}): Promise<ForecastServer> {
  const now = options.now ?? Date.now;
  const terrain: Terrain = { groundAtM: options.groundAtM ?? groundAtM };
  const asked: ForecastServer['asked'] = [];
  const modes = new Map<Service, string[]>();
  let origin = '';

  const modeFor = (service: Service): string => {
    const next = modes.get(service) ?? ['clean'];
    return (next.length > 1 ? next.shift() : next[0]) ?? 'clean';
  };

  const cleanReply = (service: Service, request: IncomingMessage, url: URL): Reply => {
    switch (service) {
      case 'open-meteo':
      case 'ensemble':
        return openMeteo(url, terrain);
      case 'meta': {
        const meta = metaOf(url.pathname.split('/')[2] ?? '', now());
        return meta === null ? notFound : { status: 200, body: meta };
      }
      case 'met-norway':
        return metReply(request, url, now(), terrain);
      case 'nws':
        return nwsReply(request, url, { nowMs: now(), terrain, origin });
    }
  };

  const respond = (request: IncomingMessage, response: ServerResponse): void => {
    const url = new URL(request.url ?? '/', origin);
    const service = serviceOf(url.pathname);
    if (service === null) {
      control(url, response);
      return;
    }
    asked.push({ service, url, headers: request.headers });
    const mode = modeFor(service);
    const reply = cleanReply(service, request, url);
    if (reply.status === 200) spoil(service, mode, reply.body, now());
    // JSON has no word for Infinity; the text 1e999 says it.
    const text = JSON.stringify(reply.body, (_, value: unknown) => (value === Infinity ? '1e999!' : value === -Infinity ? '-1e999!' : value)).replaceAll(/"(-?1e999)!"/g, '$1');
    const fault = wireFaults[mode];
    if (fault !== undefined) fault(response, text);
    else {
      response.writeHead(mode === 'status-203' ? 203 : reply.status, { 'content-type': 'application/json; charset=utf-8', ...reply.headers });
      response.end(reply.status === 304 ? undefined : text);
    }
  };

  const behave: ForecastServer['behave'] = (service, ...next) => {
    const unknown = next.find((mode) => mode !== 'status-203' && !modesOf(service).includes(mode));
    if (unknown !== undefined) throw new Error(`"${unknown}" is no mode of ${service}; known: ${modesOf(service).join(' ')}`);
    modes.set(service, [...next]);
  };

  /** For a process that cannot call behave(): GET /behave?service=met-norway&mode=hang, GET /modes?service=met-norway. */
  const control = (url: URL, response: ServerResponse): void => {
    const service = SERVICES.find((one) => one === url.searchParams.get('service'));
    try {
      if (service === undefined) throw new Error('no such address');
      if (url.pathname === '/behave') behave(service, ...url.searchParams.getAll('mode'));
      response.writeHead(200, { 'content-type': 'application/json' });
      response.end(JSON.stringify(modesOf(service)));
    } catch (problem) {
      response.writeHead(404, { 'content-type': 'application/json' });
      response.end(JSON.stringify({ error: true, reason: problem instanceof Error ? problem.message : '' }));
    }
  };

  const server = createServer(respond);
  await new Promise<void>((resolve) => server.listen(options.port ?? 0, '127.0.0.1', resolve));
  origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  return {
    origin,
    asked,
    behave,
    reset: () => {
      modes.clear();
      asked.length = 0;
    },
    close: () => {
      server.closeAllConnections();
      return new Promise((resolve) => server.close(() => resolve()));
    },
  };
}
