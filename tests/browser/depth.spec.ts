import { fileURLToPath } from 'node:url';
import { expect, test } from '@playwright/test';
import { build, type Rollup } from 'vite';
import { thousandTurns } from './thousand-turns';

/*
 * The browser's live check and the server's verdict are the same code; here it is run in both places on the depths that
 * lie to either side of touching.
 */
test('depths of 0.009 and 0.011 mm are told apart at a thousand turns, in the browser as on the server', async ({
  page
}) => {
  const [bundle] = (await build({
    configFile: false,
    logLevel: 'error',
    resolve: { alias: { $lib: fileURLToPath(new URL('../../src/lib', import.meta.url)) } },
    build: {
      write: false,
      lib: {
        entry: fileURLToPath(new URL('./thousand-turns.ts', import.meta.url)),
        formats: ['iife'],
        name: 'turns'
      }
    }
  })) as Rollup.RollupOutput[];
  await page.goto('about:blank');
  await page.addScriptTag({ content: bundle!.output[0].code });
  const here = thousandTurns();
  const there = await page.evaluate(() =>
    (globalThis as unknown as { turns: typeof import('./thousand-turns') }).turns.thousandTurns()
  );
  // Two engines round sines differently in the last digit: the verdict is the same, the depth to a billionth.
  const rounded = (all: typeof here) =>
    all.map(({ turn, shallow, deep }) => ({
      turn,
      shallow,
      deep: deep === null ? null : Math.round(deep * 1e9)
    }));
  expect(rounded(there)).toEqual(rounded(here));
  expect(here).toHaveLength(1000);
  expect(here.filter(({ shallow }) => shallow !== null)).toEqual([]);
  expect(here.filter(({ deep }) => deep === null || Math.abs(deep - 0.011) > 1e-6)).toEqual([]);
});
