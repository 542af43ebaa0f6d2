import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { createServer } from 'node:net';
import { setTimeout as wait } from 'node:timers/promises';
import { people, studioName } from '../../src/lib/server/demo/content.ts';
import { startFakeCardHost } from './fake-card-host.ts';
import { startFakeMail } from './fake-mail.ts';

/*
 * `npm run demo`: the built product with the invented workroom, a local mail server and a stand-in for the card host, on
 * this machine only. The database stays between runs (data/demo.sqlite); delete the file to begin afresh.
 */

/** The first port from `wanted` on that nobody listens on. */
async function freePort(wanted: number): Promise<number> {
  for (let port = wanted; port < wanted + 20; port++) {
    const probe = createServer();
    const free = await new Promise<boolean>((resolve) => {
      probe.once('error', () => resolve(false));
      probe.listen(port, '127.0.0.1', () => resolve(true));
    });
    if (!free) continue;
    probe.close();
    await once(probe, 'close');
    return port;
  }
  throw new Error(`No free port from ${wanted} to ${wanted + 19}: set PORT`);
}

const port = await freePort(Number(process.env.PORT ?? 3000));
const mail = await startFakeMail();
const origin = `http://localhost:${port}`;
const cards = await startFakeCardHost({ webhookUrl: `${origin}/api/payments/webhook` });
const server = spawn(process.execPath, ['build'], {
  stdio: ['ignore', 'inherit', 'inherit'],
  env: {
    HOST: '127.0.0.1',
    BODY_SIZE_LIMIT: '32M',
    WARPWISE_LOG_LEVEL: 'warn',
    ...process.env,
    ...cards.env,
    PORT: String(port),
    ORIGIN: origin,
    WARPWISE_DATABASE: process.env.WARPWISE_DATABASE ?? 'data/demo.sqlite',
    WARPWISE_DEMO: 'true',
    WARPWISE_DEMO_MAIL_PAGE: mail.pageUrl,
    WARPWISE_SMTP_URL: mail.smtpUrl,
    WARPWISE_SMTP_PLAIN: 'true'
  }
});
const ended = once(server, 'exit').then(async ([code]) => {
  await mail.close();
  await cards.close();
  process.exitCode = typeof code === 'number' ? code : 0;
  return true;
});
for (const signal of ['SIGINT', 'SIGTERM'] as const) process.on(signal, () => server.kill(signal));

/** Whether the server answers now. */
const answers = () =>
  fetch(`${origin}/health`).then(
    (response) => response.ok,
    () => false
  );
let over = false;
void ended.then(() => (over = true));
while (!over && !(await answers())) await wait(200);

if (!over) {
  const width = Math.max(...people.map(({ email }) => email.length));
  const lines = people.map(
    ({ email, password, role }) =>
      `    ${email.padEnd(width)}   ${password.padEnd(26)} ${role === 'patternMaker' ? 'pattern maker' : role}`
  );
  process.stdout.write(`
  Warpwise, with the demo of ${studioName}:

    ${origin}

  Sign in as
${lines.join('\n')}

  What the product mails can be read at ${mail.pageUrl}
  Stop with Ctrl+C.
`);
}
