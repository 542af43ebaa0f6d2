import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pathLength } from '$lib/geometry/path';
import { isSimple } from '$lib/geometry/polygon';
import { cutAlongLine, cutBetween, cutStraight } from '$lib/pattern/cut-panel';
import { addNotch, removeMark, setEdge, setGrain, setWords, slideNotch } from '$lib/pattern/edit-marks';
import {
  addPoint,
  deletePoint,
  mergeAtCorner,
  moveHandle,
  movePoint,
  outlinePoints,
  setStretch,
  splitEdge
} from '$lib/pattern/edit-points';
import type { Edited } from '$lib/pattern/edited';
import { flatEdges, outlineOfEdges } from '$lib/pattern/flat-edge';
import { joinPanels } from '$lib/pattern/join-panels';
import { cornerAngle, edgeLengths, panelArea, span } from '$lib/pattern/measure-panel';
import { closeOnFold, mirrorCopy, openOverFold } from '$lib/pattern/mirror-panel';
import { dartsOf, moveDart } from '$lib/pattern/move-dart';
import type { Panel } from '$lib/pattern/panel';
import { panelFindings } from '$lib/pattern/panel-check';
import { snapped } from '$lib/pattern/snapping';
import { waistcoat } from '$lib/server/demo/waistcoat';
import { runs } from '../../runs';
import { straightPanel } from './panels';

const front = waistcoat[0]!;
const square = straightPanel([
  { x: 0, y: 0 },
  { x: 200, y: 0 },
  { x: 200, y: 100 },
  { x: 0, y: 100 }
]);
/** A block with a waist dart between e0 and e3, its point at (100, 80). */
const darted = straightPanel([
  { x: 0, y: 0 },
  { x: 90, y: 0 },
  { x: 100, y: 80 },
  { x: 110, y: 0 },
  { x: 200, y: 0 },
  { x: 200, y: 160 },
  { x: 0, y: 160 }
]);
const folded: Panel = {
  ...front,
  edges: front.edges.map((edge, i) => (i === 5 ? { ...edge, role: 'fold' as const, allowance: 0 } : edge)),
  fold: front.edges[5]!.id,
  grain: { from: { x: 40, y: 200 }, to: { x: 40, y: 40 }, confirmed: true },
  paired: false,
  symmetric: true,
  howMany: 1
};

function made<T>(edited: Edited<T>): T {
  expect(edited.refused).toBeUndefined();
  return edited.made!;
}
const outline = (panel: Panel) => outlineOfEdges(flatEdges(panel, (p) => p));
const holds = (panel: Panel) => panelFindings(panel).every(({ severity }) => severity !== 'stops');
const ids = (panel: Panel) => panel.edges.map(({ id }) => id);
const total = (panel: Panel) => [...edgeLengths(panel).values()].reduce((sum, one) => sum + one, 0);

