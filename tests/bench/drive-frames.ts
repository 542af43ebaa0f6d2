import type { Browser, Page } from '@playwright/test';

/*
 * Drives an open Lay table as hands would and measures each frame: the main thread's work from Chromium's own trace
 * (scripts, style, layout, painting, drawing; time that the thread really ran), and the time from frame to frame, which
 * a busy machine lengthens.
 */

export interface FrameFigures {
  readonly what: string;
  readonly frames: number;
  /** Milliseconds of main-thread work a frame. */
  readonly p50: number;
  readonly p95: number;
  readonly most: number;
  /** Share of frames that took longer than 25 ms from the one before. */
  readonly late: number;
}

interface TraceEvent {
  readonly name: string;
  readonly ph: string;
  readonly ts: number;
  readonly dur?: number;
  /** What of `dur` the thread really ran: another program on the same core does not count. */
  readonly tdur?: number;
  readonly pid: number;
  readonly tid: number;
  readonly args?: { readonly name?: string };
}

function share(sorted: readonly number[], of: number): number {
  return sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * of))] ?? 0;
}

/** Work of the renderer's main thread between one frame and the next, in milliseconds. */
function workOf(events: readonly TraceEvent[], mark: string): number[] {
  const marked = events.find(
    (event) => event.name === 'TimeStamp' && JSON.stringify(event.args).includes(mark)
  );
  if (!marked) throw new Error('The trace does not hold the mark of the gesture');
  const own = events.filter((event) => event.pid === marked.pid && event.tid === marked.tid);
  const frames = own
    .filter((event) => event.name === 'FireAnimationFrame' && event.ts > marked.ts)
    .map(({ ts }) => ts)
    .sort((a, b) => a - b);
  // Two callbacks of one frame count once.
  const starts = frames.filter((ts, i) => i === 0 || ts - frames[i - 1]! > 4000);
  const tasks = own
    .filter((event) => event.name === 'RunTask' && event.ph === 'X')
    .sort((a, b) => a.ts - b.ts);
  const work: number[] = new Array<number>(Math.max(0, starts.length - 1)).fill(0);
  let frame = 0;
  for (const { ts, dur = 0, tdur = dur } of tasks) {
    // A task belongs to the frame in which it ends: the one that draws is begun before its own callback.
    while (frame < work.length && ts + dur >= starts[frame + 1]!) frame++;
    if (frame < work.length && ts + dur >= starts[0]!) work[frame]! += tdur / 1000;
  }
  return work;
}

/** Runs `step` (a script of the page that does one step of a gesture, given its number) once a frame. */
async function measure(
  browser: Browser,
  page: Page,
  what: string,
  steps: number,
  step: string
): Promise<FrameFigures> {
  const mark = `frames of ${what}`;
  await page.waitForTimeout(400);
  await browser.startTracing(page, {
    categories: ['toplevel', 'devtools.timeline', 'disabled-by-default-devtools.timeline', 'blink.console']
  });
  // As text: what the compiler adds to functions is not known to the page.
  const gaps = await page.evaluate<number[]>(`new Promise((resolve) => {
    const steps = ${steps};
    const gaps = [];
    let last = 0;
    let k = 0;
    console.timeStamp(${JSON.stringify(mark)});
    requestAnimationFrame(function frame(now) {
      if (last > 0) gaps.push(now - last);
      last = now;
      if (k >= steps) return resolve(gaps);
      ${step}
      k++;
      requestAnimationFrame(frame);
    });
  })`);
  const trace = JSON.parse((await browser.stopTracing()).toString('utf8')) as { traceEvents: TraceEvent[] };
  const work = workOf(trace.traceEvents, mark)
    .slice(0, steps)
    .sort((a, b) => a - b);
  return {
    what,
    frames: work.length,
    p50: share(work, 0.5),
    p95: share(work, 0.95),
    most: work.at(-1) ?? 0,
    late: gaps.filter((gap) => gap > 25).length / Math.max(1, gaps.length)
  };
}

const cloth = `document.querySelector('[data-testid=cloth]')`;
const pointerMove = (x: string, y: string): string =>
  `${cloth}.dispatchEvent(new PointerEvent('pointermove', { bubbles: true, pointerId: 1, pointerType: 'mouse', button: -1, buttons: 1, clientX: ${x}, clientY: ${y} }));`;

/** The place of a piece in the window: one that is found by its name when clicked. */
async function somePiece(page: Page): Promise<{ x: number; y: number }> {
  const box = (await page.getByTestId('cloth').boundingBox())!;
  for (let i = 0; i < 200; i++) {
    const x = box.x + box.width * (0.35 + 0.3 * ((i * 0.381966) % 1));
    const y = box.y + box.height * (0.35 + 0.3 * ((i * 0.618034) % 1));
    await page.keyboard.press('Escape');
    await page.mouse.click(x, y);
    if ((await page.getByTestId('piece-card').locator('input').count()) > 0) return { x, y };
  }
  throw new Error('No piece was found in the middle of the table');
}

