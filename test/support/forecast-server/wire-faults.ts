// Faults of the wire: what a connection, a status line, a header or a stream of bytes can do wrong. Each gets the
// clean answer as text and does with the response what its name says.
import type { ServerResponse } from 'node:http';
import { createGzip, gzipSync } from 'node:zlib';

export type WireFault = (response: ServerResponse, clean: string) => void;

function send(status: number, headers: Record<string, string>, body: string | Buffer = ''): WireFault {
  return (response) => {
    response.writeHead(status, headers);
    response.end(body);
  };
}

const json = { 'content-type': 'application/json; charset=utf-8' };
const error = (reason: string) => JSON.stringify({ error: true, reason });

/** The clean text, changed, as JSON with status 200. */
function edited(edit: (clean: string) => string | Buffer): WireFault {
  return (response, clean) => {
    response.writeHead(200, json);
    response.end(edit(clean));
  };
}

/** Writes again and again until the other side has had enough. */
function pump(response: ServerResponse, write: () => boolean): void {
  const more = () => {
    if (response.destroyed) return;
    while (write()) if (response.destroyed) return;
    response.once('drain', more);
  };
  more();
}

export const wireFaults: Readonly<Record<string, WireFault>> = {
  reset: (response) => response.destroy(),
  hang: () => undefined,
  'hang-in-body': (response, clean) => {
    response.writeHead(200, json);
    response.write(clean.slice(0, 200));
  },
  drip: (response, clean) => {
    response.writeHead(200, json);
    response.flushHeaders();
    let at = 0;
    const timer = setInterval(() => {
      if (response.destroyed || at >= clean.length) clearInterval(timer);
      else response.write(clean.charAt(at++));
    }, 300);
    timer.unref();
  },
  endless: (response) => {
    response.writeHead(200, json);
    response.write('{"hourly":{"time":[0');
    const chunk = ',1'.repeat(32_768);
    pump(response, () => response.write(chunk));
  },
  'gzip-bomb': (response) => {
    response.writeHead(200, { ...json, 'content-encoding': 'gzip' });
    const gzip = createGzip();
    gzip.pipe(response);
    response.on('close', () => gzip.destroy());
    const zeros = Buffer.alloc(1_000_000, 0x20);
    const write = (left: number): void => {
      if (left === 0) gzip.end();
      else gzip.write(zeros, () => write(left - 1));
    };
    write(200);
  },
  'corrupt-gzip': (response, clean) => {
    const packed = gzipSync(clean);
    packed.fill(0xff, 20, 60);
    response.writeHead(200, { ...json, 'content-encoding': 'gzip' });
    response.end(packed);
  },
  gzip: (response, clean) => {
    response.writeHead(200, { ...json, 'content-encoding': 'gzip' });
    response.end(gzipSync(clean));
  },
  truncated: (response, clean) => {
    response.writeHead(200, { ...json, 'content-length': String(clean.length) });
    response.write(clean.slice(0, Math.floor(clean.length / 2)));
    setTimeout(() => response.destroy(), 50);
  },
  'reset-after-json': (response, clean) => {
    response.writeHead(200, json);
    response.write(clean);
    setTimeout(() => response.destroy(), 50);
  },
  'half-streamed': edited((clean) => `${clean.slice(0, Math.floor(clean.length / 2))}Unexpected error while streaming data: timeoutStreaming`),
  html: send(200, { 'content-type': 'text/html' }, '<html><script>alert(1)</script>Down for maintenance</html>'),
  'html-as-json': send(200, json, '<html>Down for maintenance</html>'),
  'text-plain': (response, clean) => {
    response.writeHead(200, { 'content-type': 'text/plain' });
    response.end(clean);
  },
  empty: send(200, json),
  'status-204': send(204, {}),
  'status-301': send(301, { location: 'https://elsewhere.example/v1/forecast' }),
  'status-302': send(302, { location: '/elsewhere' }),
  'status-307': send(307, { location: 'http://127.0.0.1:9/' }),
  'status-400': send(400, json, error('Parameter out of range')),
  'status-401': send(401, json, error('API key required')),
  'status-403': send(403, json, error('forbidden')),
  'status-404': send(404, json, error('Not Found')),
  'status-429': send(429, json, error('Minutely API request limit exceeded. Please try again in one minute.')),
  'status-429-later': send(429, { ...json, 'retry-after': '120' }, error('Hourly API request limit exceeded.')),
  'status-500': send(500, json, error('internal')),
  'status-502': send(502, { 'content-type': 'text/html' }, '<html>bad gateway</html>'),
  'status-503': send(503, { ...json, 'retry-after': '3600' }, error('The service is overloaded')),
  'error-200': send(200, json, error('something odd')),
  'body-null': send(200, json, 'null'),
  'body-list': send(200, json, '[]'),
  'body-text': send(200, json, '"x"'),
  'body-number': send(200, json, '42'),
  'body-true': send(200, json, 'true'),
  'invalid-json': edited((clean) => clean.replace('}', ',}')),
  'nan-literal': edited((clean) => clean.replace(/:\d+\.\d+/, ':NaN')),
  'utf8-bom': edited((clean) => `\uFEFF${clean}`),
  'broken-utf8': edited((clean) => Buffer.concat([Buffer.from(`${clean.slice(0, -1)},"x":"`), Buffer.from([0xc3, 0x28]), Buffer.from('"}')])),
  utf16: edited((clean) => Buffer.from(clean, 'utf16le')),
  'two-documents': edited((clean) => clean + clean),
  'duplicate-key': edited((clean) => clean.replace(/"(wind_gusts_10m|timeseries|windGust)":\s*\[/, (whole, key: string) => `"${key}":[0],${whole}`)),
  'deep-nesting': edited((clean) => clean.replace(/^\{/, `{"deep":${'['.repeat(1000)}${']'.repeat(1000)},`)),
  'huge-list': (response) => {
    response.writeHead(200, json);
    const chunk = '1,'.repeat(50_000);
    let left = 500;
    response.write('[');
    pump(response, () => (left-- > 0 ? response.write(chunk) : (response.end('1]'), false)));
  },
  'hostile-keys': edited((clean) => clean.replace(/^\{/, '{"__proto__":{"polluted":1},"constructor":{"prototype":{"polluted":1}},')),
};
