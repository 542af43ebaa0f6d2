import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { chromium } from '@playwright/test';
import { findChromium } from '../browser/find-chromium.js';
import { startOwnServer } from '../browser/own-server';
import { driveFrames, framesTable } from './drive-frames';
import { prepareLay } from './prepare-lay';

/*
 * How smooth the Lay table of the built product is with 300 pieces of 100 points on the cloth, the live check included.
 * Prints figures and asserts nothing. `--pieces`, `--points`, `--steps` change the load; WARPWISE_BUILD names the build.
 */

function option(name: string, otherwise: number): number {
  const at = process.argv.indexOf(`--${name}`);
  return at < 0 ? otherwise : Number(process.argv[at + 1]);
}

async function main(): Promise<void> {
  const [pieces, points, steps] = [option('pieces', 300), option('points', 100), option('steps', 240)];
  const folder = mkdtempSync(path.join(tmpdir(), 'warpwise-frames-'));
  const file = path.join(folder, 'frames.sqlite');
  const lay = await prepareLay(file, pieces, points);
  const server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build', { WARPWISE_DATABASE: file });
  const browser = await chromium.launch({
    executablePath: findChromium(),
    args: ['--headless', '--no-sandbox', '--disable-gpu', '--no-first-run', '--disable-background-networking']
  });
  try {
    const page = await browser.newPage({ viewport: { width: 1440, height: 900 } });
    await page.goto(`${server.origin}/sign-in`);
    await page.getByLabel(/mail/i).fill('runa@hollin-lane.example');
    await page
      .getByLabel(/password/i)
      .first()
      .fill('loden under lamplight');
    await page.keyboard.press('Enter');
    await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
    await page.goto(`${server.origin}/lays/${lay}`);
    await page.getByTestId('cloth').locator('canvas').first().waitFor({ state: 'attached' });
    await page.waitForTimeout(2000);
    console.log(`Lay table, ${pieces} pieces of ${points} points, 1440 × 900, no graphics card:`);
    console.log(framesTable(await driveFrames(browser, page, steps)));
  } finally {
    await browser.close();
    server.stop();
    rmSync(folder, { recursive: true, force: true });
  }
}

await main();
