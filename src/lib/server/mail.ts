import { createTransport } from 'nodemailer';
import type { Config } from './config';

/** One mail, ready to go. */
export interface Mail {
  /** Becomes the Message-ID, so that a mail sent twice can be told to be one. */
  readonly id: string;
  readonly to: string;
  readonly subject: string;
  readonly text: string;
  readonly html: string | undefined;
}

/** Sends a mail; rejects when the mail server did not take it. */
export type Sender = (mail: Mail) => Promise<void>;

/** The way to the configured mail server; without one every mail waits, and says why. */
export function senderOf(config: Config): { send: Sender; close(): void } {
  const { smtpUrl, smtpPlain, mailFrom, origin } = config;
  if (smtpUrl === null)
    return {
      send: () => Promise.reject(new Error('No mail server is configured (WARPWISE_SMTP_URL)')),
      close: () => {}
    };
  const url = new URL(smtpUrl);
  const secure = url.protocol === 'smtps:';
  const transport = createTransport({
    host: url.hostname,
    port: Number(url.port) || (secure ? 465 : 587),
    secure,
    requireTLS: !secure && !smtpPlain,
    ignoreTLS: !secure && smtpPlain,
    auth: url.username
      ? { user: decodeURIComponent(url.username), pass: decodeURIComponent(url.password) }
      : undefined,
    connectionTimeout: 20_000,
    greetingTimeout: 20_000,
    socketTimeout: 60_000
  });
  const domain = new URL(origin).hostname;
  return {
    async send({ id, to, subject, text, html }) {
      await transport.sendMail({
        from: mailFrom,
        to: { name: '', address: to },
        subject,
        text,
        html,
        messageId: `<${id}@${domain}>`,
        headers: { 'auto-submitted': 'auto-generated' },
        disableFileAccess: true,
        disableUrlAccess: true
      });
    },
    close: () => transport.close()
  };
}
