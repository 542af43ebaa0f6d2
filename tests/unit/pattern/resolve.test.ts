import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { arcPath } from '$lib/geometry/path';
import { area, boundingBox, isSimple, locate } from '$lib/geometry/polygon';
import type { Outline, Point } from '$lib/geometry/point';
import { panelSchema, type Panel } from '$lib/pattern/panel';
import { PanelFault } from '$lib/pattern/panel-fault';
import { resolvePanel } from '$lib/pattern/resolve';
import { distanceTo } from '../geometry/brute-force';
import { box, points, starOutline } from '../geometry/outlines';
import { straightPanel } from './panels';
import { runs } from '../../runs';

const size = (outline: Outline) => {
  const { minX, minY, maxX, maxY } = boundingBox(outline);
  return { width: maxX - minX, height: maxY - minY };
};
const sorted = (outline: Outline) =>
  [...outline].sort((a, b) => a.x - b.x || a.y - b.y).map(({ x, y }) => [x, y]);

/** Half of a front, its fold along the left side, drawn upright with the grain from neck to hem. */
function half(more: Partial<Panel> = {}): Panel {
  const outline = points([0, 0], [200, 0], [180, 300], [120, 400], [0, 380]);
  const panel = straightPanel(outline, {
    allowances: [40, 10, 10, 10, 0],
    roles: ['hem', 'seam', 'seam', 'seam', 'fold'],
    treatments: ['mitred', 'mirrored', 'square', 'square', 'mitred'],
    more: {
      fold: 'e4',
      symmetric: true,
      grain: { from: { x: 60, y: 300 }, to: { x: 60, y: 60 }, confirmed: true },
      ...more
    }
  });
  return panel;
}

