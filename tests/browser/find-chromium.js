import { execFileSync, spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';

const names = ['chromium', 'chromium-browser', 'google-chrome', 'google-chrome-stable'];
const places = [
  '/usr/bin/chromium',
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
  '/Applications/Chromium.app/Contents/MacOS/Chromium',
  'C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe'
];

/** @returns {string | null} */
function installed() {
  const wanted = process.env.CHROMIUM_PATH;
  if (wanted && existsSync(wanted)) return wanted;
  for (const name of names) {
    const found = spawnSync(process.platform === 'win32' ? 'where' : 'which', [name], { encoding: 'utf8' });
    const path = found.status === 0 ? found.stdout.split('\n')[0]?.trim() : '';
    if (path) return path;
  }
  return places.find((path) => existsSync(path)) ?? null;
}

/**
 * The path of a Chromium or Chrome: one that is installed, else one that it installs through the system's package
 * manager or Playwright's own installer.
 * @returns {string}
 */
export function findChromium() {
  const found = installed();
  if (found) return found;
  const root = typeof process.getuid === 'function' && process.getuid() === 0;
  if (root && spawnSync('which', ['apt-get']).status === 0) {
    console.log('No Chromium found: installing it with apt-get …');
    spawnSync('apt-get', ['update', '-qq'], { stdio: 'inherit' });
    spawnSync('apt-get', ['install', '-y', '-qq', 'chromium'], { stdio: 'inherit' });
    const now = installed();
    if (now) return now;
  }
  console.log("No Chromium found: trying Playwright's installer …");
  const tried = spawnSync('npx', ['playwright', 'install', 'chromium'], { stdio: 'inherit' });
  if (tried.status === 0) {
    const path = execFileSync(
      process.execPath,
      [
        '--input-type=module',
        '-e',
        "import { chromium } from '@playwright/test'; console.log(chromium.executablePath())"
      ],
      { encoding: 'utf8' }
    ).trim();
    if (existsSync(path)) return path;
  }
  throw new Error(
    'The browser tests need Chromium or Chrome. Install one (Debian: apt-get install chromium) or set CHROMIUM_PATH to it.'
  );
}