describe('points', () => {
  it('move with their handles, to the thousandth, and keep notches where they stand', () => {
    const corner = { edge: 'side', at: 0 };
    const moved = made(movePoint(front, corner, { x: 200.1234, y: 26 }));
    expect(moved.edges[1]!.from).toEqual({ x: 200.123, y: 26 });
    expect(ids(moved)).toEqual(ids(front));
    const notch = (panel: Panel) => panel.notches.find(({ edge }) => edge === 'armhole')!.distance;
    expect(notch(moved)).toBe(notch(front));
  });

  it('that would make the outline cross itself are refused with the place', () => {
    expect(movePoint(square, { edge: 'e2', at: 0 }, { x: -50, y: 50 }).refused).toMatch(/crosses/);
    expect(movePoint(square, { edge: 'e9', at: 0 }, { x: 0, y: 0 }).refused).toMatch(/no point 0 on edge e9/);
  });

  it('added change no line, and taken away again leave the curve within a hair', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.1, max: 0.9, noNaN: true }), (share) => {
        const length = edgeLengths(front).get('armhole')!;
        const added = made(addPoint(front, 'armhole', length * share));
        expect(edgeLengths(added).get('armhole')!).toBeCloseTo(length, 3);
        expect(outlinePoints(added)).toHaveLength(outlinePoints(front).length + 1);
        const again = made(deletePoint(added, { edge: 'armhole', at: 1 }));
        expect(Math.abs(edgeLengths(again).get('armhole')! - length)).toBeLessThan(0.01);
        expect(ids(again)).toEqual(ids(front));
      }),
      { numRuns: runs(20), seed: 11 }
    );
  });

  it('keep an outline simple or are refused, wherever they are dragged', () => {
    let refusals = 0;
    fc.assert(
      fc.property(
        fc.nat(outlinePoints(front).length - 1),
        fc.double({ min: -200, max: 400, noNaN: true }),
        fc.double({ min: -200, max: 700, noNaN: true }),
        (i, x, y) => {
          const edited = movePoint(front, outlinePoints(front)[i]!, { x, y });
          if (edited.refused !== undefined) {
            refusals++;
            expect(edited.refused.length).toBeGreaterThan(10);
          } else expect(holds(edited.made) && isSimple(outline(edited.made))).toBe(true);
        }
      ),
      { numRuns: runs(60), seed: 12 }
    );
    expect(refusals).toBeGreaterThan(0);
  });

  it('become curves and lines, and a handle keeps a smooth point smooth', () => {
    const curved = made(setStretch(square, 'e0', 0, 'cubic'));
    expect(edgeLengths(curved).get('e0')).toBeCloseTo(200, 6);
    const bowed = made(moveHandle(curved, { edge: 'e0', stretch: 0, handle: 'c1' }, { x: 60, y: -40 }));
    expect(panelArea(bowed)).toBeGreaterThan(panelArea(square));
    const split = made(addPoint(bowed, 'e0', 90));
    const turned = made(moveHandle(split, { edge: 'e0', stretch: 0, handle: 'c2' }, { x: 70, y: -30 }));
    const [a, b] = turned.edges[0]!.segments;
    if (a?.kind !== 'cubic' || b?.kind !== 'cubic') throw new Error('Both stretches are curves');
    const [u, v] = [span(a.c2, a.to), span(b.c1, a.to)];
    expect(Math.abs(Math.abs(u.angle - v.angle) - 180)).toBeLessThan(0.1);
    expect(made(setStretch(turned, 'e0', 0, 'line')).edges[0]!.segments[0]!.kind).toBe('line');
    expect(moveHandle(square, { edge: 'e0', stretch: 0, handle: 'c1' }, { x: 0, y: 0 }).refused).toMatch(
      /curve/
    );
  });

  it('become corners and back, notches counted on', () => {
    const notched = made(addNotch(square, 'e0', 150));
    const split = made(splitEdge(made(addPoint(notched, 'e0', 100)), { edge: 'e0', at: 1 }));
    expect(split.edges).toHaveLength(5);
    expect(split.notches[0]).toMatchObject({ edge: 'e0-2', distance: 50 });
    const merged = made(mergeAtCorner(split, 'e0-2'));
    expect(merged.notches[0]).toMatchObject({ edge: 'e0', distance: 150 });
    expect(merged.corners).toHaveLength(4);
  });

  it('snap to the level of a neighbour, square to it, to both, or to the grid', () => {
    const wishes = { grid: 10, square: true, level: true, reach: 4 };
    const at = { edge: 'e2', at: 0 };
    expect(snapped(square, at, { x: 203, y: 98 }, wishes).point).toEqual({ x: 200, y: 100 });
    expect(snapped(square, at, { x: 243, y: 71 }, wishes)).toEqual({
      point: { x: 240, y: 70 },
      to: ['grid']
    });
    const slanted = made(movePoint(square, { edge: 'e1', at: 0 }, { x: 220, y: -30 }));
    const near = snapped(slanted, { edge: 'e2', at: 0 }, { x: 234, y: 73 }, { ...wishes, level: false });
    expect(near.to).toEqual(['square']);
    expect(cornerAngle(made(movePoint(slanted, { edge: 'e2', at: 0 }, near.point)), 'e1')).toBeCloseTo(90, 2);
  });
});

describe('marks', () => {
  it('slide along their edge by a distance and are refused past its end', () => {
    const one = made(addNotch(square, 'e0', 50, 2));
    const slid = made(slideNotch(one, 'notch', 12.5));
    expect(slid.notches[0]!.distance).toBe(62.5);
    expect(slideNotch(slid, 'notch', 200).refused).toMatch(/200\.0 mm long; 262\.5 mm/);
    expect(made(removeMark(slid, 'notches', 'notch')).notches).toEqual([]);
    expect(removeMark(slid, 'notches', 'other').refused).toMatch(/no such mark/);
  });

  it('refuse an allowance on the fold and a grain off it', () => {
    expect(setEdge(folded, folded.fold!, { allowance: 10 }).refused).toMatch(/fold/);
    expect(setGrain(folded, { x: 0, y: 0 }, { x: 50, y: 50 }).refused).toMatch(/off the grain/);
    expect(made(setEdge(front, 'hem', { allowance: 40, role: 'hem' })).edges[0]).toMatchObject({
      allowance: 40,
      role: 'hem'
    });
    expect(setWords(front, { name: '' }).refused).toBeTruthy();
  });
});

