import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync } from 'node:fs';
import { createServer } from 'node:net';
import path from 'node:path';

/*
 * The real build as a process of its own, for what only it has: headers, the adapter's checks, signals, sudden death.
 */

/** Where the build is; another folder with WARPWISE_TEST_BUILD. */
const build = path.resolve(process.env.WARPWISE_TEST_BUILD ?? 'build');

/** False before `npm run build`: such tests are then skipped, and say so. */
export const isBuilt = existsSync(path.join(build, 'index.js'));

export interface RealServer {
  /** Where it answers. */
  readonly address: string;
  readonly process: ChildProcess;
  /** What it wrote, so far. */
  log(): string;
  /** The code or the signal with which it ended. */
  readonly ended: Promise<number | NodeJS.Signals | null>;
  /** Kills it, if it still runs, and waits for its end. */
  kill(): Promise<void>;
}

/** Starts the build on a free port with the database `file`; `env` adds to the environment. Answers when it is ready. */
export async function startBuild(file: string, env: Record<string, string> = {}): Promise<RealServer> {
  const port = await freePort();
  const address = `http://127.0.0.1:${port}`;
  const child = spawn(process.execPath, [build], {
    env: {
      PATH: process.env.PATH,
      HOST: '127.0.0.1',
      PORT: String(port),
      ORIGIN: address,
      WARPWISE_DATABASE: file,
      ...env
    },
    stdio: ['ignore', 'pipe', 'pipe']
  });
  let written = '';
  child.stdout.on('data', (text) => (written += text));
  child.stderr.on('data', (text) => (written += text));
  const ended = new Promise<number | NodeJS.Signals | null>((resolve) =>
    child.once('exit', (code, signal) => resolve(code ?? signal))
  );
  const server: RealServer = {
    address,
    process: child,
    log: () => written,
    ended,
    async kill() {
      if (child.exitCode === null && child.signalCode === null) child.kill('SIGKILL');
      await ended;
    }
  };
  for (;;) {
    try {
      if ((await fetch(`${address}/health`)).ok) return server;
    } catch (error) {
      // Not listening yet.
      if (child.exitCode !== null)
        throw new Error(`The server ended at its start:\n${written}`, { cause: error });
    }
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

/** Posts a form as a browser on the page itself would. */
export function postForm(
  server: RealServer,
  pathname: string,
  fields: Record<string, string>,
  headers: Record<string, string> = {}
): Promise<Response> {
  return fetch(server.address + pathname, {
    method: 'POST',
    redirect: 'manual',
    headers: { origin: server.address, accept: 'text/html', ...headers },
    body: new URLSearchParams(fields)
  });
}

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const { port } = probe.address() as { port: number };
      probe.close(() => resolve(port));
    });
  });
}
