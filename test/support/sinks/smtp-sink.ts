// A mail service on loopback that keeps what it was handed, byte for byte, and answers as it is told.
import type { AddressInfo } from 'node:net';
import { SMTPServer, type SMTPServerOptions } from 'smtp-server';

export interface Received {
  readonly from: string;
  readonly to: readonly string[];
  readonly raw: string;
  readonly secure: boolean;
  readonly user: string | null;
}

export interface SmtpSink {
  readonly port: number;
  readonly received: readonly Received[];
  /** What is answered to a recipient or to the data: an SMTP error, `drop` for the end of the connection, null to take it. */
  behave(as: { readonly rcpt?: () => Error | null; readonly data?: () => Error | 'drop' | null }): void;
  close(): Promise<void>;
}

export function smtpError(code: number, text: string): Error {
  return Object.assign(new Error(text), { responseCode: code });
}

export async function startSmtpSink(options: SMTPServerOptions = {}): Promise<SmtpSink> {
  const received: Received[] = [];
  let rcpt: () => Error | null = () => null;
  let data: () => Error | 'drop' | null = () => null;
  const server = new SMTPServer({
    authOptional: true, disabledCommands: options.onAuth === undefined ? ['AUTH', 'STARTTLS'] : ['STARTTLS'], logger: false, ...options,
    onRcptTo: (_address, _session, callback) => callback(rcpt()),
    onData(stream, session, callback) {
      const parts: Buffer[] = [];
      stream.on('data', (part: Buffer) => parts.push(part));
      stream.on('end', () => {
        const mailFrom = session.envelope.mailFrom;
        received.push({
          from: mailFrom === false ? '' : mailFrom.address, to: session.envelope.rcptTo.map(({ address }) => address),
          raw: Buffer.concat(parts).toString('utf8'), secure: session.secure, user: typeof session.user === 'string' ? session.user : null,
        });
        const answer = data();
        if (answer === 'drop') for (const connection of server.connections) (connection as unknown as { _socket: { destroy(): void } })._socket.destroy();
        else callback(answer);
      });
    },
  });
  server.on('error', () => undefined);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return {
    port: (server.server.address() as AddressInfo).port,
    received,
    behave(as) {
      rcpt = as.rcpt ?? (() => null);
      data = as.data ?? (() => null);
    },
    close: () => new Promise((resolve) => server.close(() => resolve())),
  };
}

export interface Mail {
  readonly headers: ReadonlyMap<string, string>;
  readonly parts: readonly { readonly type: string; readonly text: string }[];
}

/** Reads a raw mail by the RFCs' own rules and nothing of ours: folded headers, encoded words, parts in quoted-printable. */
export function readMail(raw: string): Mail {
  const headers = headersOf(raw.slice(0, raw.indexOf('\r\n\r\n')));
  const boundaries = [...raw.matchAll(/boundary="([^"]+)"/g)].map(([, name]) => name!);
  const parts = raw.split(new RegExp(`\r\n--(?:${boundaries.map((name) => name.replace(/[^A-Za-z0-9_]/g, '\\$&')).join('|')})(?:--)?\r\n`)).flatMap((part) => {
    const [head = '', ...rest] = part.split('\r\n\r\n');
    const type = /content-type: (text\/\w+)/i.exec(head)?.[1];
    return type === undefined ? [] : [{ type, text: unquoted(rest.join('\r\n\r\n')) }];
  });
  return { headers, parts };
}

function headersOf(text: string): ReadonlyMap<string, string> {
  const lines = text.replace(/\r\n[ \t]+/g, ' ').split('\r\n');
  return new Map(lines.map((line) => [line.slice(0, line.indexOf(':')).toLowerCase(), words(line.slice(line.indexOf(':') + 1).trim())]));
}

function words(value: string): string {
  return value.replace(/\?= =\?/g, '?==?').replace(/=\?UTF-8\?Q\?([^?]*)\?=/gi, (_, coded: string) => bytes(coded.replaceAll('_', ' ')));
}

function unquoted(text: string): string {
  return bytes(text.replace(/=\r\n/g, ''));
}

function bytes(text: string): string {
  const raw = text.replace(/=([0-9A-F]{2})/gi, (_, hex: string) => String.fromCharCode(parseInt(hex, 16)));
  return Buffer.from(raw, 'latin1').toString('utf8');
}