describe('cutting and joining', () => {
  const choice = { allowance: 15, id: 'second', name: 'Second' };
  // Flattening curves by themselves or whole differs by up to 0.05 mm: 2 mm² of 900 cm².
  it('keep the area, the ids and the marks, wherever the cut runs', () => {
    let cuts = 0;
    fc.assert(
      fc.property(
        fc.double({ min: 20, max: 480, noNaN: true }),
        fc.double({ min: 20, max: 480, noNaN: true }),
        (y1, y2) => {
          const cut = cutStraight(front, { x: 40, y: y1 }, { x: 120, y: y2 }, choice);
          if (cut.refused !== undefined) return;
          const [a, b] = cut.made;
          cuts++;
          expect(Math.abs(panelArea(a) + panelArea(b) - panelArea(front))).toBeLessThan(2);
          expect(a.notches.length + b.notches.length).toBe(front.notches.length);
          expect(a.drillHoles.length + b.drillHoles.length).toBe(front.drillHoles.length);
          const edge = a.edges.find(({ id }) => id === 'cut')!;
          expect(edge.allowance).toBe(15);
          expect(edgeLengths(b).get('cut')).toBeCloseTo(edgeLengths(a).get('cut')!, 6);
          const joined = made(joinPanels(a, 'cut', b, 'cut'));
          expect(Math.abs(panelArea(joined) - panelArea(front))).toBeLessThan(2);
          expect(total(joined)).toBeCloseTo(total(front), 1);
          expect(new Set(ids(joined))).toEqual(new Set(ids(front)));
          expect(joined.notches).toHaveLength(front.notches.length);
        }
      ),
      { numRuns: runs(25), seed: 13 }
    );
    expect(cuts).toBeGreaterThan(10);
  });

  it('follow a drawn line and refuse one that ends inside', () => {
    const line = (y: number) => ({
      id: 'style',
      path: {
        from: { x: 0, y },
        segments: [
          { kind: 'cubic' as const, c1: { x: 60, y: 90 }, c2: { x: 140, y: 10 }, to: { x: 200, y: 50 } }
        ]
      },
      note: ''
    });
    const [a, b] = made(cutAlongLine({ ...square, internalLines: [line(50)] }, 'style', choice));
    expect(panelArea(a) + panelArea(b)).toBeCloseTo(20000, 0);
    expect(edgeLengths(a).get('cut')).toBeGreaterThan(200);
    const short = { ...line(50), path: { ...line(50).path, from: { x: 20, y: 50 } } };
    expect(cutAlongLine({ ...square, internalLines: [short] }, 'style', choice).refused).toMatch(
      /20\.0 mm inside/
    );
  });

  it('make a pair of what leaves the fold', () => {
    const [on, off] = made(cutStraight(folded, { x: 60, y: 20 }, { x: 62, y: 480 }, choice));
    expect(on.fold).toBe(folded.fold);
    expect(off).toMatchObject({ fold: null, paired: true, howMany: 2, symmetric: false });
  });

  it('refuse to join edges that do not lie on each other', () => {
    expect(joinPanels(front, 'armhole', { ...square, id: 'x' }, 'e0').refused).toMatch(/true the seam first/);
    expect(
      cutBetween(square, { edge: 'e0', distance: 50 }, { edge: 'e0', distance: 50 }, null, choice).refused
    ).toBeTruthy();
  });
});

