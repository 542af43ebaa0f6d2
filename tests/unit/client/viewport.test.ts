import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  arrowOnCloth,
  carried,
  fitted,
  panned,
  seen,
  stepToCloth,
  toCloth,
  toScreen,
  turnedTable,
  zoomed,
  type Viewport
} from '$lib/client/viewport';

const view = fc.record({
  lie: fc.constantFrom('across' as const, 'down' as const),
  scale: fc.double({ min: 0.02, max: 10, noNaN: true }),
  originX: fc.double({ min: -5000, max: 5000, noNaN: true }),
  originY: fc.double({ min: -5000, max: 5000, noNaN: true }),
  width: fc.integer({ min: 200, max: 3000 }),
  height: fc.integer({ min: 200, max: 3000 })
});
const point = fc.record({
  x: fc.double({ min: -2000, max: 20_000, noNaN: true }),
  y: fc.double({ min: -2000, max: 3000, noNaN: true })
});
const settings = { seed: 41, numRuns: 200 };

describe('the viewport', () => {
  it('finds back the place of the cloth under any place of the canvas', () => {
    fc.assert(
      fc.property(view, point, (v, p) => {
        const back = toCloth(v, toScreen(v, p));
        expect(back.x).toBeCloseTo(p.x, 5);
        expect(back.y).toBeCloseTo(p.y, 5);
      }),
      settings
    );
  });

  it('never mirrors the cloth, whichever way the table is turned', () => {
    fc.assert(
      fc.property(view, (v) => {
        const o = toScreen(v, { x: 0, y: 0 });
        const along = toScreen(v, { x: 100, y: 0 });
        const weft = toScreen(v, { x: 0, y: 100 });
        const cross = (along.left - o.left) * (weft.top - o.top) - (along.top - o.top) * (weft.left - o.left);
        // Pixels count downwards, so a turn to the left on the cloth is negative on the canvas.
        expect(cross).toBeLessThan(0);
      }),
      settings
    );
  });

  it('keeps the cloth under the pointer while zooming', () => {
    fc.assert(
      fc.property(view, point, fc.double({ min: 0.2, max: 5, noNaN: true }), (v, p, factor) => {
        const at = toScreen(v, p);
        const after = toScreen(zoomed(v, factor, at), p);
        expect(after.left).toBeCloseTo(at.left, 4);
        expect(after.top).toBeCloseTo(at.top, 4);
      }),
      settings
    );
  });

  it('fits a box into the free part of the canvas', () => {
    const box = { minX: -20, minY: 0, maxX: 2400, maxY: 1400 };
    const padding = { left: 10, right: 30, top: 20, bottom: 40 };
    for (const lie of ['across', 'down'] as const) {
      const v = fitted({ lie, scale: 1, originX: 0, originY: 0, width: 900, height: 700 }, box, padding);
      for (const corner of [
        { x: box.minX, y: box.minY },
        { x: box.maxX, y: box.maxY }
      ]) {
        const { left, top } = toScreen(v, corner);
        expect(left).toBeGreaterThanOrEqual(10 - 1e-6);
        expect(left).toBeLessThanOrEqual(870 + 1e-6);
        expect(top).toBeGreaterThanOrEqual(20 - 1e-6);
        expect(top).toBeLessThanOrEqual(660 + 1e-6);
      }
    }
  });

  it('shows the same middle after the table is turned, and the first view after two turns', () => {
    fc.assert(
      fc.property(view, (v) => {
        const middle = { left: v.width / 2, top: v.height / 2 };
        const before = toCloth(v, middle);
        const once = turnedTable(v);
        expect(once.lie).not.toBe(v.lie);
        expect(toCloth(once, middle).x).toBeCloseTo(before.x, 4);
        const twice = turnedTable(once);
        expect(twice.originX).toBeCloseTo(v.originX, 4);
        expect(twice.originY).toBeCloseTo(v.originY, 4);
      }),
      settings
    );
  });

  it('moves along the cloth where the arrow points on the screen', () => {
    for (const lie of ['across', 'down'] as const) {
      const v: Viewport = { lie, scale: 0.5, originX: 0, originY: 0, width: 100, height: 100 };
      for (const [key, dLeft, dTop] of [
        ['ArrowLeft', -1, 0],
        ['ArrowRight', 1, 0],
        ['ArrowUp', 0, -1],
        ['ArrowDown', 0, 1]
      ] as const) {
        const step = stepToCloth(v, dLeft * 0.5, dTop * 0.5);
        expect(arrowOnCloth(lie, key)).toEqual(step);
      }
    }
  });

  it('carries a drawn picture to a later view, pixel for pixel', () => {
    fc.assert(
      fc.property(view, point, (v, p) => {
        const later = zoomed(panned(v, 40, -13), 1.7, { left: 30, top: 50 });
        const how = carried(v, later)!;
        const drawn = toScreen(v, p);
        const wanted = toScreen(later, p);
        expect(drawn.left * how.scale + how.left).toBeCloseTo(wanted.left, 3);
        expect(drawn.top * how.scale + how.top).toBeCloseTo(wanted.top, 3);
        expect(carried(v, turnedTable(v))).toBeNull();
      }),
      settings
    );
  });

  it('knows the part of the cloth that is in sight', () => {
    const v: Viewport = { lie: 'down', scale: 2, originX: 10, originY: 20, width: 210, height: 420 };
    expect(seen(v)).toEqual({ minX: -10, minY: -5, maxX: 200, maxY: 100 });
  });
});
