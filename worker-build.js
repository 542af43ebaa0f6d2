import { fileURLToPath } from 'node:url';
import { readdir } from 'node:fs/promises';
import path from 'node:path';
import { build } from 'vite';

const lib = fileURLToPath(new URL('./src/lib', import.meta.url));

/** Every `*.worker.ts` below src/lib, and the commands (`npm run backup`), which run without the application's server. */
async function workerEntries() {
  const files = await readdir(lib, { recursive: true });
  return Object.fromEntries(
    files
      .filter((file) => file.endsWith('.worker.ts') || path.dirname(file) === path.join('server', 'cli'))
      .map((file) => [path.basename(file, '.ts'), path.join(lib, file)])
  );
}

/**
 * Bundles the worker threads into plain modules that `new Worker(path)` can open.
 * Vite's own `new URL('./x.worker.ts', import.meta.url)` is not emitted by adapter-node.
 * @param {string} outDir
 * @param {{ watch?: boolean }} [options]
 */
export async function buildWorkers(outDir, { watch = false } = {}) {
  const input = await workerEntries();
  if (Object.keys(input).length === 0) return;
  await build({
    configFile: false,
    logLevel: 'warn',
    resolve: { alias: { $lib: lib } },
    build: {
      ssr: true,
      outDir,
      emptyOutDir: true,
      copyPublicDir: false,
      target: 'node20',
      watch: watch ? {} : null,
      rollupOptions: { input, output: { entryFileNames: '[name].js', chunkFileNames: '[name]-[hash].js' } }
    }
  });
}
