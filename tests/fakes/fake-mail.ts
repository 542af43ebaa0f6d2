import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { SMTPServer } from 'smtp-server';
import { readMail, type ReadMail } from './read-mail.ts';

/*
 * A mail server that keeps what it is sent and shows it, for the demo and the tests. It speaks real SMTP: what its page
 * lists has travelled the whole way. Nothing leaves this machine.
 */

export interface FakeMail {
  /** For WARPWISE_SMTP_URL (with WARPWISE_SMTP_PLAIN=true). */
  readonly smtpUrl: string;
  /** The page that shows what was sent; `/messages.json` gives the same as data. */
  readonly pageUrl: string;
  /** What has arrived, the oldest first. */
  readonly messages: readonly ReceivedMail[];
  /** While set, each mail is refused with these words. */
  refuseWith: string | null;
  close(): Promise<void>;
}

export interface ReceivedMail extends ReadMail {
  readonly recipients: readonly string[];
  readonly receivedAt: string;
}

/** Starts the mail server and its page on this machine only; port 0 takes a free one. */
export async function startFakeMail({ smtpPort = 0, pagePort = 0 } = {}): Promise<FakeMail> {
  const messages: ReceivedMail[] = [];
  const fake = { refuseWith: null as string | null };
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    size: 1_000_000,
    onData(stream, session, done) {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => chunks.push(chunk));
      stream.on('end', () => {
        if (fake.refuseWith !== null) return done(new Error(fake.refuseWith));
        messages.push({
          ...readMail(Buffer.concat(chunks)),
          recipients: session.envelope.rcptTo.map(({ address }) => address),
          receivedAt: new Date().toISOString()
        });
        // The demo runs for days: the page keeps the last two hundred.
        if (messages.length > 200) messages.shift();
        done();
      });
    }
  });
  await new Promise<void>((resolve, reject) => {
    smtp.once('error', reject);
    smtp.listen(smtpPort, '127.0.0.1', resolve);
  });
  smtp.removeAllListeners('error');
  // A client that hangs up in the middle is its own affair.
  smtp.on('error', (error) => process.stderr.write(`mail fake: ${error.message}\n`));

  const page = createServer((request, response) => {
    const json = request.url === '/messages.json';
    response.writeHead(200, {
      'content-type': json ? 'application/json' : 'text/html; charset=utf-8',
      'content-security-policy': "default-src 'none'; style-src 'unsafe-inline'",
      'cache-control': 'no-store'
    });
    response.end(json ? JSON.stringify(messages) : pageOf(messages));
  });
  await new Promise<void>((resolve, reject) => {
    page.once('error', reject);
    page.listen(pagePort, '127.0.0.1', resolve);
  });

  const portOf = (address: unknown) => (address as AddressInfo).port;
  return Object.assign(fake, {
    smtpUrl: `smtp://127.0.0.1:${portOf(smtp.server.address())}`,
    pageUrl: `http://localhost:${portOf(page.address())}`,
    messages,
    async close() {
      page.closeAllConnections();
      await Promise.all([
        new Promise<void>((resolve) => smtp.close(() => resolve())),
        new Promise((resolve) => page.close(resolve))
      ]);
    }
  });
}

function pageOf(messages: readonly ReceivedMail[]): string {
  const list = [...messages]
    .reverse()
    .map(
      ({ recipients, subject, text, receivedAt }, i) =>
        `<details${i === 0 ? ' open' : ''}><summary><b>${escaped(subject)}</b> to ${escaped(recipients.join(', '))}` +
        `<time>${escaped(receivedAt.slice(0, 19).replace('T', ' '))} UTC</time></summary>` +
        `<pre>${linked(text)}</pre></details>`
    )
    .join('');
  return (
    `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>What was sent · Warpwise demo</title>` +
    `<meta name="viewport" content="width=device-width, initial-scale=1"><style>` +
    `body{margin:0;background:#F6F1E7;color:#23262B;font:16px/24px "IBM Plex Sans",system-ui,sans-serif}` +
    `main{max-width:760px;margin:0 auto;padding:32px 16px}h1{font-size:28px;line-height:34px;margin:0 0 8px}` +
    `p{margin:0 0 24px;color:#6E6A62}details{background:#FFFDF8;border:1px solid #DDD5C6;border-radius:6px;margin:0 0 12px}` +
    `summary{padding:12px 16px;cursor:pointer}time{display:block;color:#6E6A62;font-size:14px}` +
    `pre{margin:0;padding:0 16px 16px;white-space:pre-wrap;overflow-wrap:anywhere;font:inherit}a{color:#2F5D7C}` +
    `:focus-visible{outline:2px solid #2F5D7C;outline-offset:2px}</style></head><body><main>` +
    `<h1>What was sent</h1><p>The demo’s own mail server took these mails from Warpwise over SMTP. None has left this machine. ` +
    `<a href="/">Look again</a></p>${list || '<p>Nothing yet.</p>'}</main></body></html>`
  );
}

function escaped(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}

const linked = (text: string): string =>
  escaped(text).replace(/https?:\/\/[^\s<]+/g, (url) => `<a href="${url}">${url}</a>`);
