import { headerText, type MailBinding, type Mailer } from '../security/mailer.ts';

/** The alternative to SMTP by configuration: in place of SMTP_URL a binding MAIL. Its errors carry a code and no reply. */
export function bindingMailer(binding: MailBinding, from: string): Mailer {
  return {
    local: false,
    async send({ to, subject, text, html, headers, messageId }) {
      try {
        await binding.send({ from, to, subject: headerText(subject).replaceAll('\r\n ', ' '), text, html, headers: { ...headers, 'Message-ID': messageId } });
        return { state: 'sent' };
      } catch (error) {
        const code = typeof error === 'object' && error !== null && 'code' in error && typeof error.code === 'string' ? error.code : '';
        if (/SUPPRESSED|RECIPIENT/.test(code)) return { state: 'gone', reason: 'the mail service refuses the address' };
        return { state: 'retry', reason: /^[A-Z_]{1,40}$/.test(code) ? `the mail service answered ${code}` : 'the mail service could not be reached', afterMs: null };
      }
    },
  };
}
