import { describe, expect, it } from 'vitest';
import { area, boundingBox } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import type { Point } from '$lib/geometry/point';
import { layPanelOf } from '$lib/lay/panel-book';
import { handAsLaid } from '$lib/lay/yields';
import { panelSchema } from '$lib/pattern/panel';
import { strip } from './workroom';

/** An L as a file would bring it: drawn as its cut line, the grain line running up the page. */
const corners: Point[] = [
  { x: 0, y: 0 },
  { x: 80, y: 0 },
  { x: 80, y: 180 },
  { x: 200, y: 180 },
  { x: 200, y: 300 },
  { x: 0, y: 300 }
];
const drawn = panelSchema.parse({
  id: 'ell',
  name: 'Ell',
  drawn: 'cut',
  edges: corners.map((from, i) => ({
    id: `e${i}`,
    from,
    segments: [{ kind: 'line', to: corners[(i + 1) % corners.length]! }],
    allowance: 0,
    role: 'seam'
  })),
  corners: corners.map((_, i) => ({ id: `c${i}`, treatment: 'mitred' })),
  cutOuts: [],
  notches: [],
  drillHoles: [],
  internalLines: [],
  grain: { from: { x: 40, y: 20 }, to: { x: 40, y: 120 }, confirmed: false },
  matchPoints: [],
  howMany: 4,
  paired: true,
  hand: 'right',
  symmetric: false,
  fold: null,
  role: 'main',
  turns: 'oneWay',
  grainTolerance: 1.5,
  note: ''
});

describe('what a lay knows of a panel', () => {
  const known = layPanelOf(drawn);

  it('is the shape with its grain along the warp, and the rules that it is laid by', () => {
    const { minX, maxX, minY, maxY } = boundingBox(known.shape.cut);
    expect([maxX - minX, maxY - minY]).toEqual([300, 200]);
    expect(known).toMatchObject({
      role: 'main',
      howMany: 4,
      paired: true,
      turns: 'oneWay',
      grainTolerance: 1.5,
      grainConfirmed: false,
      shape: { panel: 'ell', name: 'Ell', hand: 'right', symmetric: false }
    });
  });

  it('turns the panel but never mirrors it: laid unflipped it keeps the drawn hand and its shape', () => {
    const laid = placeOutline(known.shape.cut, { x: 0, y: 0, turn: 90, flip: false });
    expect(handAsLaid({ flip: false }, known, strip())).toBe('right');
    // Grain up the page again: corner for corner the drawing, moved.
    const { minX, minY } = boundingBox(laid);
    const back = laid.map(({ x, y }) => `${x - minX} ${y - minY}`).sort();
    expect(back).toEqual(corners.map(({ x, y }) => `${x} ${y}`).sort());
    expect(area(laid)).toBeGreaterThan(0);
  });
});
