import { LogLevel, WorkerMailer, type WorkerMailerOptions } from 'worker-mailer';
import { inTime } from '../in-time.ts';
import type { MailServer } from '../security/mail-server.ts';
import { headerText, outcomeOfReply, type Letter, type Mailer } from '../security/mailer.ts';

/**
 * SMTP submission over TLS from the first byte (RFC 8314). STARTTLS is not spoken: the library goes on in the clear, with
 * the password, when a service does not offer it. Plain SMTP is for this machine only.
 */
export function smtpMailer(server: MailServer, from: string): Mailer {
  return {
    local: server.isLoopback,
    async send(letter, { timeoutMs }) {
      let mailer: WorkerMailer | undefined;
      try {
        const work = async (): Promise<void> => {
          mailer = await WorkerMailer.connect(optionsOf(server, timeoutMs));
          await mailer.send(emailOf(letter, from));
        };
        await inTime(work(), timeoutMs, 'the mail service');
        return { state: 'sent' };
      } catch (error) {
        return outcomeOfReply(error instanceof Error ? error.message : '');
      } finally {
        // Saying goodbye must not make a sent letter an unsent one, nor hold up the next.
        void mailer?.close().catch(() => undefined);
      }
    },
  };
}

const MOST_REPLY = 10_000;

/**
 * In place of the library's own reader, which on a connection that has ended reads on for ever, so busily that no timer of
 * the isolate ever rings.
 */
async function readReply(this: { readonly reader: ReadableStreamDefaultReader<Uint8Array> }): Promise<string> {
  const decoder = new TextDecoder();
  let reply = '';
  for (;;) {
    const { value, done } = await this.reader.read();
    if (done) throw new Error('the connection has ended');
    reply += decoder.decode(value, { stream: true });
    const lastLine = reply.split('\n').at(-2) ?? '';
    if (reply.endsWith('\n') && !/^\d+-/.test(lastLine)) return reply;
    if (reply.length > MOST_REPLY) throw new Error('the reply has no end');
  }
}

Object.assign(WorkerMailer.prototype, { read: readReply });

function optionsOf({ host, port, secure, credentials }: MailServer, timeoutMs: number): WorkerMailerOptions {
  return {
    host, port, secure, startTls: false, logLevel: LogLevel.NONE, socketTimeoutMs: timeoutMs, responseTimeoutMs: timeoutMs,
    // Without this the library asks services that know delivery notifications never to send any.
    dsn: { RET: { HEADERS: true, FULL: false }, NOTIFY: { DELAY: false, FAILURE: true, SUCCESS: false } },
    authType: ['plain', 'login'],
    ...(credentials === null ? {} : { credentials }),
  };
}

function emailOf({ to, subject, text, html, headers, messageId }: Letter, from: string) {
  return { from, to, subject: '-', text, html, headers: { ...headers, Subject: headerText(subject), 'Message-ID': messageId } };
}
