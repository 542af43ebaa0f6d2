import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';

/*
 * The built application on a port of its own, with the demo in a database of its own.
 */

export interface OwnServer {
  readonly origin: string;
  readonly stop: () => void;
}

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.on('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() =>
        typeof address === 'object' && address ? resolve(address.port) : reject(new Error('No port'))
      );
    });
  });
}

/** Starts it and waits until it answers. `build` is the folder of the built application. */
export async function startOwnServer(
  build = 'build',
  variables: Record<string, string> = {}
): Promise<OwnServer> {
  const folder = mkdtempSync(path.join(tmpdir(), 'warpwise-browser-'));
  const port = await freePort();
  const origin = `http://localhost:${port}`;
  const server = spawn(process.execPath, [build], {
    env: {
      ...process.env,
      PORT: String(port),
      ORIGIN: origin,
      WARPWISE_DATABASE: path.join(folder, 'test.sqlite'),
      WARPWISE_DEMO: 'true',
      WARPWISE_LOG_LEVEL: 'error',
      BODY_SIZE_LIMIT: '20M',
      ...variables
    },
    stdio: ['ignore', 'ignore', 'inherit']
  });
  const stop = (): void => {
    server.kill('SIGKILL');
    rmSync(folder, { recursive: true, force: true });
  };
  for (let i = 0; i < 300; i++) {
    if (server.exitCode !== null) {
      stop();
      throw new Error(`The server ended with ${server.exitCode} before it answered`);
    }
    const answer = await fetch(`${origin}/health`).catch(() => null);
    if (answer?.ok) return { origin, stop };
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  stop();
  throw new Error('The server did not answer within 30 seconds');
}
