// A worker of one function: it hands a letter to a mail service. For tests that need the real socket of the runtime.
import { smtpMailer } from '../../worker/channels/mail-smtp.ts';
import { mailServer } from '../../worker/security/mail-server.ts';
import type { Letter } from '../../worker/security/mailer.ts';

export async function handOver(request: Request): Promise<Response> {
  const { url, letter, timeoutMs } = await request.json<{ url: string; letter: Letter; timeoutMs: number }>();
  const server = mailServer(url, { local: true });
  if (server === null) return Response.json({ state: 'no such service' });
  return Response.json(await smtpMailer(server, 'brief@dawnmargin.example.org').send(letter, { timeoutMs }));
}
