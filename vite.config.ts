import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import type { Plugin } from 'vite';
import { defineConfig } from 'vitest/config';
import { buildWorkers } from './worker-build.js';

/** In dev the workers are built once and rebuilt when their sources change. */
const workersInDev: Plugin = {
  name: 'warpwise-workers',
  apply: (_config, { command, mode }) => command === 'serve' && mode !== 'test',
  async configureServer() {
    await buildWorkers('.svelte-kit/jobs', { watch: true });
  }
};

export default defineConfig({
  plugins: [tailwindcss(), sveltekit(), workersInDev],
  test: {
    projects: [
      {
        extends: true,
        test: { name: 'unit', environment: 'node', include: ['tests/unit/**/*.test.ts'], testTimeout: 30_000 }
      },
      {
        extends: true,
        test: {
          name: 'reference',
          environment: 'node',
          include: ['tests/reference/**/*.test.ts'],
          testTimeout: 60_000
        }
      },
      {
        extends: true,
        test: {
          name: 'server',
          environment: 'node',
          include: ['tests/server/**/*.test.ts'],
          globalSetup: ['tests/server/build-workers.ts'],
          testTimeout: 60_000,
          hookTimeout: 120_000,
          pool: 'forks'
        }
      }
    ]
  }
});