describe('a resolved panel', () => {
  it('is cut wider than it is sewn by its allowances, exactly once', () => {
    // From common practice, no published source.
    const shape = resolvePanel(straightPanel(box(0, 0, 300, 200), { allowances: [40, 10, 15, 5] }));
    expect(size(shape.sew)).toEqual({ width: 300, height: 200 });
    expect(size(shape.cut)).toEqual({ width: 315, height: 255 });
    expect(area(shape.cut)).toBe(315 * 255);
  });

  it('has its grain along +x, exactly for square turns', () => {
    const turns: [Point, Point, number[]][] = [
      [{ x: 0, y: 50 }, { x: 90, y: 50 }, [0, 0, 300, 200]],
      [{ x: 50, y: 90 }, { x: 50, y: 0 }, [-200, 0, 0, 300]],
      [{ x: 90, y: 50 }, { x: 0, y: 50 }, [-300, -200, 0, 0]],
      [{ x: 50, y: 0 }, { x: 50, y: 90 }, [0, -300, 200, 0]]
    ];
    for (const [from, to, expected] of turns) {
      const shape = resolvePanel(
        straightPanel(box(0, 0, 300, 200), {
          allowances: [0, 0, 0, 0],
          more: { grain: { from, to, confirmed: true } }
        })
      );
      const { minX, minY, maxX, maxY } = boundingBox(shape.cut);
      expect([minX, minY, maxX, maxY]).toEqual(expected);
      expect(shape.grain.to.x).toBeGreaterThan(shape.grain.from.x);
      expect(shape.grain.to.y).toBe(shape.grain.from.y);
    }
  });

  it('lays a panel drawn as its cut line untouched, with the sew line inside', () => {
    const outline = box(0, 0, 300, 200);
    const shape = resolvePanel(
      straightPanel(outline, { allowances: [10, 10, 10, 20], more: { drawn: 'cut' } })
    );
    expect(sorted(shape.cut)).toEqual(sorted(outline));
    expect(sorted(shape.sew)).toEqual(sorted(box(20, 10, 290, 190)));
    const bare = resolvePanel(straightPanel(outline, { allowances: [0, 0, 0, 0], more: { drawn: 'cut' } }));
    expect(bare.sew).toEqual(bare.cut);
  });

  it('opens the fold into one whole piece that is its own mirror image', () => {
    const shape = resolvePanel(half());
    expect(isSimple(shape.cut)).toBe(true);
    expect(area(shape.sew)).toBeCloseTo(
      2 * area(points([0, 0], [200, 0], [180, 300], [120, 400], [0, 380])),
      6
    );
    const fold = shape.foldLine!;
    expect(fold.from.y).toBe(0);
    expect(fold.to.y).toBe(0);
    const mirrored = shape.cut.map(({ x, y }) => ({ x, y: -y + 0 }));
    // The halves agree to the grid: corners that the loops gave may be rounded either way.
    for (const p of mirrored) expect(distanceTo(shape.cut, p)).toBeLessThan(0.003);
    // No allowance lies along the fold: the piece is cut whole across it.
    expect(locate(shape.cut, { x: -200, y: 0 })).toBe('inside');
    // The grain ran from neck to hem, so the hem's allowance lies towards +x.
    expect(boundingBox(shape.cut).maxX).toBe(40);
    // The hem folds flat: everything of its allowance has its image inside the piece.
    for (const p of shape.cut.filter(({ x }) => x > 0.01))
      expect(
        locate(shape.cut, { x: -p.x, y: p.y }) !== 'outside' ||
          distanceTo(shape.cut, { x: -p.x, y: p.y }) < 0.01
      ).toBe(true);
  });

  it('turns marks with the panel and mirrors them across the fold, those on the fold once', () => {
    const shape = resolvePanel(
      half({
        notches: [
          { id: 'n1', edge: 'e1', distance: 100, outward: false, count: 1 },
          { id: 'n2', edge: 'e0', distance: 0, outward: true, count: 1 },
          { id: 'n3', edge: 'e1', distance: 200, outward: false, count: 2 }
        ],
        drillHoles: [
          { id: 'd1', at: { x: 50, y: 200 }, note: 'dart' },
          { id: 'd2', at: { x: 0, y: 100 }, note: 'centre' }
        ],
        internalLines: [
          {
            id: 'l1',
            path: { from: { x: 0, y: 0 }, segments: [{ kind: 'line', to: { x: 0, y: 380 } }] },
            note: 'centre front'
          }
        ],
        matchPoints: [{ id: 'm', name: 'waist', edge: 'e1', distance: 150 }]
      })
    );
    expect(shape.notches).toHaveLength(7);
    expect(shape.drillHoles.map(({ at }) => at)).toEqual([
      { x: -200, y: 50 },
      { x: -200, y: -50 },
      { x: -100, y: 0 }
    ]);
    expect(shape.internalLines).toHaveLength(1);
    expect(shape.matchPoints.map(({ id }) => id)).toEqual(['m', 'm-mirrored']);
    for (const { from, to } of shape.notches) {
      expect(distanceTo(shape.sew, from)).toBeLessThan(0.002);
      expect(distanceTo(shape.cut, to)).toBeLessThan(0.002);
    }
    const [on] = shape.notches.filter(({ outward }) => outward);
    expect(on).toEqual({ from: { x: 0, y: 0 }, to: { x: 40, y: 0 }, outward: true });
  });

  it('carries notches square from the sew line to the cut edge', () => {
    const notch = { id: 'n', edge: 'e0', distance: 120, outward: false, count: 1 };
    const sewn = resolvePanel(straightPanel(box(0, 0, 300, 200), { more: { notches: [notch] } }));
    expect(sewn.notches).toEqual([{ from: { x: 120, y: 0 }, to: { x: 120, y: -10 }, outward: false }]);
    const cut = resolvePanel(
      straightPanel(box(0, 0, 300, 200), {
        allowances: [0, 0, 0, 0],
        more: { drawn: 'cut', notches: [notch] }
      })
    );
    expect(cut.notches).toEqual([{ from: { x: 120, y: 3 }, to: { x: 120, y: 0 }, outward: false }]);
    const triple = resolvePanel(
      straightPanel(box(0, 0, 300, 200), { more: { notches: [{ ...notch, count: 3, distance: 2 }] } })
    );
    expect(triple.notches.map(({ from }) => from.x)).toEqual([0, 2, 8]);
  });

  it('joins the halves of a cut-out that lies on the fold', () => {
    const slit = (outline: Point[]) => ({
      from: outline[0]!,
      segments: [...outline.slice(1), outline[0]!].map((to) => ({ kind: 'line' as const, to }))
    });
    const shape = resolvePanel(half({ cutOuts: [slit(box(0, 100, 20, 150)), slit(box(60, 100, 80, 150))] }));
    expect(shape.cutOuts.map((ring) => area(ring))).toEqual([2000, 1000, 1000]);
    for (const ring of shape.cutOuts) expect(isSimple(ring)).toBe(true);
    expect(shape.cutOuts.every((ring) => locate(ring, shape.label) === 'outside')).toBe(true);
  });

  it('squares the seam that is sewn first on both halves alike, and on a panel drawn whole', () => {
    // The shoulder is shorter than the armhole: its allowance ends square.
    const whole = points([0, 0], [300, 0], [320, 200], [240, 260], [60, 260], [-20, 200]);
    const treatments = whole.map(() => 'square' as const);
    const shape = resolvePanel(straightPanel(whole, { treatments }));
    const mirrored = shape.cut.map(({ x, y }) => ({ x: 300 - x, y }));
    for (const p of mirrored) expect(distanceTo(shape.cut, p)).toBeLessThan(0.003);
  });

  it('flattens curves and keeps a circle its allowance', () => {
    const circle = arcPath({ centre: { x: 0, y: 0 }, rx: 100, ry: 100, start: 0, sweep: 2 * Math.PI });
    const panel: Panel = {
      ...straightPanel(box(0, 0, 1, 1)),
      edges: [{ id: 'rim', from: circle.from, segments: [...circle.segments], allowance: 15, role: 'seam' }],
      corners: [{ id: 'c', treatment: 'mitred' }],
      notches: [{ id: 'n', edge: 'rim', distance: 50 * Math.PI, outward: false, count: 1 }]
    };
    expect(panelSchema.safeParse(panel).success).toBe(true);
    const shape = resolvePanel(panel);
    for (const p of shape.sew) expect(Math.abs(Math.hypot(p.x, p.y) - 100)).toBeLessThan(0.051);
    for (const p of shape.cut) expect(Math.abs(Math.hypot(p.x, p.y) - 115)).toBeLessThan(0.1);
    expect(shape.notches[0]!.from.y).toBeCloseTo(100, 2);
    expect(shape.notches[0]!.to.y).toBeCloseTo(115, 1);
  });

  it('is simple, on the grid, counter-clockwise and around its sew line, for any outline', () => {
    fc.assert(
      fc.property(
        starOutline(20),
        fc.constantFrom('square', 'mitred', 'mirrored', 'blunt'),
        fc.array(fc.constantFrom(0, 6, 10, 15, 40), { minLength: 20, maxLength: 20 }),
        fc.record({ x: fc.integer({ min: -90, max: 90 }), y: fc.integer({ min: 21, max: 90 }) }),
        (outline, treatment, allowances, to) => {
          const shape = resolvePanel(
            straightPanel(outline, {
              allowances,
              treatments: outline.map(() => treatment as 'square'),
              more: { grain: { from: { x: 20, y: 20 }, to, confirmed: true } }
            })
          );
          expect(isSimple(shape.cut)).toBe(true);
          expect(area(shape.cut)).toBeGreaterThan(0);
          for (const p of [...shape.cut, ...shape.sew]) {
            expect(Math.round(p.x * 1000) / 1000).toBe(p.x);
            expect(Math.round(p.y * 1000) / 1000).toBe(p.y);
          }
          for (const p of shape.sew)
            expect(locate(shape.cut, p) !== 'outside' || distanceTo(shape.cut, p) < 0.002).toBe(true);
          expect(locate(shape.cut, shape.label)).toBe('inside');
        }
      ),
      { seed: 81, numRuns: runs(200) }
    );
  });
});