describe('darts', () => {
  const beside = (panel: Panel) => ['e0', 'e3', 'e4'].map((id) => edgeLengths(panel).get(id)!);
  it('are found by their point between two legs', () => {
    expect(dartsOf(darted)).toHaveLength(1);
    expect(dartsOf(darted)[0]).toMatchObject({ tip: { edge: 'e2', at: 0 }, intake: 20 });
    expect(dartsOf(square)).toEqual([]);
  });

  it('moved keep the lengths beside them, the area but for the new shape, and their angle', () => {
    fc.assert(
      fc.property(
        fc.constantFrom('e4', 'e5'),
        fc.double({ min: 0.2, max: 0.8, noNaN: true }),
        (edge, share) => {
          const length = edgeLengths(darted).get(edge)!;
          const moved = made(moveDart(darted, { edge: 'e2', at: 0 }, { edge, distance: length * share }));
          const now = edgeLengths(moved);
          expect(now.get('e0')).toBeCloseTo(90, 2);
          expect(now.get('e3')).toBeCloseTo(90, 2);
          expect(now.get(edge)! + (now.get(`${edge}-2`) ?? 0)).toBeCloseTo(length, 2);
          expect(now.get('e1')).toBeCloseTo(now.get('e2')!, 2);
          expect(panelArea(moved)).toBeCloseTo(panelArea(darted), 0);
          const [dart] = dartsOf(moved);
          expect(dart!.angle).toBeCloseTo(dartsOf(darted)[0]!.angle, 1);
        }
      ),
      { numRuns: runs(20), seed: 14 }
    );
    expect(beside(darted)).toHaveLength(3);
  });

  it('carry the notches of the part that turns, and refuse where there is no dart', () => {
    const notched = made(addNotch(darted, 'e3', 30));
    const moved = made(moveDart(notched, { edge: 'e2', at: 0 }, { edge: 'e5', distance: 100 }));
    expect(moved.notches[0]).toMatchObject({ edge: 'e3', distance: 30 });
    expect(moveDart(square, { edge: 'e0', at: 0 }, { edge: 'e1', distance: 10 }).refused).toMatch(/no dart/);
  });
});

describe('mirroring', () => {
  it('twice gives the same panel', () => {
    for (const panel of waistcoat.filter(({ fold }) => fold === null)) {
      const once = made(mirrorCopy(panel, 'other', 'Other'));
      expect(once.hand).not.toBe(panel.hand);
      expect(Math.abs(panelArea(once) - panelArea(panel))).toBeLessThan(2);
      const twice = made(mirrorCopy(once, panel.id, panel.name));
      // Edges may begin at another one of the ring.
      expect(new Set(ids(twice))).toEqual(new Set(ids(panel)));
      for (const edge of panel.edges) {
        const again = twice.edges.find(({ id }) => id === edge.id)!;
        expect(again.from.x).toBeCloseTo(edge.from.x, 2);
        expect(again.from.y).toBeCloseTo(edge.from.y, 2);
        const corner = (one: Panel) => one.corners[one.edges.findIndex(({ id }) => id === edge.id)]!.id;
        expect(corner(twice)).toBe(corner(panel));
      }
      twice.notches.forEach(({ distance }, i) => expect(distance).toBeCloseTo(panel.notches[i]!.distance, 2));
    }
  });

  it('over the fold and back gives the half again, under its own ids', () => {
    const whole = made(openOverFold(folded));
    expect(panelArea(whole)).toBeCloseTo(2 * panelArea(folded), 0);
    expect(whole.notches).toHaveLength(2 * folded.notches.length);
    const first = whole.edges[0]!.id;
    const image = whole.edges[folded.edges.length - 1]!.id;
    const half = made(closeOnFold(whole, first, image));
    expect(new Set(ids(half))).toEqual(new Set(ids(folded)));
    expect(half.fold).toBe(folded.fold);
    expect(panelArea(half)).toBeCloseTo(panelArea(folded), 1);
    expect(half.notches).toEqual(folded.notches);
    expect(half.drillHoles).toHaveLength(folded.drillHoles.length);
  });

  it('refuses halves that are no images of each other', () => {
    const whole = made(openOverFold(folded));
    const bent = made(movePoint(whole, { edge: 'side', at: 0 }, { x: 210, y: 30 }));
    const image = whole.edges[folded.edges.length - 1]!.id;
    expect(closeOnFold(bent, whole.edges[0]!.id, image).refused).toMatch(/leave each other by/);
  });
});

it('measures from place to place, corners and edges', () => {
  expect(span({ x: 0, y: 0 }, { x: 30, y: 40 })).toMatchObject({ length: 50, along: 30, up: 40 });
  expect(cornerAngle(square, 'e1')).toBeCloseTo(90, 9);
  expect(cornerAngle(darted, 'e2')).toBeGreaterThan(180);
  expect(pathLength({ from: front.edges[1]!.from, segments: front.edges[1]!.segments })).toBe(
    edgeLengths(front).get('side')
  );
});