/** The figures for one piece, many pieces, pan and zoom, with all of the lay in view. The table must be open. */
export async function driveFrames(browser: Browser, page: Page, steps = 240): Promise<FrameFigures[]> {
  const figures: FrameFigures[] = [];
  const box = (await page.getByTestId('cloth').boundingBox())!;
  await page.getByTestId('cloth').focus();
  await page.keyboard.press('0');
  await page.waitForTimeout(800);

  const circle = (at: { x: number; y: number }): string =>
    `const a = (k / 40) * 2 * Math.PI; const r = Math.min(1, k / 40) * 90;` +
    pointerMove(`${at.x} + Math.cos(a) * r * 2`, `${at.y} + Math.sin(a) * r`);

  const one = await somePiece(page);
  await page.mouse.move(one.x, one.y);
  await page.mouse.down();
  figures.push(await measure(browser, page, 'one piece', steps, circle(one)));
  await page.keyboard.press('Escape');
  await page.mouse.up();

  const many = await pickAbout(page, box, 50);
  await page.mouse.move(many.at.x, many.at.y);
  await page.mouse.down();
  figures.push(await measure(browser, page, `${many.count} pieces`, steps, circle(many.at)));
  await page.keyboard.press('Escape');
  await page.mouse.up();
  await page.keyboard.press('Escape');

  const wheel = (more: string): string =>
    `${cloth}.dispatchEvent(new WheelEvent('wheel', { bubbles: true, cancelable: true, clientX: ${box.x + box.width / 2}, clientY: ${box.y + box.height / 2}, ${more} }));`;
  figures.push(
    await measure(
      browser,
      page,
      'pan',
      steps,
      `const way = Math.floor(k / 60) % 2 === 0 ? 1 : -1;` + wheel('deltaX: 14 * way, deltaY: 5 * way')
    )
  );
  figures.push(
    await measure(
      browser,
      page,
      'zoom',
      steps,
      `const way = Math.floor(k / 60) % 2 === 0 ? 1 : -1;` + wheel('deltaY: -12 * way, ctrlKey: true')
    )
  );
  return figures;
}

/** Draws the band around about `wanted` pieces; gives how many they are and a place on one of them. */
async function pickAbout(
  page: Page,
  box: { x: number; y: number; width: number; height: number },
  wanted: number
): Promise<{ count: number; at: { x: number; y: number } }> {
  let best = { count: 0, at: { x: 0, y: 0 } };
  for (let part = 0.04; part < 0.9; part += 0.02) {
    await page.keyboard.press('Escape');
    await page.mouse.move(box.x + box.width * 0.3, box.y + 4);
    await page.mouse.down();
    await page.mouse.move(box.x + box.width * (0.3 + part), box.y + box.height - 4, { steps: 3 });
    await page.mouse.up();
    const words = (await page.getByTestId('piece-card').textContent()) ?? '';
    const count = Number(/(\d+) pieces picked/.exec(words)?.[1] ?? 0);
    best = { count, at: best.at };
    if (count >= wanted) {
      // A place on a picked piece: pressing there must keep all of them picked.
      for (let i = 0; i < 100; i++) {
        const x = box.x + box.width * (0.3 + part * ((i * 0.381966) % 1));
        const y = box.y + box.height * (0.4 + 0.2 * ((i * 0.618034) % 1));
        await page.mouse.move(x, y);
        await page.mouse.down();
        await page.mouse.move(x + 6, y, { steps: 2 });
        const held = await page.getByRole('heading', { name: 'In hand' }).count();
        await page.keyboard.press('Escape');
        await page.mouse.up();
        const still = (await page.getByTestId('piece-card').textContent()) ?? '';
        if (held > 0 && still.includes(`${count} pieces picked`)) return { count, at: { x, y } };
        if (!still.includes(`${count} pieces picked`)) break;
      }
    }
  }
  throw new Error(`No ${wanted} pieces could be picked together; got ${best.count}`);
}

/** The figures as a table. */
export function framesTable(figures: readonly FrameFigures[]): string {
  const row = (cells: readonly string[]): string =>
    cells.map((cell, i) => cell.padEnd(i === 0 ? 14 : 10)).join('');
  return [
    row(['gesture', 'frames', 'p50 ms', 'p95 ms', 'most ms', 'over 25 ms']),
    ...figures.map(({ what, frames, p50, p95, most, late }) =>
      row([
        what,
        String(frames),
        p50.toFixed(1),
        p95.toFixed(1),
        most.toFixed(1),
        `${(late * 100).toFixed(1)} %`
      ])
    )
  ].join('\n');
}