describe('a panel that can not be resolved', () => {
  it.each<[string, Panel, string, Point | null]>([
    [
      'crosses itself',
      straightPanel(points([0, 0], [100, 100], [100, 0], [0, 100])),
      'crosses',
      { x: 50, y: 50 }
    ],
    ['runs clockwise', straightPanel(box(0, 0, 100, 100).reverse()), 'clockwise', null],
    ['has no area', straightPanel(points([0, 0], [100, 0], [100, 0.001])), 'encloses', { x: 0, y: 0 }],
    [
      'has no grain line',
      straightPanel(box(0, 0, 100, 100), {
        more: { grain: { from: { x: 5, y: 5 }, to: { x: 5, y: 5 }, confirmed: true } }
      }),
      'grain line has no length',
      { x: 5, y: 5 }
    ],
    [
      'folds off grain',
      half({ grain: { from: { x: 60, y: 300 }, to: { x: 63, y: 60 }, confirmed: true } }),
      '0.72° off the grain line',
      { x: 0, y: 190 }
    ],
    [
      'reaches beyond its fold',
      straightPanel(points([0, 0], [200, 0], [200, 500], [-50, 450], [0, 380]), {
        allowances: [10, 10, 10, 10, 0],
        more: {
          fold: 'e4',
          symmetric: true,
          grain: { from: { x: 9, y: 300 }, to: { x: 9, y: 60 }, confirmed: true }
        }
      }),
      '50 mm beyond the line of its own fold',
      { x: -50, y: 450 }
    ],
    [
      'has a notch past its edge',
      straightPanel(box(0, 0, 100, 100), {
        more: { notches: [{ id: 'n', edge: 'e0', distance: 120, outward: false, count: 1 }] }
      }),
      'notch at 120 mm is past the end of edge e0, which is 100 mm long',
      { x: 100, y: 0 }
    ],
    [
      'is eaten by its allowances',
      straightPanel(box(0, 0, 100, 100), { allowances: [60, 10, 60, 10], more: { drawn: 'cut' } }),
      'leave no sew line',
      null
    ]
  ])('%s: is refused with place and measure', (_, panel, reason, place) => {
    try {
      resolvePanel(panel);
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(PanelFault);
      const fault = error as PanelFault;
      expect(fault.message).toContain(reason);
      expect(fault.finding.place).toEqual(place);
    }
  });
});
